"""Tolerance classes of a job: add one, write one anew, take one out."""

from __future__ import annotations

import uuid
from collections.abc import Callable
from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.urls import reverse

from jobs.actions.terms import set_tolerance_classes
from jobs.forms.terms import TermForm, ToleranceForm, from_class
from jobs.kinds.terms import ToleranceClass
from jobs.pages.answer import answer, sent
from jobs.queries.terms import terms_at, today
from stakes.can import Can, needs

SAID = "Set. It stands in the record with the day it counts from."


@needs(Can.PLAN)
def tolerance_add(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    form = ToleranceForm(
        sent(request),
        initial={"effective": today(record), "grade": 1, "rule": "simple acceptance"},
        unit=record.length_unit,
    )

    def changed() -> tuple[ToleranceClass, ...]:
        return (*_classes(request), form.tolerance(uuid.uuid4()))

    return _set(request, form, changed, "Add a tolerance class", "Add")


@needs(Can.PLAN)
def tolerance_change(request: HttpRequest, job: str, tolerance: UUID) -> HttpResponse:
    record = request.asked.record
    one = _one(request, tolerance)
    form = ToleranceForm(
        sent(request),
        initial={"effective": today(record), **from_class(one)},
        unit=record.length_unit,
    )

    def changed() -> tuple[ToleranceClass, ...]:
        anew = form.tolerance(tolerance)
        return tuple(anew if c.key == tolerance else c for c in _classes(request))

    ids = {"job": job, "tolerance": tolerance}
    out = (reverse("jobs:tolerance-remove", kwargs=ids), "Take this class out")
    return _set(
        request, form, changed, f"Tolerance class {one.name}", "Set it", other=out
    )


@needs(Can.PLAN)
def tolerance_remove(request: HttpRequest, job: str, tolerance: UUID) -> HttpResponse:
    one = _one(request, tolerance)
    form = TermForm(sent(request), initial={"effective": today(request.asked.record)})

    def changed() -> tuple[ToleranceClass, ...]:
        return tuple(c for c in _classes(request) if c.key != tolerance)

    return _set(request, form, changed, f"Take out {one.name}", "Take it out")


def _classes(request: HttpRequest) -> tuple[ToleranceClass, ...]:
    record = request.asked.record
    return terms_at(record, today(record)).classes


def _one(request: HttpRequest, key: UUID) -> ToleranceClass:
    found = next((c for c in _classes(request) if c.key == key), None)
    if found is None:
        raise Http404("There is no such tolerance class on this job.")
    return found


def _set(
    request: HttpRequest,
    form: TermForm,
    changed: Callable[[], tuple[ToleranceClass, ...]],
    title: str,
    verb: str,
    **more: object,
) -> HttpResponse:
    asked = request.asked

    def act() -> None:
        set_tolerance_classes(
            record=asked.record,
            classes=changed(),
            effective=form.cleaned_data["effective"],
            by=asked.by,
        )

    return answer(
        request,
        form,
        act,
        to=reverse("jobs:terms", kwargs={"job": asked.record.number}),
        said=SAID,
        title=title,
        verb=verb,
        **more,
    )
