"""What one company may learn of the others on a shared job: nothing."""

from __future__ import annotations

from django.db.models import Q, QuerySet

from jobs.models import CompanyKind, Seat
from jobs.queries.seats import seats_of
from jobs.rights import INSIDERS
from stakes.can import Asked


def sees_all_companies(asked: Asked) -> bool:
    """The firm and auditors see every company of a job; others their own only."""
    return not INSIDERS.isdisjoint(asked.roles)


def companies_seen(asked: Asked) -> set[str] | None:
    """Ids of the companies whose matters may be shown; None: those of all."""
    return None if sees_all_companies(asked) else {asked.company}


def seats_seen(asked: Asked) -> QuerySet[Seat]:
    """Seats this reader may see: all, or those of the own company and of the firm."""
    seats = seats_of(asked.record)
    if sees_all_companies(asked):
        return seats
    own_or_firm = Q(company=asked.company) | Q(company__kind=CompanyKind.FIRM)
    return seats.filter(own_or_firm)
