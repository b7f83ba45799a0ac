"""Requests: make one, its receipt and its course, decide it."""

from __future__ import annotations

from uuid import UUID

from django.contrib import messages
from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from jobs.actions import requests as act
from jobs.forms.asking import labels_of
from jobs.forms.requests import (
    AcceptForm,
    CostForm,
    ReasonForm,
    RequestForm,
    WordsForm,
)
from jobs.models import Company, Request, Visit
from jobs.pages.answer import SeeOther, answer, sent
from jobs.queries.companies import companies_seen, sees_all_companies
from jobs.queries.requests import may_answer_cost, requests_seen, standings, told
from jobs.queries.seats import office
from jobs.queries.terms import terms_at, today
from jobs.rights import SEATED, Role
from stakes.actions.photos import keep
from stakes.can import Asked, Can, needs
from stakes.pages.field.photos import image


@needs(Can.READ)
def requests(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    found = list(requests_seen(asked))
    context = {
        "open": [r for r in found if r.state in act.OPEN],
        "done": [r for r in found if r.state not in act.OPEN],
    }
    return render(request, "jobs/requests.html", context)


def _one(asked: Asked, ask: UUID) -> Request:
    one = requests_seen(asked).filter(key=ask).first()
    if one is None:
        raise Http404
    return one


def _to(job: str, ask: UUID) -> str:
    return reverse("jobs:request", kwargs={"job": job, "ask": ask})


def _askers(asked: Asked):
    """Whom the office may ask for; a contractor asks for the own company."""
    if not sees_all_companies(asked):
        return None
    kinds = [kind for kind, roles in SEATED.items() if Role.CONTRACTOR in roles]
    seated = asked.record.seats.values("company")
    return Company.objects.filter(pk__in=seated, kind__in=kinds)


@needs(Can.REQUEST)
def request_make(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    keys = _keys(request.GET.getlist("mark"))
    initial = {"listed": labels_of(asked.record, keys)}
    form = RequestForm(
        sent(request),
        request.FILES or None,
        record=asked.record,
        companies=_askers(asked),
        initial=initial,
    )
    made: list[UUID] = []

    def do() -> None:
        said = dict(form.cleaned_data)
        photo = said.pop("photo")
        said["photos"] = [keep(photo)] if photo else []
        company = said.pop("company", None) or Company.objects.get(pk=asked.company)
        made.append(
            act.make_request(record=asked.record, company=company, by=asked.by, **said)
        )

    return answer(
        request,
        form,
        do,
        to=lambda: _to(job, made[0]),
        said="Your request is received. This page is its receipt.",
        template="jobs/request_make.html",
        phone=_phones(asked),
    )


def _keys(texts: list[str]) -> list[UUID]:
    found = []
    for text in texts[:200]:
        try:
            found.append(UUID(text))
        except ValueError:
            continue
    return found


def _phones(asked: Asked) -> list[tuple[str, str]]:
    """Whom to ring at once: the office of the firm."""
    return [(p.name, p.phone) for p in office() if p.phone]


@needs(Can.READ)
def request_page(request: HttpRequest, job: str, ask: UUID) -> HttpResponse:
    asked = request.asked
    one = _one(asked, ask)
    context = {
        "one": one,
        "told": told(asked, one),
        "marks": standings(asked.record, one.listed),
        "visit": Visit.objects.filter(record=asked.record, key=one.visit).first(),
        "is_open": one.state in act.OPEN,
        "own": one.company == asked.company and companies_seen(asked) is not None,
        "answers_cost": may_answer_cost(asked, one),
        "short": bool(one.needed_by and one.earliest and one.needed_by < one.earliest),
        "firm_phones": [] if companies_seen(asked) is None else _phones(asked),
    }
    return render(request, "jobs/request.html", context)


@needs(Can.READ)
def request_photo(
    request: HttpRequest, job: str, ask: UUID, photo: int
) -> HttpResponse:
    """A photo sent with a request, counted from 1, for those who see the request."""
    asked = request.asked
    made = told(asked, _one(asked, ask)).made
    if made is None or not 0 < photo <= len(made.photos):
        raise Http404
    return image(asked.record, made.photos[photo - 1], 1200)


@needs(Can.DECIDE)
def request_accept(request: HttpRequest, job: str, ask: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, ask)
    made = told(asked, one).made
    usual = terms_at(asked.record, today(asked.record), company=one.company).payer_for(
        made.cause if made else ""
    )
    initial = {"payer": usual.payer if usual else ""}
    form = AcceptForm(sent(request), record=asked.record, initial=initial)
    return answer(
        request,
        form,
        lambda: act.accept_request(
            record=asked.record, ask=ask, by=asked.by, **form.cleaned_data
        ),
        to=_to(job, ask),
        said="The request is accepted. Put it on a visit next.",
        title="Accept the request",
        lead=f"{one.company_name}: {one.sort}.",
        verb="Accept it",
    )


@needs(Can.DECIDE)
def request_decline(request: HttpRequest, job: str, ask: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, ask)
    form = ReasonForm(sent(request))
    return answer(
        request,
        form,
        lambda: act.decline_request(
            record=asked.record, ask=ask, by=asked.by, **form.cleaned_data
        ),
        to=_to(job, ask),
        said="The request is declined, and who asked reads why.",
        title="Decline the request",
        lead=f"{one.company_name}: {one.sort}. They read the reason.",
        verb="Decline it",
    )


@needs(Can.REQUEST)
def request_talk(request: HttpRequest, job: str, ask: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, ask)
    form = WordsForm(sent(request))
    return answer(
        request,
        form,
        lambda: act.talk_over(
            record=asked.record, ask=ask, by=asked.by, **form.cleaned_data
        ),
        to=_to(job, ask),
        said="Said. Both sides read it here.",
        title="Ask back or answer",
        lead=f"{one.company_name}: {one.sort}.",
        verb="Say it",
    )


@needs(Can.ACCEPT_COST)
def request_cost(request: HttpRequest, job: str, ask: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, ask)
    if not may_answer_cost(asked, one):
        messages.info(request, "The cost of this request is not yours to answer now.")
        return SeeOther(_to(job, ask))
    form = CostForm(sent(request))
    return answer(
        request,
        form,
        lambda: act.answer_cost(
            record=asked.record,
            ask=ask,
            accepted=form.cleaned_data["accepted"] == "yes",
            words=form.cleaned_data["words"],
            key=form.cleaned_data["key"],
            by=asked.by,
        ),
        to=_to(job, ask),
        said="Your answer is recorded.",
        title="The cost of this request",
        lead=f"To be borne by: {one.payer or 'not said yet'}.",
        verb="Record the answer",
    )


@needs(Can.REQUEST)
def request_withdraw(request: HttpRequest, job: str, ask: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, ask)
    form = ReasonForm(sent(request))
    form.fields["reason"].required = False
    return answer(
        request,
        form,
        lambda: act.withdraw_request(
            record=asked.record, ask=ask, by=asked.by, **form.cleaned_data
        ),
        to=_to(job, ask),
        said="The request is taken back.",
        title="Take the request back",
        lead=f"{one.company_name}: {one.sort}.",
        verb="Take it back",
    )


@needs(Can.DECIDE)
def request_close(request: HttpRequest, job: str, ask: UUID) -> HttpResponse:
    asked, one = request.asked, _one(request.asked, ask)
    form = WordsForm(sent(request))
    return answer(
        request,
        form,
        lambda: act.close_request(
            record=asked.record, ask=ask, by=asked.by, **form.cleaned_data
        ),
        to=_to(job, ask),
        said="The request is closed.",
        title="Close the request without a handover",
        lead=f"{one.company_name}: {one.sort}. Handing its stakes over closes it too.",
        verb="Close it",
    )
