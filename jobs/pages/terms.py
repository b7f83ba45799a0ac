"""Terms of a job: as they stand, as they stood, and setting them anew."""

from __future__ import annotations

from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from geometry.units import Unit
from jobs.actions.terms import (
    set_frame,
    set_hold_time,
    set_notice_rule,
    set_restake_terms,
    set_unit_and_zone,
)
from jobs.forms.notice import DAYS, from_rule
from jobs.forms.terms import (
    FrameForm,
    HoldTimeForm,
    NoticeForm,
    RestakeForm,
    UnitAndZoneForm,
    from_payers,
)
from jobs.pages.answer import answer, sent
from jobs.queries.companies import companies_seen
from jobs.queries.seats import companies_of
from jobs.queries.terms import settings_seen, terms_at, today
from stakes.can import Asked, Can, needs

SAID = "Set. It stands in the record with the day it counts from."


@needs(Can.READ)
def terms(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    own = "" if companies_seen(asked) is None else asked.company
    now = terms_at(asked.record, today(asked.record), company=own)
    days = now.notice_rule.weekdays if now.notice_rule else ()
    context = {
        "terms": now,
        "settings": settings_seen(asked),
        "weekdays": ", ".join(name for number, name in DAYS if number in days),
        "minutes": int(now.hold_time.total_seconds()) // 60,
    }
    return render(request, "jobs/terms.html", context)


@needs(Can.TERMS)
def unit_set(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    form = UnitAndZoneForm(
        sent(request),
        initial=_from_now(record, unit=record.unit, zone=record.zone),
    )

    def act() -> None:
        said = dict(form.cleaned_data)
        said["unit"] = Unit(said["unit"])
        set_unit_and_zone(record=record, by=request.asked.by, **said)

    return _set(request, form, act, "Unit and time zone")


@needs(Can.TERMS)
def frame_set(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    now = terms_at(record, today(record)).frame
    form = FrameForm(
        sent(request),
        initial=_from_now(
            record,
            frame=now.frame if now else "",
            combined_factor=now.combined_factor if now else "",
        ),
    )

    def act() -> None:
        set_frame(record=record, by=request.asked.by, **form.cleaned_data)

    return _set(request, form, act, "Coordinate frame")


@needs(Can.TERMS)
def notice_set(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    now = terms_at(record, today(record)).notice
    started = from_rule(now.rule if now else None)
    form = NoticeForm(
        sent(request),
        initial=_from_now(record, **started, source=now.source if now else ""),
    )

    def act() -> None:
        set_notice_rule(
            record=record,
            rule=form.rule(),
            source=form.cleaned_data["source"],
            effective=form.cleaned_data["effective"],
            by=request.asked.by,
        )

    return _set(request, form, act, "Notice")


@needs(Can.TERMS)
def restake_set(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    now = terms_at(record, today(record)).restake
    form = RestakeForm(
        sent(request),
        initial=_from_now(record, **from_payers(now.payers if now else ())),
        companies=companies_of(record),
    )

    def act() -> None:
        set_restake_terms(
            record=record,
            payers=form.payers(),
            price=form.cleaned_data["price"],
            company=form.cleaned_data["company"],
            effective=form.cleaned_data["effective"],
            by=request.asked.by,
        )

    return _set(
        request,
        form,
        act,
        "Who pays to set stakes again",
        template="jobs/restake.html",
    )


@needs(Can.TERMS)
def hold_time_set(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    now = terms_at(record, today(record)).hold_time
    minutes = int(now.total_seconds()) // 60
    form = HoldTimeForm(sent(request), initial=_from_now(record, minutes=minutes))

    def act() -> None:
        set_hold_time(record=record, by=request.asked.by, **form.cleaned_data)

    return _set(request, form, act, "How long a proposed hold waits")


def _from_now(record: Any, **started: Any) -> dict[str, Any]:
    return {"effective": today(record), **started}


def _set(
    request: HttpRequest, form: Any, act: Any, title: str, **more: Any
) -> HttpResponse:
    return answer(
        request,
        form,
        act,
        to=reverse("jobs:terms", kwargs={"job": request.asked.record.number}),
        said=SAID,
        title=title,
        verb="Set it",
        **more,
    )
