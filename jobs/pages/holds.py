"""Holds: sent, read, acknowledged, lifted."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from jobs.actions.holds import NEUTRAL_WORDS, hear_hold, lift_hold, send_hold
from jobs.forms.days import HoldForm, LiftForm
from jobs.models import Company, Hold
from jobs.pages.answer import answer, do, sent
from jobs.queries.companies import companies_seen
from jobs.queries.holders import holders
from jobs.queries.requests import standings
from stakes.can import Asked, Can, needs
from stakes.models import Mark
from stakes.queries.drawing import in_order
from stakes.queries.state import job_state
from stakes.standing.marks import Trust


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
        "proposed": _proposed(asked),
    }
    return render(request, "jobs/holds.html", context)


def _proposed(asked: Asked) -> dict | None:
    """What is in question and under no hold yet; built from it first, then handed over."""
    if not asked.can(Can.READ_RECORD):
        return None
    doubtful = (Trust.IN_QUESTION, Trust.FAILED)
    views = [
        view
        for view in in_order(job_state(asked.record).marks.values())
        if view.trust.trust in doubtful
        and view.stake is not None
        and not view.state.held
        and not view.plan.is_control
    ]
    if not views:
        return None
    return {
        "built": [v for v in views if v.stake and v.stake.built_from],
        "given": [v for v in views if v.stake and v.stake.handed_over],
        "all": views,
        "holders": holders(asked.record, [v.key for v in views]),
        "query": "&".join(f"mark={v.key}" for v in views[:100]),
    }


@needs(Can.SEND_HOLD)
def hold_send(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    keys = []
    for text in request.GET.getlist("mark")[:200]:
        try:
            keys.append(UUID(text))
        except ValueError:
            continue
    marks = Mark.objects.filter(record=asked.record, key__in=keys).order_by("label")
    initial = {
        "listed": ", ".join(marks.values_list("label", flat=True)),
        "words": NEUTRAL_WORDS,
    }
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
    one = _one(asked, hold)
    own = companies_seen(asked)
    told = [h for h in one.heard if own is None or h["company"] in own]
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
    marks = Mark.objects.filter(record=asked.record, key__in=one.in_force)
    labels = ", ".join(marks.order_by("label").values_list("label", flat=True))
    form = LiftForm(sent(request), record=asked.record, initial={"listed": labels})
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
