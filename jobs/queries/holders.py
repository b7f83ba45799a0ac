"""Who holds stakes in their hands: companies by what was handed over to them."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from uuid import UUID

from jobs.models import Company, Handover
from stakes.models import Record


@dataclass(frozen=True, slots=True)
class Holder:
    """A company that was given some of the marks, with the telephone to ring."""

    company: UUID
    name: str
    phone: str
    marks: tuple[str, ...]


def holders(record: Record, listed: Iterable[UUID]) -> list[Holder]:
    """The companies these marks were handed over to, each with its marks."""
    wanted = {str(mark) for mark in listed}
    given: dict[str, set[str]] = {}
    for handover in Handover.objects.filter(record=record):
        common = wanted & set(handover.listed)
        if common:
            given.setdefault(handover.company, set()).update(common)
    companies = Company.objects.filter(pk__in=given).order_by("name")
    return [
        Holder(c.pk, c.name, c.phone, tuple(sorted(given[str(c.pk)])))
        for c in companies
    ]
