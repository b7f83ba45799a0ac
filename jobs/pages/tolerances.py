"""Tolerance classes of a job: add one, write one anew, take one out."""

from __future__ import annotations

import uuid
from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.urls import reverse

from geometry.decide import Rule
from jobs.actions.terms import keep_tolerance_class, take_out_tolerance_class
from jobs.forms.terms import TermForm, ToleranceForm, from_class
from jobs.kinds.terms import ToleranceClass
from jobs.pages.answer import answer, sent
from jobs.queries.terms import terms_at, today
from stakes.can import Can, needs

SAID = "Set. It stands in the record with the day it counts from."


@needs(Can.PLAN)
def tolerance_add(request: HttpRequest, job: str) -> HttpResponse:
    form = ToleranceForm(
        sent(request),
        initial={"grade": 1, "rule": Rule.SIMPLE, **_from_today(request)},
        unit=request.asked.record.length_unit,
    )
    return _keep(request, form, uuid.uuid4(), title="Add a tolerance class", verb="Add")


@needs(Can.PLAN)
def tolerance_change(request: HttpRequest, job: str, tolerance: UUID) -> HttpResponse:
    one = _one(request, tolerance)
    form = ToleranceForm(
        sent(request),
        initial={**from_class(one), **_from_today(request)},
        unit=request.asked.record.length_unit,
    )
    ids = {"job": job, "tolerance": tolerance}
    out = (reverse("jobs:tolerance-remove", kwargs=ids), "Take this class out")
    title = f"Tolerance class {one.name}"
    return _keep(request, form, tolerance, title=title, verb="Set it", other=out)


@needs(Can.PLAN)
def tolerance_remove(request: HttpRequest, job: str, tolerance: UUID) -> HttpResponse:
    one = _one(request, tolerance)
    form = TermForm(sent(request), initial=_from_today(request))
    return answer(
        request,
        form,
        lambda: take_out_tolerance_class(
            record=request.asked.record,
            key=tolerance,
            by=request.asked.by,
            **form.cleaned_data,
        ),
        to=_terms(job),
        said=SAID,
        title=f"Take out {one.name}",
        verb="Take it out",
    )


def _keep(
    request: HttpRequest, form: ToleranceForm, key: UUID, **more: object
) -> HttpResponse:
    asked = request.asked
    return answer(
        request,
        form,
        lambda: keep_tolerance_class(
            record=asked.record,
            tolerance=form.tolerance(key),
            effective=form.cleaned_data["effective"],
            by=asked.by,
        ),
        to=_terms(asked.record.number),
        said=SAID,
        **more,
    )


def _one(request: HttpRequest, key: UUID) -> ToleranceClass:
    record = request.asked.record
    standing = terms_at(record, today(record)).classes
    found = next((c for c in standing if c.key == key), None)
    if found is None:
        raise Http404("There is no such tolerance class on this job.")
    return found


def _from_today(request: HttpRequest) -> dict[str, object]:
    return {"effective": today(request.asked.record)}


def _terms(job: str) -> str:
    return reverse("jobs:terms", kwargs={"job": job})
