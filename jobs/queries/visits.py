"""Visits as a reader may see them, and what happened on one day."""

from __future__ import annotations

from django.db.models import QuerySet

from jobs.models import Request, Visit
from jobs.queries.companies import companies_seen
from stakes.can import Asked, Can
from stakes.models import EntryMark
from stakes.queries.history import Line, labels, line
from stakes.record import entries


def visits_seen(asked: Asked) -> QuerySet[Visit]:
    """All visits; a contractor sees those that answer the own company's requests, a
    subcontracted crew those it is on."""
    found = Visit.objects.filter(record=asked.record).order_by("-starts_at")
    companies = companies_seen(asked)
    if companies is None:
        return found
    if asked.can(Can.RECORD):
        on = [
            v.key
            for v in found
            if any(m["person"] == asked.by.person for m in v.members)
        ]
        return found.filter(key__in=on)
    asks = Request.objects.filter(record=asked.record, company__in=companies)
    return found.filter(key__in=asks.exclude(visit=None).values("visit"))


def day_of(asked: Asked, visit: Visit) -> list[tuple[Line, list[str]]]:
    """Everything recorded on a visit, with the marks it names; the firm's own reading."""
    if not asked.can(Can.READ_RECORD):
        return []
    said = entries(asked.record, thing="visit", key=visit.key)
    named: dict[int, list[str]] = {}
    names = labels(asked.record)
    links = EntryMark.objects.filter(
        record=asked.record, number__in=[c.number for c in said]
    )
    for number, mark in links.order_by("id").values_list("number", "mark"):
        listed = named.setdefault(number, [])
        if names.get(mark) and names[mark] not in listed:
            listed.append(names[mark])
    return [(line(c), named.get(c.number, [])) for c in said]
