"""Check stakes: what was measured beside what the record computes, with its verdict."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from dataclasses import dataclass, field
from datetime import datetime

import numpy as np

from geometry.decide import Against
from geometry.units import angle_text, half_turn
from stakes.actions.once import Act, follows, once
from stakes.actions.told import kept_apart, short
from stakes.kinds.checking import CheckSort, Judgement, StakeChecked
from stakes.models import Entry, Mark, Record
from stakes.queries import expected, judging, measuring, setups, taping
from stakes.queries.before_setting import mark_called
from stakes.queries.means import check_means, worth
from stakes.queries.setup_checks import read_angle
from stakes.queries.state import JobState, MarkView
from stakes.queries.state_then import state_then
from stakes.queries.taping import Taped
from stakes.queries.tolerance import ToleranceClass, class_of, classes_of
from stakes.record import By, Known, Refused, Said, append
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
class _Check:
    """One check being worked out."""

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
    def unit(self):  # type: ignore[no-untyped-def]
        return self.state.record.length_unit


def check_stakes(
    *,
    record: Record,
    sort: CheckSort,
    marks: Sequence[uuid.UUID],
    by: By,
    asked: Asked,
    setup: uuid.UUID | None = None,
    method: str = "",
    instrument: str = "",
    against: str = "",
    existing: bool = True,
    remark: str = "",
    photos: Sequence[str] = (),
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Check stakes and record the verdict; returns the check's key.

    `marks` are named in the order of NEEDS[sort]. Stakes among them are judged, control
    is what they are judged from; control alone is judged itself. `against` names the
    boundary (`existing` False) or existing work of a check of fit.
    """
    key = key or uuid.uuid4()
    said_with = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    check = follows(key, "check")

    def do(act: Act) -> list[Entry]:
        row = setups.setup_called(record, setup) if setup else None
        leans = [uuid.UUID(mark) for mark in row.bears_on] if row else []
        state = state_then(record, at, [*marks, *leans])
        views = _views(state, sort, marks)
        judged, others = _apart(sort, views)
        used = measuring.METHODS[row.sort] if row else method
        classes = classes_of(record, at)
        made = _Check(
            state, sort, views, asked, used, setup, _strictest(judged, sort, classes)
        )
        judgement = _JUDGE[sort](made)
        component = "e" if sort == "elevation" else "p"
        means = check_means(
            state,
            check=check,
            setup=setup,
            control=[v.key for v in others if v.plan.is_control],
            method=used,
            instrument=instrument,
            person=by.person,
        )
        value = worth(
            state, judged, others, means, component, _against(made, against, existing)
        )
        fact = StakeChecked(
            check=check,
            sort=sort,
            listed=tuple(v.key for v in judged),
            other=tuple(v.key for v in others),
            setup=setup,
            set_by=_set_by(judged),
            components=component,  # type: ignore[arg-type]
            judgement=judgement,
            corrections=tuple(made.words),
            angle=short(asked.angle, "angle", 40),
            northing=asked.northing,
            easting=asked.easting,
            against=short(against, "against", 200),
            shared=value.shared,
            grade=value.grade,
            reaches=tuple(str(r) for r in value.reaches),  # type: ignore[arg-type]
            instrument=short(instrument or (row.serial if row else ""), "instrument"),
            occasion=occasion,
            photos=tuple(photos),
        )
        said = Said(
            fact=fact,
            at=at,
            known=Known.MEASURED,
            key=key,
            private=kept_apart(remark),
        )
        return append(record, said, by=by, act=act)

    once(record, key, said_with, do)
    return check


def _views(state: JobState, sort: str, marks: Sequence[uuid.UUID]) -> list[MarkView]:
    if sort not in NEEDS:
        raise Refused(f"{sort!r} is no sort of check.", field="sort")
    if len(marks) != len(NEEDS[sort]):
        raise Refused(
            f"A check of {sort} names {' and '.join(NEEDS[sort])}.",
            do="Choose each from the list.",
            field="marks",
        )
    if len(set(marks)) < len(marks):
        raise Refused(
            "One mark is named twice.", do="Choose different marks.", field="marks"
        )
    return [mark_called(state, mark) for mark in marks]


def _apart(
    sort: str, views: Sequence[MarkView]
) -> tuple[list[MarkView], list[MarkView]]:
    """The marks judged, and those they are judged from."""
    judged = [v for v in views if v.plan.purpose == "stake"]
    if not judged:
        judged = list(views[:1]) if sort != "distance" else list(views)
    others = [v for v in views if v not in judged]
    return judged, others


def _strictest(
    judged: Sequence[MarkView], sort: str, classes: dict[str, ToleranceClass]
) -> ToleranceClass:
    component = "e" if sort == "elevation" else "p"

    def size(limits: ToleranceClass) -> float:
        limit = limits.limit(component)
        return limit.metres if limit else float("inf")

    return min((class_of(v.plan, classes) for v in judged), key=size)


def _set_by(judged: Sequence[MarkView]) -> tuple[uuid.UUID, ...]:
    found = (v.stake.setup for v in judged if v.stake and v.stake.setup)
    return tuple(dict.fromkeys(found))


def _against(made: _Check, against: str, existing: bool) -> list[Against]:
    if made.sort == "fit":
        if not against.strip():
            raise Refused(
                "A check of fit says against what.",
                do="Name the boundary or the existing work, and the sheet.",
                field="against",
            )
        return [Against.EXISTING_WORK if existing else Against.BOUNDARY]
    if made.setup is None:
        return []
    return {
        "position": [Against.CONTROL],
        "elevation": [Against.BENCHMARK],
    }.get(made.sort, [])


def _distance(made: _Check) -> Judgement:
    found = expected.distance(*made.marks)
    return _length(made, found.value, found.variance)


def _line(made: _Check) -> Judgement:
    found = expected.offset(*made.marks)
    return _length(made, found.value, found.variance)


def _fit(made: _Check) -> Judgement:
    sheet = _given(made.asked.by_sheet, "by_sheet", "what the sheet says")
    return _length(made, sheet.metres, 0.0, computed=sheet)


def _length(
    made: _Check,
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


def _angle(made: _Check) -> Judgement:
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


def _position(made: _Check) -> Judgement:
    mark = made.marks[0]
    north = _given(made.asked.northing, "northing", "the northing measured")
    east = _given(made.asked.easting, "easting", "the easting measured")
    gap = np.array([east.metres, north.metres]) - expected.place(mark)
    own = _place_covariance(made, mark) + expected.covariance(mark)
    n, e = (judging.as_measured(float(v), made.unit).text for v in gap[::-1])
    made.words.append(f"off the design: north {n}, east {e} {made.unit}")
    return judging.judge_place(gap, made.limits, own, made.unit)


def _place_covariance(made: _Check, mark: Mark) -> np.ndarray:
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


def _elevation(made: _Check) -> Judgement:
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
