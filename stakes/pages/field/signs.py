"""A mark as a row of a list: its sign, its label, and what must be known about it."""

from __future__ import annotations

from dataclasses import dataclass

from django.utils.safestring import SafeString, mark_safe

from geometry.units import Length, Unit
from stakes.drawings.signs import sign_svg
from stakes.kinds.setting import StakeSet
from stakes.queries.labels import places
from stakes.queries.state import MarkView
from stakes.record.lengths import Measured
from stakes.standing.marks import Standing, Trust


@dataclass(frozen=True, slots=True)
class Row:
    """One mark in a list."""

    view: MarkView
    sign: SafeString
    said: str


def row(view: MarkView) -> Row:
    return Row(view, sign_of(view), state_words(view))


def sign_of(view: MarkView, size: float = 22) -> SafeString:
    """The mark's sign as SVG; the words beside it say the same, so it is an ornament."""
    plan = view.plan
    drawn = sign_svg(
        plan.purpose,
        view.standing,
        view.trust.trust,
        plan.carries,
        size=size,
        title="",
    )
    return mark_safe(drawn)


def plan_numbers(view: MarkView, unit: Unit) -> dict[str, str]:
    """Where a mark is planned, as digits in the unit of the job."""
    plan, digits = view.plan, places(unit)
    said = {
        "northing": plan.northing_nm,
        "easting": plan.easting_nm,
        "elevation": plan.elevation_nm,
    }
    return {name: shown(int(nm), unit, digits) for name, nm in said.items() if nm}


def staked_numbers(fact: StakeSet, unit: Unit) -> dict[str, str]:
    """Where a stake came to stand, and how far off the design in compass words."""
    digits = places(unit) + 1
    found = {
        name: shown(int(value.nm), unit, digits)
        for name in ("northing", "easting")
        if (value := getattr(fact, name)) is not None
    }
    offs = [
        _way(off, unit, digits, ways)
        for off, ways in (
            (fact.off_north, ("north", "south")),
            (fact.off_east, ("east", "west")),
        )
        if off is not None
    ]
    return {**found, "off": ", ".join(offs)}


def shown(nanometres: int, unit: Unit, digits: int) -> str:
    """A length in the unit of the job, rounded once."""
    return Length.from_nanometres(nanometres, unit, digits).text


def _way(off: Measured, unit: Unit, digits: int, ways: tuple[str, str]) -> str:
    text = shown(int(off.nm), unit, digits)
    return f"{text.lstrip('-')} {ways[1] if text.startswith('-') else ways[0]}"


def state_words(view: MarkView) -> str:
    """What is on the ground and what may be trusted, in one short sentence."""
    if view.standing is Standing.PLANNED and view.trust.trust is Trust.NOT_CHECKED:
        return "not set yet"
    parts = [_ground(view), *_trust(view)]
    if view.held_back:
        parts.append("held")
    return ", ".join(part for part in parts if part)


def _trust(view: MarkView) -> list[str]:
    """What may be trusted: one word for both components, or each when they differ."""
    both = view.plan.carries == "both" and view.position != view.elevation
    if not both:
        return [str(view.trust.trust), view.trust.reason]
    named = (("position", view.position), ("elevation", view.elevation))
    said = [
        f"{name} {judged.trust}{f' ({judged.reason})' if judged.reason else ''}"
        for name, judged in named
    ]
    return [" and ".join(said)]


def _ground(view: MarkView) -> str:
    stake = view.stake
    if view.standing is Standing.DISTURBED and stake is not None:
        return stake.how or "disturbed"
    if stake is not None and stake.lath_down:
        return "standing, lath down"
    return str(view.standing)
