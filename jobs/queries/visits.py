"""Visits as a reader may see them, and what happened on one day."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from django.db.models import QuerySet

from jobs.kinds.visits import VisitCancelled, VisitPlanned
from jobs.models import Visit
from jobs.queries.companies import companies_seen
from jobs.queries.requests import requests_seen
from stakes.can import Asked, Can
from stakes.models import EntryMark
from stakes.queries.history import Line, labels, line
from stakes.record import entries


def visits_seen(asked: Asked) -> QuerySet[Visit]:
    """All visits; a contractor sees those that answer the own company's requests, a
    subcontracted crew those it is on."""
    found = Visit.objects.filter(record=asked.record).order_by("-starts_at")
    if companies_seen(asked) is None:
        return found
    if asked.can(Can.RECORD):
        return found.filter(key__in=[v.key for v in found if _is_on(asked, v)])
    own = asks_seen(asked)
    return found.filter(key__in=[v.key for v in found if own & _asks_of(v)])


def asks_seen(asked: Asked) -> set[str]:
    """Requests this reader may open, as the tasks of visits name them."""
    return {str(key) for key in requests_seen(asked).values_list("key", flat=True)}


def tasks_seen(
    asked: Asked, visits: Iterable[Visit]
) -> list[tuple[Visit, list[dict[str, Any]]]]:
    """Visits, each with the tasks that concern the reader; one query for all."""
    own = asks_seen(asked)
    all_of_them = companies_seen(asked) is None or asked.can(Can.RECORD)
    return [
        (
            visit,
            [
                task | {"opens": task.get("ask") in own}
                for task in visit.tasks
                if all_of_them or task.get("ask") in own
            ],
        )
        for visit in visits
    ]


def _is_on(asked: Asked, visit: Visit) -> bool:
    return any(member["person"] == asked.by.person for member in visit.members)


def _asks_of(visit: Visit) -> set[str]:
    return {task["ask"] for task in visit.tasks if task.get("ask")}


def day_of(asked: Asked, visit: Visit) -> list[tuple[Line, list[str]]]:
    """What was recorded on a visit, with the marks it names; the firm's own reading.

    Planning it is none of the day's work.
    """
    if not asked.can(Can.READ_RECORD):
        return []
    said = [
        c
        for c in entries(asked.record, thing="visit", key=visit.key)
        if not isinstance(c.fact, VisitPlanned | VisitCancelled)
    ]
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
