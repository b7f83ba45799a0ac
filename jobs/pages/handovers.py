"""Handovers: stakes given to a company, and its answer."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from jobs.actions.handovers import answer_handover, hand_over
from jobs.forms.days import AnswerHandoverForm, HandOverForm
from jobs.models import Handover, Request
from jobs.pages.answer import answer, sent
from jobs.queries.companies import companies_seen
from jobs.queries.requests import standings
from stakes.can import Asked, Can, needs
from stakes.models import Mark


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
    context = {"one": one, "marks": standings(asked.record, one.listed)}
    return render(request, "jobs/handover.html", context)


@needs(Can.HAND_OVER)
def handover_make(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    ask = _asked_for(request)
    form = HandOverForm(
        sent(request), record=asked.record, initial=_initial(asked, ask)
    )
    made: list[UUID] = []

    def do() -> None:
        visit = _key(request.GET.get("visit", ""))
        made.append(
            hand_over(
                record=asked.record,
                ask=ask.key if ask else None,
                visit=visit or (ask.visit if ask else None),
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
        title="Hand stakes over",
        lead="Show each stake and what it refers to. Offsets are measured level.",
        verb="Record the handover",
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


def _initial(asked: Asked, ask: Request | None) -> dict[str, str]:
    if ask is None:
        return {}
    marks = Mark.objects.filter(record=asked.record, key__in=ask.listed)
    labels = ", ".join(marks.order_by("label").values_list("label", flat=True))
    return {"company": ask.company, "listed": labels}


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
            by=asked.by,
        ),
        to=_to(job, handover),
        said="Your answer is recorded.",
        title="Stakes handed over to you",
        lead=f"{len(one.listed)} stakes, given by {one.given_by}.",
        verb="Record the answer",
    )
