"""Handovers: stakes given to a company, and its answer."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from jobs.actions.handovers import answer_handover, hand_over
from jobs.forms.asking import labels_of
from jobs.forms.handovers import AnswerHandoverForm, HandOverForm
from jobs.kinds.handovers import HandedOver
from jobs.models import Handover, Request, Visit
from jobs.pages.answer import answer, sent
from jobs.queries.companies import companies_seen
from jobs.queries.readiness import lacking
from jobs.queries.requests import requests_seen, standings
from stakes.can import Asked, Can, needs
from stakes.record import entries


def handovers_seen(asked: Asked):
    """All handovers of a job, or those to the reader's own company."""
    found = Handover.objects.filter(record=asked.record).order_by("-given_at")
    companies = companies_seen(asked)
    return found if companies is None else found.filter(company__in=companies)


def _one(asked: Asked, handover: UUID) -> Handover:
    one = handovers_seen(asked).filter(key=handover).first()
    if one is None:
        raise Http404
    return one


def _to(job: str, handover: UUID) -> str:
    return reverse("jobs:handover", kwargs={"job": job, "handover": handover})


@needs(Can.READ)
def handovers(request: HttpRequest, job: str) -> HttpResponse:
    context = {"handovers": list(handovers_seen(request.asked))}
    return render(request, "jobs/handovers.html", context)


@needs(Can.READ)
def handover_page(request: HttpRequest, job: str, handover: UUID) -> HttpResponse:
    asked = request.asked
    one = _one(asked, handover)
    context = {
        "one": one,
        "marks": standings(asked.record, one.listed),
        "explained": _explained(asked, one),
        "opens": requests_seen(asked).filter(key=one.ask).exists(),
        # The firm's own office does not acknowledge for a company.
        "answers": asked.can(Can.SIGN) and not one.answer,
    }
    return render(request, "jobs/handover.html", context)


def _explained(asked: Asked, one: Handover) -> tuple[str, ...]:
    said = entries(asked.record, thing="handover", key=one.key)
    given = next((c.fact for c in said if isinstance(c.fact, HandedOver)), None)
    return given.explained if given else ()


@needs(Can.HAND_OVER)
def handover_make(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    ask, visit = _asked_for(request), _visit_of(request)
    listed = ask.listed if ask else _marks_of(visit)
    initial = {"listed": labels_of(asked.record, listed)}
    if ask:
        initial["company"] = ask.company
    form = HandOverForm(sent(request), record=asked.record, initial=initial)
    made: list[UUID] = []

    def do() -> None:
        made.append(
            hand_over(
                record=asked.record,
                ask=ask.key if ask else None,
                visit=visit.key if visit else (ask.visit if ask else None),
                by=asked.by,
                **form.cleaned_data,
            )
        )

    return answer(
        request,
        form,
        do,
        to=lambda: _to(job, made[0]),
        said="Handed over. Their duty to preserve the stakes begins here.",
        template="jobs/handover_make.html",
        back=reverse("jobs:handovers", kwargs={"job": job}),
        body_class="" if asked.can(Can.PLAN) else "field",
        ask=ask,
        visit=visit,
        lacking=lacking(asked.record, [UUID(m) for m in listed]) if listed else [],
    )


def _key(text: str) -> UUID | None:
    try:
        return UUID(text)
    except ValueError:
        return None


def _asked_for(request: HttpRequest) -> Request | None:
    key = _key(request.GET.get("ask", ""))
    record = request.asked.record
    return Request.objects.filter(record=record, key=key).first() if key else None


def _visit_of(request: HttpRequest) -> Visit | None:
    key = _key(request.GET.get("visit", ""))
    record = request.asked.record
    return Visit.objects.filter(record=record, key=key).first() if key else None


def _marks_of(visit: Visit | None) -> list[str]:
    tasks = visit.tasks if visit else []
    return list(dict.fromkeys(m for task in tasks for m in task.get("listed", [])))


@needs(Can.SIGN)
def handover_answer(request: HttpRequest, job: str, handover: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, handover)
    form = AnswerHandoverForm(sent(request))
    return answer(
        request,
        form,
        lambda: answer_handover(
            record=asked.record,
            handover=one.key,
            acknowledged=form.cleaned_data["acknowledged"] == "yes",
            words=form.cleaned_data["words"],
            key=form.cleaned_data["key"],
            by=asked.by,
        ),
        to=_to(job, handover),
        said="Your answer is recorded.",
        title="Stakes handed over to you",
        lead=f"{len(one.listed)} stakes, given by {one.given_by}.",
        verb="Record the answer",
    )
