"""Visits: plan, cancel, begin, wait, end tasks, leave, close the day's ticket.

The same `key` sent twice is one act, everywhere here.
"""

from __future__ import annotations

import uuid
from collections.abc import Callable, Mapping, Sequence
from datetime import datetime, timedelta
from typing import Any
from uuid import UUID

from jobs.actions.checked import checked_text, refuse_unknown_marks
from jobs.actions.keyed import keyed
from jobs.actions.requests import OPEN
from jobs.kinds.visits import (
    CrewArrived,
    CrewLeft,
    CrewStoodBy,
    DayTicketClosed,
    Member,
    OfVisit,
    Outcome,
    PlannedTask,
    Signature,
    TaskEnded,
    VisitCancelled,
    VisitPlanned,
)
from jobs.models import Request, Visit
from stakes.models import Entry, Record
from stakes.record import By, Known, Refused, Said, append, held
from stakes.record.kinds import facts_as_data

LONGEST_WAIT = timedelta(hours=24)


def plan_visit(
    *,
    record: Record,
    starts_at: datetime,
    ends_at: datetime | None = None,
    crew: str = "",
    members: Sequence[Member] = (),
    tasks: Sequence[PlannedTask] = (),
    words: str = "",
    visit: UUID | None = None,
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> UUID:
    """Put a crew on the site for a time, with tasks; requests named in tasks are placed.

    With `visit` an earlier plan is planned anew, and a request it no longer answers
    waits again. The same `key` sent twice is one plan.
    """
    _refuse_plan(starts_at, ends_at, tasks)
    said = {
        "crew": checked_text(crew, "crew", most=120, required=False),
        "members": tuple(members),
        "starts_at": starts_at,
        "ends_at": ends_at,
        "words": checked_text(words, "words", most=1000, required=False),
    }
    planned = visit or key or uuid.uuid4()

    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            refuse_unknown_marks(locked, [m for task in tasks for m in task.listed])
            _refuse_asks(locked, tasks)
            taken_off = _taken_off(_earlier(locked, visit), tasks) if visit else ()
            fact = VisitPlanned(
                visit=planned,
                tasks=tuple(tasks),
                taken_off=taken_off,
                **said,  # type: ignore[arg-type]
            )
            told = Said(fact=fact, at=at, known=Known.DECIDED, key=key or uuid.uuid4())
            return append(locked, told, by=by, act=act)

    # A task gets its own id when a form is read, so that is no part of what was asked.
    words_of = [(t.sort, t.words, t.listed, t.ask) for t in tasks]
    keyed(record, key, {**said, "tasks": words_of, "visit": visit, "at": at}, do)
    return planned


def _refuse_plan(
    starts_at: datetime, ends_at: datetime | None, tasks: Sequence[PlannedTask]
) -> None:
    if ends_at is not None and ends_at <= starts_at:
        raise Refused(
            "The visit ends before it begins.",
            do="Check both times.",
            field="ends_at",
        )
    if not tasks:
        raise Refused(
            "The visit has no task.",
            do="Say at least one thing to do.",
            field="sort",
        )


def _refuse_asks(record: Record, tasks: Sequence[PlannedTask]) -> None:
    """A visit answers requests of its own job that are still open."""
    asks = {task.ask for task in tasks if task.ask}
    found = Request.objects.filter(record=record, key__in=asks)
    over = [request for request in found if request.state not in OPEN]
    if len(found) != len(asks) or over:
        what = f"is {over[0].state} already" if over else "is not on this job"
        raise Refused(
            f"A request of this visit {what}.",
            do="Choose among the open requests of this job.",
            field="requests",
            code="no request",
        )


def _earlier(record: Record, visit: UUID) -> Visit:
    row = _visit(record, visit)
    _refuse_over(row)
    return row


def _taken_off(earlier: Visit, tasks: Sequence[PlannedTask]) -> tuple[UUID, ...]:
    """Requests the earlier plan would have answered and the new one does not."""
    before = [UUID(task["ask"]) for task in earlier.tasks if task.get("ask")]
    now = {task.ask for task in tasks}
    return tuple(dict.fromkeys(ask for ask in before if ask not in now))


def task_for(request: Request, words: str = "") -> PlannedTask:
    """The task that answers a request."""
    sort = {"lay out": "set", "re-stake": "put back", "check": "check"}
    return PlannedTask(
        task=uuid.uuid4(),
        sort=sort.get(request.sort, "other"),  # type: ignore[arg-type]
        words=words or request.words[:200],
        listed=tuple(UUID(mark) for mark in request.listed),
        ask=request.key,
    )


def cancel_visit(
    *,
    record: Record,
    visit: UUID,
    reason: str,
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """A planned visit will not take place; the requests on it wait for another."""
    reason = checked_text(reason, "reason", most=1000)

    def fact_of(row: Visit) -> VisitCancelled:
        _refuse_over(row)
        asks = [UUID(task["ask"]) for task in row.tasks if task.get("ask")]
        return VisitCancelled(
            visit=visit, reason=reason, asks=tuple(dict.fromkeys(asks))
        )

    asked = {"cancel": visit, "reason": reason, "at": at}
    _say(record, visit, asked, fact_of, by, at, key, known=Known.DECIDED)


def arrive(
    *,
    record: Record,
    visit: UUID,
    members: Sequence[Member] = (),
    weather: str = "",
    instruments: Sequence[str] = (),
    told_operators: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """The crew came on site: who, the weather, the day's instrument checks."""
    lines = [
        checked_text(line, "instruments", most=300) for line in instruments if line
    ]
    fact = CrewArrived(
        visit=visit,
        members=tuple(members),
        weather=checked_text(weather, "weather", most=200, required=False),
        instruments=tuple(lines),
        told_operators=checked_text(
            told_operators, "told_operators", most=200, required=False
        ),
    )
    _say_so(record, fact, by, at, key)


def stand_by(
    *,
    record: Record,
    visit: UUID,
    since: datetime,
    until: datetime,
    reason: str,
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """The crew waited and could not work; billable time needs its reason."""
    if until <= since:
        raise Refused(
            "The wait ends before it begins.", do="Check both times.", field="until"
        )
    if until - since > LONGEST_WAIT:
        raise Refused(
            "The wait is longer than a day.",
            do="Check both dates; record each day on its own visit.",
            field="until",
        )
    reason = checked_text(reason, "reason", most=1000)
    fact = CrewStoodBy(visit=visit, since=since, until=until, reason=reason)
    _say_so(record, fact, by, at, key)


def leave(
    *,
    record: Record,
    visit: UUID,
    remark: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """The crew left the site."""
    remark = checked_text(remark, "remark", most=500, required=False)
    _say_so(record, CrewLeft(visit=visit, remark=remark), by, at, key)


def end_task(
    *,
    record: Record,
    visit: UUID,
    task: UUID,
    outcome: Outcome,
    sent_away_by: str = "",
    remark: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """One task came to its outcome. "Sent away" says by whom."""
    sent_away_by = checked_text(
        sent_away_by, "name", most=120, required=outcome == "sent away"
    )
    remark = checked_text(remark, "remark", most=500, required=False)

    def fact_of(row: Visit) -> TaskEnded:
        planned = next((t for t in row.tasks if t["task"] == str(task)), None)
        if planned is None:
            raise Refused("This task is not on the visit.", field="task")
        return TaskEnded(
            visit=visit,
            task=task,
            outcome=outcome,
            sent_away_by=sent_away_by,
            remark=remark,
            ask=UUID(planned["ask"]) if planned.get("ask") else None,
        )

    asked = {"task": task, "outcome": outcome, "by": sent_away_by, "words": remark}
    _say(record, visit, {**asked, "at": at}, fact_of, by, at, key)


def close_ticket(
    *,
    record: Record,
    visit: UUID,
    signature: Signature,
    signed_by: str = "",
    company: str = "",
    words: str = "",
    by: By,
    at: datetime | None = None,
    key: UUID | None = None,
) -> None:
    """The superintendent signed the day's ticket, declined it, or was absent."""
    fact = DayTicketClosed(
        visit=visit,
        signature=signature,
        signed_by=checked_text(
            signed_by, "name", most=120, required=signature != "absent"
        ),
        company=checked_text(company, "company", most=120, required=False),
        words=checked_text(
            words, "reason", most=1000, required=signature == "declined"
        ),
    )
    _say_so(record, fact, by, at, key)


def _say_so(
    record: Record, fact: OfVisit, by: By, at: datetime | None, key: UUID | None
) -> None:
    """A fact that asks nothing of the visit but that it exists."""
    asked = {"kind": fact.KIND, "facts": facts_as_data(fact), "at": at}
    _say(record, fact.visit, asked, lambda row: fact, by, at, key)


def _say(
    record: Record,
    visit: UUID,
    asked: Mapping[str, Any],
    fact_of: Callable[[Visit], OfVisit],
    by: By,
    at: datetime | None,
    key: UUID | None,
    *,
    known: Known = Known.SEEN,
) -> None:
    def do(act: UUID) -> list[Entry]:
        with held(record) as locked:
            fact = fact_of(_visit(locked, visit))
            said = Said(fact=fact, at=at, known=known, key=key or uuid.uuid4())
            return append(locked, said, by=by, act=act)

    keyed(record, key, asked, do)


def _visit(record: Record, visit: UUID) -> Visit:
    row = Visit.objects.filter(record=record, key=visit).first()
    if row is None:
        raise Refused("There is no such visit on this job.", code="no visit")
    return row


def _refuse_over(visit: Visit) -> None:
    if visit.cancelled or visit.left_at:
        raise Refused(
            f"The visit is {'cancelled' if visit.cancelled else 'over'} already.",
            do="Plan a new one.",
            code="not open",
        )
