"""A crew on site: arrive, wait, end tasks, leave, close the day's ticket."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse

from jobs.actions import visits as act
from jobs.forms.visits import (
    ArriveForm,
    LeaveForm,
    OutcomeForm,
    StandByForm,
    TicketForm,
)
from jobs.kinds.visits import Member
from jobs.pages.answer import answer, sent
from jobs.pages.visits import one_visit, to_visit
from jobs.queries.visits import day_of
from stakes.can import Can, needs


@needs(Can.RECORD)
def visit_arrive(request: HttpRequest, job: str, visit: UUID) -> HttpResponse:
    asked, one = request.asked, one_visit(request.asked, visit)
    named = "\n".join(
        f"{m['name']}, {m['duty']}" if m.get("duty") else m["name"] for m in one.members
    )
    form = ArriveForm(sent(request), record=asked.record, initial={"members": named})

    def do() -> None:
        said = dict(form.cleaned_data)
        said["members"] = [
            _member(line) for line in said["members"].splitlines() if line.strip()
        ]
        said["instruments"] = said["instruments"].splitlines()
        act.arrive(record=asked.record, visit=one.key, by=asked.by, **said)

    return answer(
        request,
        form,
        do,
        to=to_visit(job, visit),
        said="Arrival recorded.",
        title="On site",
        verb="Record the arrival",
        body_class="field",
        one=one,
    )


def _member(line: str) -> Member:
    name, _, duty = line.partition(",")
    return Member(person="", name=name.strip(), duty=duty.strip())


@needs(Can.RECORD)
def visit_wait(request: HttpRequest, job: str, visit: UUID) -> HttpResponse:
    asked, one = request.asked, one_visit(request.asked, visit)
    form = StandByForm(sent(request), record=asked.record)
    return answer(
        request,
        form,
        lambda: act.stand_by(
            record=asked.record, visit=one.key, by=asked.by, **form.cleaned_data
        ),
        to=to_visit(job, visit),
        said="The wait is recorded.",
        title="Standing by",
        verb="Record the wait",
        body_class="field",
        one=one,
    )


@needs(Can.RECORD)
def visit_leave(request: HttpRequest, job: str, visit: UUID) -> HttpResponse:
    asked, one = request.asked, one_visit(request.asked, visit)
    form = LeaveForm(sent(request), record=asked.record)
    return answer(
        request,
        form,
        lambda: act.leave(
            record=asked.record, visit=one.key, by=asked.by, **form.cleaned_data
        ),
        to=to_visit(job, visit),
        said="Leaving recorded.",
        title="Leaving the site",
        verb="Record it",
        body_class="field",
        one=one,
    )


@needs(Can.RECORD)
def task_end(request: HttpRequest, job: str, visit: UUID, task: UUID) -> HttpResponse:
    asked, one = request.asked, one_visit(request.asked, visit)
    planned = next((t for t in one.tasks if t["task"] == str(task)), None)
    if planned is None:
        raise Http404
    form = OutcomeForm(sent(request))
    return answer(
        request,
        form,
        lambda: act.end_task(
            record=asked.record,
            visit=one.key,
            task=task,
            by=asked.by,
            **form.cleaned_data,
        ),
        to=to_visit(job, visit),
        said="The outcome is recorded.",
        title=f"How it ended: {planned['sort']}",
        lead=planned.get("words", ""),
        verb="Record it",
        body_class="field",
        one=one,
    )


@needs(Can.RECORD)
def ticket_close(request: HttpRequest, job: str, visit: UUID) -> HttpResponse:
    asked, one = request.asked, one_visit(request.asked, visit)
    form = TicketForm(sent(request))
    return answer(
        request,
        form,
        lambda: act.close_ticket(
            record=asked.record, visit=one.key, by=asked.by, **form.cleaned_data
        ),
        to=to_visit(job, visit),
        said="The day's ticket is closed.",
        title="The day's ticket",
        verb="Close the ticket",
        template="jobs/ticket.html",
        body_class="field",
        one=one,
        day=day_of(asked, one),
    )
