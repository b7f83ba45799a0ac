"""The checks of a setup: what was measured to a mark beside what the record computes."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal
from uuid import UUID

import numpy as np

from geometry.checked import Array
from geometry.errors import GeometryError
from geometry.precision import Fix, resected
from geometry.units import Angle, Length, Unit, angle_text, half_turn
from stakes.kinds.checking import Judgement
from stakes.kinds.setups import SetupCheck, UsedMark
from stakes.models import Mark
from stakes.queries import expected, judging, measuring
from stakes.queries.tolerance import ToleranceClass
from stakes.record import Refused
from stakes.record.lengths import Measured

Quantity = Literal["distance", "direction", "position", "elevation"]

MEASURES: dict[str, tuple[Quantity, ...]] = {
    "total station on a mark": ("distance", "direction", "position", "elevation"),
    "free station": ("position", "distance", "elevation"),
    "satellite": ("position", "elevation"),
    "level run": ("elevation",),
    "laser": ("elevation",),
    "tape": ("distance",),
    "string": ("distance",),
}
"""What each sort of setup can measure to check itself, the usual first."""


@dataclass(frozen=True, slots=True)
class CheckMade:
    """What a crew measured to a mark to check its setup; the record computes the rest.

    A distance of a string is the mark's offset from it, right positive.
    """

    mark: UUID
    quantity: Quantity
    measured: Measured | None = None
    angle: str = ""
    northing: Measured | None = None
    easting: Measured | None = None
    remark: str = ""


@dataclass(frozen=True, slots=True)
class Sight:
    """One mark sighted from a free station: horizontal distance, circle reading."""

    mark: UUID
    distance: Measured
    direction: str


@dataclass(frozen=True, slots=True)
class Stand:
    """A setup as its checks see it: its sort, the marks it leans on, where it stands."""

    sort: str
    used: Sequence[UsedMark]
    marks: dict[UUID, Mark]
    unit: Unit
    limits: ToleranceClass
    station: Array | None = None

    def leaning(self, *roles: str) -> list[Mark]:
        return [self.marks[u.mark] for u in self.used if u.role in roles]

    @property
    def occupied(self) -> Mark | None:
        return next(iter(self.leaning("occupied")), None)

    @property
    def backsight(self) -> Mark | None:
        return next(iter(self.leaning("oriented on")), None)

    @property
    def method(self) -> str:
        return measuring.METHODS[self.sort]


def checks_of(
    stand: Stand, made: Sequence[CheckMade], *, closing: bool = False
) -> tuple[SetupCheck, ...]:
    """Each check with what the record computes, its uncertainty and its verdict."""
    return tuple(_check(stand, one, closing) for one in made)


def fix_of(stand: Stand, sights: Sequence[Sight]) -> Fix:
    """Where a free station stands, from its sights; Refused when they do not fix it."""
    marks = [stand.marks[s.mark] for s in sights]
    try:
        return resected(
            [expected.place(m) for m in marks],
            [s.distance.metres for s in sights],
            [read_angle(s.direction, "sights") for s in sights],
            measuring.STATION,
            [expected.covariance(m) for m in marks],
        )
    except GeometryError as error:
        raise expected.refused_by(error, "sights") from error


def residual_words(stand: Stand, sights: Sequence[Sight], fix: Fix) -> list[str]:
    """What each sight leaves over, in words for the entry."""
    places = 3 if stand.unit.is_foot else 4
    said = []
    for sight, (east, north) in zip(sights, fix.residuals_m, strict=True):
        n, e = (
            Length.from_metres(float(v), stand.unit, places).text for v in (north, east)
        )
        said.append(f"{stand.marks[sight.mark].label}: N {n}, E {e} {stand.unit}")
    return said


def misfit_of(stand: Stand, fix: Fix) -> str:
    """Why the sights of a free station do not agree; empty when they do."""
    worst = float(np.hypot(*fix.residuals_m.T).max())
    limit = stand.limits.position
    if fix.verdict == "fail":
        return fix.reason
    if limit is not None and worst > limit.metres:
        off = judging.as_measured(worst, stand.unit)
        return f"one sight is off by {off.text} {off.unit}"
    return ""


def read_angle(text: str, field: str) -> float:
    """An angle as typed, in radians; Refused with what to type instead."""
    try:
        return float(Angle.parse(text).radians)
    except GeometryError as error:
        raise expected.refused_by(error, field) from error


def _check(stand: Stand, made: CheckMade, closing: bool) -> SetupCheck:
    if made.quantity not in MEASURES[stand.sort]:
        raise Refused(
            f"A {stand.sort} does not check by {made.quantity}.",
            do=f"Check it by {' or '.join(MEASURES[stand.sort])}.",
            field="quantity",
        )
    judged, words = _JUDGE[made.quantity](stand, made)
    leans = made.mark in {u.mark for u in stand.used}
    # The loop of a level run closed on its own benchmark proves the run.
    loop = closing and stand.sort == "level run"
    return SetupCheck(
        mark=made.mark,
        quantity=made.quantity,
        measured=judged.measured,
        computed=judged.computed,
        difference=judged.difference,
        tolerance=judged.tolerance,
        uncertainty=judged.uncertainty,
        northing=made.northing,
        easting=made.easting,
        components="e" if made.quantity == "elevation" else "p",
        reason=judged.reason,
        oriented_on=leans and not loop,
        verdict=judged.verdict,
        remark=". ".join(part for part in (words, made.remark) if part),
    )


def _distance(stand: Stand, made: CheckMade) -> tuple[Judgement, str]:
    mark, measured = stand.marks[made.mark], _given(made.measured)
    if stand.sort == "string":
        return _offset(stand, mark, measured)
    occupied = stand.occupied or _first_held(stand, mark)
    if occupied is not None:
        found = expected.distance(occupied, mark)
    elif stand.station is not None:
        found = expected.distance_from(stand.station, np.zeros((2, 2)), mark)
    else:
        raise Refused(
            "The record does not know where this setup stands.",
            do="Check it by a position, or type the sights of the free station.",
            field="quantity",
        )
    own = measuring.length_variance(stand.method, found.value)
    return _one(stand, "p", measured, found.value, own + found.variance), ""


def _first_held(stand: Stand, mark: Mark) -> Mark | None:
    """A tape is checked from the first mark it is held on, other than the target."""
    return next((m for m in stand.leaning("held") if m.key != mark.key), None)


def _offset(stand: Stand, mark: Mark, measured: Measured) -> tuple[Judgement, str]:
    start, end = stand.leaning("held")[:2]
    found = expected.offset(mark, start, end)
    own = measuring.length_variance("string", 0.0)
    words = f"Offset from the string {start.label} to {end.label}, right positive"
    return _one(stand, "p", measured, found.value, own + found.variance), words


def _direction(stand: Stand, made: CheckMade) -> tuple[Judgement, str]:
    mark, at, back = stand.marks[made.mark], stand.occupied, stand.backsight
    if at is None or back is None or mark.key == back.key:
        raise Refused(
            "An angle is checked from an occupied mark, to a mark other than the "
            "one oriented on.",
            do="Choose another mark, or check by distance.",
            field="mark",
        )
    found = expected.angle(at, back, mark)
    reading = read_angle(made.angle, "angle")
    reach = expected.distance(at, mark).value
    across = float(half_turn(reading - found.value)) * reach
    u = measuring.sigma(found.variance, measuring.angle_variance()) * reach
    words = f"{angle_text(reading)} measured, {angle_text(found.value)} expected"
    return judging.judge(across, stand.limits, "p", u, stand.unit), words


def _position(stand: Stand, made: CheckMade) -> tuple[Judgement, str]:
    mark = stand.marks[made.mark]
    north, east = _given(made.northing, "northing"), _given(made.easting, "easting")
    gap = np.array([east.metres, north.metres]) - expected.place(mark)
    own = measuring.place_covariance(
        stand.method,
        mark,
        occupied=stand.occupied,
        backsight=stand.backsight,
        station=stand.station,
        sights=stand.leaning("oriented on"),
    )
    judged = judging.judge_place(
        gap, stand.limits, own + expected.covariance(mark), stand.unit
    )
    n, e = (judging.as_measured(float(v), stand.unit).text for v in gap[::-1])
    return judged, f"Off N {n}, E {e} {stand.unit}"


def _elevation(stand: Stand, made: CheckMade) -> tuple[Judgement, str]:
    mark, measured = stand.marks[made.mark], _given(made.measured)
    height_m = expected.height_nm(mark) / 1e9
    own = measuring.height_variance(stand.method)
    variance = own + expected.height_variance(mark)
    return _one(stand, "e", measured, height_m, variance), ""


def _one(
    stand: Stand, component: str, measured: Measured, computed_m: float, variance: float
) -> Judgement:
    return judging.judge(
        measured.metres - computed_m,
        stand.limits,
        component,
        measuring.sigma(variance),
        stand.unit,
        measured=measured,
        computed=judging.as_measured(computed_m, stand.unit),
    )


def _given(value: Measured | None, field: str = "measured") -> Measured:
    if value is None:
        raise Refused(
            "The check says nothing was measured.",
            do="Type what was measured, or leave the check out.",
            field=field,
        )
    return value


_JUDGE = {
    "distance": _distance,
    "direction": _direction,
    "position": _position,
    "elevation": _elevation,
}
