"""Visits: plan, cancel, begin, wait, end tasks, leave, close the day's ticket."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from datetime import datetime
from uuid import UUID

from jobs.actions.checked import checked_text
from jobs.kinds.visits import (
    CrewArrived,
    CrewLeft,
    CrewStoodBy,
    DayTicketClosed,
    Member,
    Outcome,
    PlannedTask,
    Signature,
    TaskEnded,
    VisitCancelled,
    VisitPlanned,
)
from jobs.models import Request, Visit
from stakes.models import Record
from stakes.record import By, Fact, Known, Refused, Said, append, held


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
) -> UUID:
    """Put a crew on the site for a time, with tasks; requests named in tasks are placed.

    With `visit` an earlier plan is planned anew.
    """
    if ends_at is not None and ends_at <= starts_at:
        raise Refused(
            "The visit ends before it begins.",
            do="Check both times.",
            field="ends_at",
        )
    if not tasks:
        raise Refused(
            "The visit has no task.", do="Say at least one thing to do.", field="tasks"
        )
    key = visit or uuid.uuid4()
    fact = VisitPlanned(
        visit=key,
        crew=crew.strip(),
        members=tuple(members),
        starts_at=starts_at,
        ends_at=ends_at,
        tasks=tuple(tasks),
        words=words.strip(),
    )
    with held(record) as locked:
        if visit is not None:
            _refuse_over(_visit(locked, visit))
        append(locked, fact, by=by, at=at, known=Known.DECIDED)
    return key


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
    *, record: Record, visit: UUID, reason: str, by: By, at: datetime | None = None
) -> None:
    """A planned visit will not take place; why stands in the record."""
    reason = checked_text(reason, "reason", most=1000)
    with held(record) as locked:
        _refuse_over(_visit(locked, visit))
        fact = VisitCancelled(visit=visit, reason=reason)
        append(locked, fact, by=by, at=at, known=Known.DECIDED)


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
) -> None:
    """The crew came on site: who, the weather, the day's instrument checks."""
    fact = CrewArrived(
        visit=visit,
        members=tuple(members),
        weather=weather.strip(),
        instruments=tuple(line.strip() for line in instruments if line.strip()),
        told_operators=told_operators.strip(),
    )
    _say(record, visit, fact, by, at)


def stand_by(
    *,
    record: Record,
    visit: UUID,
    since: datetime,
    until: datetime,
    reason: str,
    by: By,
    at: datetime | None = None,
) -> None:
    """The crew waited and could not work; billable time needs its reason."""
    if until <= since:
        raise Refused("The wait ends before it begins.", field="until")
    reason = checked_text(reason, "reason", most=1000)
    fact = CrewStoodBy(visit=visit, since=since, until=until, reason=reason)
    _say(record, visit, fact, by, at)


def leave(
    *, record: Record, visit: UUID, remark: str = "", by: By, at: datetime | None = None
) -> None:
    """The crew left the site."""
    _say(record, visit, CrewLeft(visit=visit, remark=remark.strip()), by, at)


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
) -> None:
    """One task came to its outcome. "Sent away" says by whom."""
    if outcome == "sent away":
        sent_away_by = checked_text(sent_away_by, "name", most=120)
    with held(record) as locked:
        row = _visit(locked, visit)
        planned = next((t for t in row.tasks if t["task"] == str(task)), None)
        if planned is None:
            raise Refused("This task is not on the visit.", field="task")
        fact = TaskEnded(
            visit=visit,
            task=task,
            outcome=outcome,
            sent_away_by=sent_away_by.strip(),
            remark=remark.strip(),
            ask=UUID(planned["ask"]) if planned.get("ask") else None,
        )
        append(locked, fact, by=by, at=at)


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
) -> None:
    """The superintendent signed the day's ticket, declined it, or was absent."""
    if signature != "absent":
        signed_by = checked_text(signed_by, "name", most=120)
    if signature == "declined":
        words = checked_text(words, "reason", most=1000)
    fact = DayTicketClosed(
        visit=visit,
        signature=signature,
        signed_by=signed_by.strip(),
        company=company.strip(),
        words=words.strip(),
    )
    _say(record, visit, fact, by, at)


def _say(record: Record, visit: UUID, fact: Fact, by: By, at: datetime | None) -> None:
    with held(record) as locked:
        _visit(locked, visit)
        append(locked, Said(fact=fact, at=at, known=Known.SEEN), by=by)


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
