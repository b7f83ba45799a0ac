"""Visits: all of them, one of them, planned, moved, cancelled."""

from __future__ import annotations

from typing import Any
from uuid import UUID, uuid4

import msgspec
from django.db.models import QuerySet
from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from jobs.actions import visits as act
from jobs.forms.requests import ReasonForm
from jobs.forms.visits import VisitForm, VisitMoveForm
from jobs.kinds.visits import Member, PlannedTask
from jobs.models import Crew, Request, Visit
from jobs.pages.answer import answer, sent
from jobs.queries.companies import companies_seen
from jobs.queries.visits import day_of, tasks_seen, visits_seen
from stakes.can import Asked, Can, needs
from stakes.models import Mark


@needs(Can.SEE_VISITS)
def visits(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    found = tasks_seen(asked, visits_seen(asked))
    is_over = [bool(visit.left_at or visit.cancelled) for visit, _ in found]
    context = {
        "coming": [row for row, over in zip(found, is_over, strict=True) if not over],
        "past": [row for row, over in zip(found, is_over, strict=True) if over],
    }
    return render(request, "jobs/visits.html", context)


def one_visit(asked: Asked, visit: UUID) -> Visit:
    """A visit its reader may see; everything else is not found."""
    one = visits_seen(asked).filter(key=visit).first()
    if one is None:
        raise Http404
    return one


def to_visit(job: str, visit: UUID) -> str:
    return reverse("jobs:visit", kwargs={"job": job, "visit": visit})


def _to_place(asked: Asked) -> QuerySet[Request]:
    """Requests that wait for a visit: accepted, or received and to be decided yet."""
    waiting = Request.objects.filter(
        record=asked.record, state__in=("received", "accepted")
    )
    return waiting.order_by("received_at")


@needs(Can.SCHEDULE)
def visit_plan(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    initial = {"requests": request.GET.getlist("ask")}
    form = VisitForm(
        sent(request),
        record=asked.record,
        requests=_to_place(asked),
        initial=initial,
    )
    made: list[UUID] = []
    return answer(
        request,
        form,
        lambda: made.append(act.plan_visit(**_plan(asked, form.cleaned_data))),
        to=lambda: to_visit(job, made[0]),
        said="The visit is planned. Its crew is told by mail.",
        title="Plan a visit",
        verb="Plan it",
    )


def _plan(asked: Asked, said: dict[str, Any]) -> dict[str, Any]:
    crew = said["crew"]
    return {
        "record": asked.record,
        "crew": crew.name if crew else "",
        "members": _members(crew),
        "starts_at": said["starts_at"],
        "ends_at": said["ends_at"],
        "tasks": _tasks(said),
        "words": said["words"],
        "key": said["key"],
        "by": asked.by,
    }


@needs(Can.SCHEDULE)
def visit_move(request: HttpRequest, job: str, visit: UUID) -> HttpResponse:
    """Rain, a late pour, a sick rod person: the same visit at another time."""
    asked, one = request.asked, one_visit(request.asked, visit)
    initial = {
        "crew": Crew.objects.filter(name=one.crew).first(),
        "starts_at": one.starts_at,
        "ends_at": one.ends_at,
        "tasks": [task["task"] for task in one.tasks],
        "words": one.words,
    }
    form = VisitMoveForm(
        sent(request),
        record=asked.record,
        requests=_to_place(asked),
        visit=one,
        initial=initial,
    )

    def do() -> None:
        said = form.cleaned_data
        kept = [task for task in one.tasks if task["task"] in said["tasks"]]
        planned = _plan(asked, said)
        planned["tasks"] = [*map(_planned, kept), *planned["tasks"]]
        act.plan_visit(visit=one.key, **planned)

    return answer(
        request,
        form,
        do,
        to=to_visit(job, visit),
        said="The visit is planned anew. Its crew is told by mail.",
        title="Move or change the visit",
        lead="A request that is unticked waits for another visit.",
        verb="Plan it anew",
    )


def _planned(task: dict[str, Any]) -> PlannedTask:
    """A task as it was planned, without what became of it."""
    named = ("task", "sort", "words", "listed", "ask")
    return msgspec.convert({k: task[k] for k in named if k in task}, PlannedTask)


def _members(crew: Crew | None) -> list[Member]:
    if crew is None:
        return []
    chief = Member(
        person=str(crew.party_chief.pk), name=crew.party_chief.name, duty="party chief"
    )
    others = [m for m in crew.members.all() if m.pk != crew.party_chief.pk]
    return [chief, *(Member(person=str(m.pk), name=m.name) for m in others)]


def _tasks(said: dict) -> list[PlannedTask]:
    tasks = [act.task_for(request) for request in said["requests"]]
    if said["sort"]:
        tasks.append(
            PlannedTask(
                task=uuid4(),
                sort=said["sort"],
                words=said["words"][:200],
                listed=tuple(said["listed"]),
            )
        )
    return tasks


@needs(Can.SEE_VISITS)
def visit_page(request: HttpRequest, job: str, visit: UUID) -> HttpResponse:
    asked = request.asked
    one = one_visit(asked, visit)
    [(_, tasks)] = tasks_seen(asked, [one])
    keys = [UUID(m) for t in tasks for m in t.get("listed", [])]
    marks = Mark.objects.filter(record=asked.record).in_bulk(keys)
    context = {
        "one": one,
        "tasks": [
            (t, [marks[UUID(m)] for m in t.get("listed", []) if UUID(m) in marks])
            for t in tasks
        ],
        # Words to the crew may name another company of the job.
        "words": one.words if asked.can(Can.RECORD) or _is_ours(asked) else "",
        "day": day_of(asked, one),
    }
    return render(request, "jobs/visit.html", context)


def _is_ours(asked: Asked) -> bool:
    return companies_seen(asked) is None


@needs(Can.SCHEDULE)
def visit_cancel(request: HttpRequest, job: str, visit: UUID) -> HttpResponse:
    asked, one = request.asked, one_visit(request.asked, visit)
    form = ReasonForm(sent(request))
    return answer(
        request,
        form,
        lambda: act.cancel_visit(
            record=asked.record, visit=one.key, by=asked.by, **form.cleaned_data
        ),
        to=to_visit(job, visit),
        said="The visit is cancelled.",
        title="Cancel the visit",
        verb="Cancel it",
    )
