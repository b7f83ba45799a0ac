"""Checks of stakes worked out: what was measured, what the record computes, judged."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from geometry.checked import Array
from geometry.units import Unit, angle_text, half_turn
from stakes.kinds.checking import Judgement
from stakes.models import Mark
from stakes.queries import expected, judging, measuring, setups, taping
from stakes.queries.setup_checks import read_angle
from stakes.queries.state import JobState, MarkView
from stakes.queries.taping import Taped
from stakes.queries.tolerance import ToleranceClass
from stakes.record import Refused
from stakes.record.lengths import Measured

NEEDS: dict[str, tuple[str, ...]] = {
    "distance": ("one end", "other end"),
    "diagonal": ("one end", "other end"),
    "angle": ("angle at", "from", "to"),
    "position": ("mark",),
    "elevation": ("mark",),
    "line": ("mark", "line from", "line to"),
    "fit": ("mark",),
}
"""The marks each sort of check names, in their order."""

TAPED = frozenset({"distance", "diagonal", "fit"})
"""Checks whose length may be taped, with its corrections."""


@dataclass(frozen=True, slots=True)
class Asked:
    """What a crew measured. `measured` is a length as read: a distance, an elevation, an
    offset right of a line, a distance to existing work."""

    measured: Measured | None = None
    angle: str = ""
    northing: Measured | None = None
    easting: Measured | None = None
    by_sheet: Measured | None = None
    taped: Taped | None = None


@dataclass(slots=True)
class Checked:
    """One check of stakes being worked out."""

    state: JobState
    sort: str
    views: Sequence[MarkView]
    asked: Asked
    method: str
    setup: uuid.UUID | None
    limits: ToleranceClass
    words: list[str] = field(default_factory=list)

    @property
    def marks(self) -> list[Mark]:
        return [view.plan for view in self.views]

    @property
    def unit(self) -> Unit:
        return self.state.record.length_unit

    def judge(self) -> Judgement:
        """The verdict; what was corrected for is in `words` afterwards."""
        return _JUDGE[self.sort](self)


def _distance(made: Checked) -> Judgement:
    found = expected.distance(*made.marks)
    return _length(made, found.value, found.variance)


def _line(made: Checked) -> Judgement:
    found = expected.offset(*made.marks)
    return _length(made, found.value, found.variance)


def _fit(made: Checked) -> Judgement:
    sheet = _given(made.asked.by_sheet, "by_sheet", "what the sheet says")
    return _length(made, sheet.metres, 0.0, computed=sheet)


def _length(
    made: Checked,
    computed_m: float,
    variance: float,
    computed: Measured | None = None,
) -> Judgement:
    read = _given(made.asked.measured, "measured", "what was measured")
    true_m = read.metres
    if made.sort in TAPED and true_m <= 0:
        raise Refused(
            "A distance is above zero.", do="Type it without a sign.", field="measured"
        )
    if made.asked.taped is not None:
        corrected = taping.corrected(read.metres, made.asked.taped, made.unit)
        true_m, made.words = corrected.metres, list(corrected.words)
    own = measuring.length_variance(made.method, abs(true_m))
    return judging.judge(
        true_m - computed_m,
        made.limits,
        "p",
        measuring.sigma(own, variance),
        made.unit,
        measured=read,
        computed=computed or judging.as_measured(computed_m, made.unit),
    )


def _angle(made: Checked) -> Judgement:
    """An angle is judged by its length across, at the farthest mark judged."""
    at, back, fore = made.marks
    found = expected.angle(at, back, fore)
    reading = read_angle(made.asked.angle, "angle")
    legs = [expected.distance(at, leg).value for leg in (back, fore)]
    moved = [
        leg
        for leg, mark in zip(legs, (back, fore), strict=True)
        if mark.purpose == "stake"
    ]
    reach = max(moved) if moved else min(legs)
    u = measuring.sigma(found.variance, measuring.angle_variance()) * reach
    made.words.append(
        f"{angle_text(reading)} measured, {angle_text(found.value)} computed; judged "
        f"across at {judging.as_measured(reach, made.unit).text} {made.unit}"
    )
    across = float(half_turn(reading - found.value)) * reach
    return judging.judge(across, made.limits, "p", u, made.unit)


def _position(made: Checked) -> Judgement:
    mark = made.marks[0]
    north = _given(made.asked.northing, "northing", "the northing measured")
    east = _given(made.asked.easting, "easting", "the easting measured")
    gap = np.array([east.metres, north.metres]) - expected.place(mark)
    own = _place_covariance(made, mark) + expected.covariance(mark)
    n, e = (judging.as_measured(float(v), made.unit).text for v in gap[::-1])
    made.words.append(f"off the design: north {n}, east {e} {made.unit}")
    return judging.judge_place(gap, made.limits, own, made.unit)


def _place_covariance(made: Checked, mark: Mark) -> Array:
    if made.setup is None:
        return measuring.place_covariance(made.method, mark)
    opened = setups.opening_of(made.state.record, made.setup)
    stand = setups.stand_of(made.state, opened, [mark.key], None)
    return measuring.place_covariance(
        stand.method,
        mark,
        occupied=stand.occupied,
        backsight=stand.backsight,
        station=stand.station,
        sights=stand.leaning("oriented on"),
    )


def _elevation(made: Checked) -> Judgement:
    """A hub is checked against the elevation it was set to have, else the design."""
    mark = made.marks[0]
    read = _given(made.asked.measured, "measured", "the elevation measured")
    wanted = _hub_nm(made.state, made.views[0])
    own = measuring.height_variance(made.method)
    return judging.judge(
        (int(read.nm) - wanted) / 1e9,
        made.limits,
        "e",
        measuring.sigma(own, expected.height_variance(mark)),
        made.unit,
        measured=read,
        computed=judging.as_measured(wanted / 1e9, made.unit),
    )


def _hub_nm(state: JobState, view: MarkView) -> int:
    """What the top of the stake should read: as it was set, for cuts were given from it."""
    fact = setups.set_fact(state, view)
    if fact is not None and fact.elevation is not None:
        return int(fact.elevation.nm)
    return expected.height_nm(view.plan)


def _given(value: Measured | None, field: str, what: str) -> Measured:
    if value is None:
        raise Refused(f"The check does not say {what}.", do="Type it.", field=field)
    return value


_JUDGE = {
    "distance": _distance,
    "diagonal": _distance,
    "angle": _angle,
    "position": _position,
    "elevation": _elevation,
    "line": _line,
    "fit": _fit,
}
