"""Requests as a reader may see them, and the course of one."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

from django.db.models import QuerySet

from jobs.models import Request
from jobs.queries.companies import companies_seen
from stakes.can import Asked
from stakes.models import Record
from stakes.queries.state import MarkView, job_state
from stakes.record import entries


@dataclass(frozen=True, slots=True)
class Step:
    """One thing said or done about a request."""

    at: datetime
    recorded_at: datetime
    name: str
    words: str
    number: int


def requests_seen(asked: Asked) -> QuerySet[Request]:
    """All requests of a job, or those of the reader's own company."""
    found = Request.objects.filter(record=asked.record).order_by("-received_at")
    companies = companies_seen(asked)
    return found if companies is None else found.filter(company__in=companies)


def course_of(asked: Asked, request: Request) -> list[Step]:
    """What was said and done about a request, first to last."""
    return [
        Step(c.happened_at, c.recorded_at, c.name, c.fact.sentence(), c.number)
        for c in entries(asked.record, thing="request", key=request.key)
    ]


def standings(record: Record, listed: list[str]) -> list[MarkView]:
    """The marks of a list as they stand now."""
    state = job_state(record)
    return [state.marks[UUID(m)] for m in listed if UUID(m) in state.marks]
