"""Holds: sent, read, acknowledged, lifted."""

from __future__ import annotations

from datetime import datetime
from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from jobs.actions.holds import (
    NEUTRAL_WORDS,
    has_heard,
    hear_hold,
    lift_hold,
    send_hold,
)
from jobs.forms.asking import labels_of
from jobs.forms.holds import HoldForm, LiftForm, TellForm
from jobs.models import Company, Hold
from jobs.pages.answer import answer, do, sent
from jobs.queries.companies import companies_seen
from jobs.queries.holders import holders
from jobs.queries.proposals import proposal
from jobs.queries.requests import standings
from stakes.can import Asked, Can, needs

MOST_IN_ADDRESS = 150
"""Marks an address can carry; more are added to the form by their numbers."""


def holds_seen(asked: Asked) -> list[Hold]:
    """All holds of a job, or those sent to the reader's own company."""
    found = Hold.objects.filter(record=asked.record).order_by("-sent_at")
    companies = companies_seen(asked)
    if companies is None:
        return list(found)
    return [hold for hold in found if companies & set(hold.companies)]


def _one(asked: Asked, hold: UUID) -> Hold:
    one = next((h for h in holds_seen(asked) if h.key == hold), None)
    if one is None:
        raise Http404
    return one


def _to(job: str, hold: UUID) -> str:
    return reverse("jobs:hold", kwargs={"job": job, "hold": hold})


@needs(Can.SEE_HOLDS)
def holds(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    found = holds_seen(asked)
    context = {
        "in_force": [h for h in found if not h.lifted_at],
        "lifted": [h for h in found if h.lifted_at],
    }
    # The doubts of the firm's own work are the firm's to weigh first.
    if asked.can(Can.READ_RECORD) and (proposed := proposal(asked.record)):
        marks = "&".join(f"mark={view.key}" for view in proposed.all[:MOST_IN_ADDRESS])
        context |= {"proposed": proposed, "query": marks}
    return render(request, "jobs/holds.html", context)


@needs(Can.SEND_HOLD)
def hold_send(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    keys = []
    for text in request.GET.getlist("mark")[:200]:
        try:
            keys.append(UUID(text))
        except ValueError:
            continue
    initial = {"listed": labels_of(asked.record, keys), "words": NEUTRAL_WORDS}
    form = HoldForm(sent(request), record=asked.record, initial=initial)
    made: list[UUID] = []
    return answer(
        request,
        form,
        lambda: made.append(
            send_hold(record=asked.record, by=asked.by, **form.cleaned_data)
        ),
        to=lambda: _to(job, made[0]),
        said="The hold is sent. Ring the holders below as well.",
        title="Send a hold",
        lead="It goes to every company these stakes were handed over to.",
        verb="Send it",
    )


@needs(Can.SEE_HOLDS)
def hold_page(request: HttpRequest, job: str, hold: UUID) -> HttpResponse:
    asked = request.asked
    one = _read(asked, _one(asked, hold))
    own = companies_seen(asked)
    told = [
        {**h, "when": datetime.fromisoformat(h["at"])}
        for h in one.heard
        if own is None or h["company"] in own
    ]
    context = {
        "one": one,
        "marks": standings(asked.record, one.listed),
        "holders": holders(asked.record, map(UUID, one.listed)) if own is None else [],
        "heard": told,
        "answered": any(
            h["how"] == "acknowledged" and h["company"] == asked.company
            for h in one.heard
        ),
    }
    return render(request, "jobs/hold.html", context)


def _read(asked: Asked, one: Hold) -> Hold:
    """That a holder opened the hold is part of the record: who knew what, when."""
    whom = asked.by.name
    holds_it = asked.can(Can.ACKNOWLEDGE) and asked.company in one.companies
    if not holds_it or one.lifted_at or has_heard(one, "read", asked.company, whom):
        return one
    company = Company.objects.get(pk=asked.company)
    hear_hold(
        record=asked.record,
        hold=one.key,
        how="read",
        company=str(company.pk),
        company_name=company.name,
        by_whom=whom,
        by=asked.by,
    )
    return _one(asked, one.key)


@needs(Can.HAND_OVER)
def hold_tell(request: HttpRequest, job: str, hold: UUID) -> HttpResponse:
    """A holder was rung up: who of which company heard it."""
    asked, one = request.asked, _one(request.asked, hold)
    form = TellForm(sent(request), companies=one.companies)

    def do() -> None:
        said = dict(form.cleaned_data)
        company = said.pop("company")
        hear_hold(
            record=asked.record,
            hold=one.key,
            how="told",
            company=str(company.pk),
            company_name=company.name,
            by=asked.by,
            **said,
        )

    return answer(
        request,
        form,
        do,
        to=_to(job, hold),
        said="It is recorded who was told.",
        title="Told by telephone",
        lead="Whoever holds stakes of this hold and was told of it.",
        verb="Record it",
    )


@needs(Can.ACKNOWLEDGE)
def hold_acknowledge(request: HttpRequest, job: str, hold: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, hold)
    if request.method != "POST":
        return hold_page(request, job, hold)
    company = Company.objects.get(pk=asked.company)
    return do(
        request,
        lambda: hear_hold(
            record=asked.record,
            hold=one.key,
            how="acknowledged",
            company=str(company.pk),
            company_name=company.name,
            by_whom=asked.by.name,
            by=asked.by,
        ),
        to=_to(job, hold),
        said="Thank you. It is recorded that you read it.",
    )


@needs(Can.SEND_HOLD)
def hold_lift(request: HttpRequest, job: str, hold: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, hold)
    initial = {"listed": labels_of(asked.record, one.in_force)}
    form = LiftForm(sent(request), record=asked.record, initial=initial)
    return answer(
        request,
        form,
        lambda: lift_hold(
            record=asked.record, hold=one.key, by=asked.by, **form.cleaned_data
        ),
        to=_to(job, hold),
        said="The hold is lifted for these marks.",
        title="Lift the hold",
        lead="Leave out the marks it stays in force for.",
        verb="Lift it",
    )
