"""What passes between the firm and one company is not told to the others."""

from __future__ import annotations

from uuid import UUID

from jobs.models import Handover, Hold
from jobs.queries.companies import companies_seen
from jobs.queries.requests import requests_seen
from jobs.queries.visits import visits_seen
from stakes.can import Asked
from stakes.models import EntryMatter
from stakes.queries.history import Line


def without_others(asked: Asked, lines: list[Line]) -> list[Line]:
    """A mark's lines without what other companies asked for, were given or warned of.

    What was done in the field is told to everybody on the job: it is of their stakes.
    """
    companies = companies_seen(asked)
    between = {x.said.number for x in lines if _is_between(x)}
    if companies is None or not between:
        return lines
    seen = _seen(asked, companies)
    about = EntryMatter.objects.filter(record=asked.record, number__in=between)
    named = about.filter(thing__in=seen).values_list("number", "thing", "key")
    strange = {number for number, thing, key in named if key not in seen[thing]}
    return [line for line in lines if line.said.number not in strange]


def _is_between(line: Line) -> bool:
    """Kinds of `jobs`: requests, visits, handovers and holds."""
    return type(line.said.fact).__module__.startswith("jobs.")


def _seen(asked: Asked, companies: set[str]) -> dict[str, set[UUID]]:
    given = Handover.objects.filter(record=asked.record, company__in=companies)
    holds = Hold.objects.filter(record=asked.record)
    return {
        "request": set(requests_seen(asked).values_list("key", flat=True)),
        "visit": set(visits_seen(asked).values_list("key", flat=True)),
        "handover": set(given.values_list("key", flat=True)),
        "hold": {hold.key for hold in holds if companies & set(hold.companies)},
    }
