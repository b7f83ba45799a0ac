"""From a job's state to what the plan draws, and to the list that says the same."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from uuid import UUID

from stakes.drawings.plan import DrawnMark, Plan
from stakes.drawings.zones import DrawnZone
from stakes.models import Record, Zone
from stakes.queries.state import JobState, MarkView

UNIT_NAMES = {"m": "m", "ft": "ft", "ftUS": "ft (US)"}


def plan_of(
    state: JobState, title: str, href: Callable[[UUID], str] = lambda _: ""
) -> Plan:
    """The plan of a job as its state stands; marks without a place are left out."""
    return Plan(
        marks=[m for v in state.marks.values() if (m := drawn(v, href)) is not None],
        zones=zones_of(state.record),
        unit_m=float(state.record.length_unit.metres_per_unit),
        unit=UNIT_NAMES[state.record.unit],
        title=title,
    )


def drawn(view: MarkView, href: Callable[[UUID], str]) -> DrawnMark | None:
    """One mark as the plan draws it, or None when nobody knows where it is."""
    plan = view.plan
    if plan.easting_m is None or plan.northing_m is None:
        return None
    return DrawnMark(
        e_m=plan.easting_m,
        n_m=plan.northing_m,
        label=plan.label,
        purpose=plan.purpose,
        standing=str(view.standing),
        trust=str(view.trust.trust),
        carries=plan.carries,
        href=href(plan.key),
        held=view.held_back,
    )


def zones_of(record: Record) -> list[DrawnZone]:
    return [
        DrawnZone(
            corners_m=[(float(e), float(n)) for e, n in zone.corners_m],
            sort=zone.sort,
            name=zone.name,
            closed=zone.closed,
            words=zone.words,
        )
        for zone in Zone.objects.filter(record=record).order_by("drawn_in")
    ]


def in_order(views: Iterable[MarkView]) -> list[MarkView]:
    """Control first, then by number as people count: 9 before 10, A2 before A10."""
    return sorted(views, key=lambda v: (not v.plan.is_control, natural(v.label)))


def natural(label: str) -> list[tuple[int, int, str]]:
    """A key that sorts numbers inside a label by value.

    >>> sorted(["A10", "A2", "9"], key=natural)
    ['9', 'A2', 'A10']
    """
    parts: list[tuple[int, int, str]] = []
    digits = ""
    for letter in [*label, ""]:
        if letter.isdecimal() and letter.isascii():
            digits += letter
            continue
        if digits:
            parts.append((0, int(digits[:18]), digits))
            digits = ""
        if letter:
            parts.append((1, 0, letter.casefold()))
    return parts
