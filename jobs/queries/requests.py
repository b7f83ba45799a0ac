"""Requests as a reader may see them, what was asked, and the course of one."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime, timedelta
from uuid import UUID

from django.db.models import Q, QuerySet

from jobs.defaults.payers import OWNER, SURVEYOR
from jobs.kinds.requests import CostAnswered, RequestAccepted, RequestMade
from jobs.models import Request
from jobs.queries.companies import companies_seen
from jobs.rights import Role
from stakes.can import Asked, Can
from stakes.models import PrivatePart, Record
from stakes.queries.state import MarkView, job_state
from stakes.record import Counted, entries
from stakes.templatetags.lathbook import moment_words

AT_ONCE = timedelta(minutes=1)
"""What is written down within this time was recorded as it happened."""


@dataclass(frozen=True, slots=True)
class Step:
    """One thing said or done about a request."""

    at: datetime
    recorded_at: datetime
    name: str
    words: str
    number: int

    @property
    def is_late(self) -> bool:
        """Written down later than it happened: both clocks are shown."""
        return self.recorded_at - self.at > AT_ONCE


@dataclass(frozen=True, slots=True)
class Told:
    """What was asked, in full, and what became of it."""

    made: RequestMade | None
    phone: str
    payer_reason: str
    course: list[Step]


def requests_seen(asked: Asked) -> QuerySet[Request]:
    """All requests of a job, or those of the reader's own company; the owner's inspector
    also sees those the owner is to pay."""
    found = Request.objects.filter(record=asked.record).order_by("-received_at")
    companies = companies_seen(asked)
    if companies is None:
        return found
    seen = Q(company__in=companies)
    if Role.INSPECTOR in asked.roles:
        seen |= Q(payer=OWNER)
    return found.filter(seen)


def told(asked: Asked, request: Request) -> Told:
    """Everything said about a request, first to last."""
    said = entries(asked.record, thing="request", key=request.key)
    made = next((c for c in said if isinstance(c.fact, RequestMade)), None)
    accepted = [c.fact for c in said if isinstance(c.fact, RequestAccepted)]
    return Told(
        made=made.fact if made else None,  # type: ignore[arg-type]
        phone=_phone(asked, request, made),
        payer_reason=accepted[-1].payer_reason if accepted else "",
        course=[
            Step(c.happened_at, c.recorded_at, c.name, _words(asked, c), c.number)
            for c in said
            if asked.can(Can.SEE_PRICES) or not isinstance(c.fact, CostAnswered)
        ],
    )


def _phone(asked: Asked, request: Request, made: Counted | None) -> str:
    """The telephone on site, for whoever goes there and for who gave it."""
    own = asked.company == request.company
    if made is None or not (own or asked.can(Can.RECORD)):
        return ""
    parts = PrivatePart.objects.filter(record=asked.record, number=made.number)
    return parts.filter(name="phone").values_list("text", flat=True).first() or ""


def _words(asked: Asked, said: Counted) -> str:
    if not isinstance(said.fact, RequestAccepted):
        return said.fact.sentence()
    fact = said.fact
    words = "Request accepted"
    if fact.promised_for:
        there = fact.promised_for.astimezone(asked.record.time_zone)
        words += f", promised for {moment_words(there)}"
    if fact.payer and asked.can(Can.SEE_PRICES):
        reason = f" ({fact.payer_reason})" if fact.payer_reason else ""
        words += f". Cost borne by: {fact.payer}{reason}"
    return f"{words}. {fact.words}".strip()


def may_answer_cost(asked: Asked, request: Request) -> bool:
    """The owner answers what the owner is to pay, and who asked answers the rest."""
    if not request.payer or request.payer == SURVEYOR or request.cost == "accepted":
        return False
    if not asked.can(Can.ACCEPT_COST):
        return False
    if request.payer == OWNER:
        return Role.INSPECTOR in asked.roles
    return request.company == asked.company


def standings(record: Record, listed: list[str]) -> list[MarkView]:
    """The marks of a list as they stand now."""
    state = job_state(record)
    return [state.marks[UUID(m)] for m in listed if UUID(m) in state.marks]
