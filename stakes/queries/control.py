"""Control: the values it ever had, its last check, and what was set on an old value."""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from uuid import UUID

import numpy as np

from geometry.units import Length
from stakes.kinds.control import Compared, ControlMeasured, ValueAdopted
from stakes.kinds.planning import MarksPlanned, PlannedMark
from stakes.kinds.setups import SetupOpened
from stakes.models import Mark, Record
from stakes.queries.drawing import in_order
from stakes.queries.plan import decimals
from stakes.queries.setups import GIVES_HEIGHT
from stakes.queries.state import JobState, MarkView, job_state
from stakes.record import Counted, reading
from stakes.record.lengths import Measured

SHELF_LIFE = timedelta(days=7)
"""How long a check of control is relied on by default: weekly, and after any event that
may have moved it (common practice, from memory)."""


@dataclass(frozen=True, slots=True)
class Value:
    """One value a mark had: adopted, or as it was planned before any was adopted."""

    counted: Counted
    key: UUID | None
    northing: Measured | None
    easting: Measured | None
    elevation: Measured | None
    source: str
    dated: str = ""
    reason: str = ""
    sd: str = ""


@dataclass(frozen=True, slots=True)
class OldValueStake:
    """A stake set from a setup that used another value of a mark than it has now, and
    by how much its place differs for that (north, east, up; None: not computed)."""

    view: MarkView
    setup: UUID
    north: Length | None = None
    east: Length | None = None
    up: Length | None = None

    @property
    def is_same(self) -> bool:
        """Computed, and no different: what changed is not what it was set by."""
        told = [d for d in (self.north, self.east, self.up) if d is not None]
        return bool(told) and not any(d.nanometres for d in told)

    @property
    def words(self) -> str:
        parts = [
            f"{abs(float(d.text)):g} {d.unit} {words[float(d.text) < 0]}"
            for d, words in (
                (self.north, ("north", "south")),
                (self.east, ("east", "west")),
                (self.up, ("up", "down")),
            )
            if d is not None and d.nanometres
        ]
        return ", ".join(parts) or "nothing that can be computed"


@dataclass(frozen=True, slots=True)
class ControlLine:
    """A control mark as the control page lists it."""

    view: MarkView
    values: Sequence[Value]
    checked_at: datetime | None
    expires_at: datetime | None
    expired: bool
    old_stakes: Sequence[OldValueStake]


def values_of(record: Record, mark: UUID) -> list[Value]:
    """Every value a mark was ever given by adoption, in the order of the facts."""
    said = reading.entries(record, mark=mark, kinds=[ValueAdopted.KIND])
    return [_adopted(c) for c in said]


def all_values(record: Record, known: int | None = None) -> dict[UUID, list[Value]]:
    """The values of every mark: as planned first, then each adopted one."""
    found: dict[UUID, list[Value]] = defaultdict(list)
    kinds = [MarksPlanned.KIND, ValueAdopted.KIND]
    for counted in reading.entries(record, kinds=kinds, known=known):
        match counted.fact:
            case MarksPlanned(rows=rows):
                for row in rows:
                    if row.purpose in ("control", "benchmark"):
                        found[row.mark].append(_planned(counted, row))
            case ValueAdopted(mark=mark):
                found[mark].append(_adopted(counted))
    return found


def _planned(counted: Counted, row: PlannedMark) -> Value:
    return Value(
        counted,
        None,
        row.northing,
        row.easting,
        row.elevation,
        "as planned, not adopted",
    )


def _adopted(counted: Counted) -> Value:
    fact = counted.fact
    assert isinstance(fact, ValueAdopted)
    said = ""
    if fact.covariance is not None:
        plan = math.sqrt(max(float(fact.covariance.nn), float(fact.covariance.ee)))
        up = math.sqrt(float(fact.covariance.zz))
        parts = [f"{plan:.1f} mm in plan"] if plan else []
        parts += [f"{up:.1f} mm in height"] if up else []
        said = ", ".join(parts)
    return Value(
        counted,
        fact.value,
        fact.northing,
        fact.easting,
        fact.elevation,
        fact.source,
        fact.dated,
        fact.reason,
        said,
    )


def control_lines(
    state: JobState, now: datetime, shelf_life: timedelta = SHELF_LIFE
) -> list[ControlLine]:
    """Every control mark and benchmark with values, last check and shelf life."""
    values = all_values(state.record, state.known)
    opened = _openings(state)
    lines = []
    for view in in_order(state.marks.values()):
        if not view.plan.is_control:
            continue
        checked = _last_check(view)
        expires = checked + shelf_life if checked else None
        lines.append(
            ControlLine(
                view=view,
                values=values.get(view.key, []),
                checked_at=checked,
                expires_at=expires,
                expired=bool(expires and expires < now),
                old_stakes=_old_stakes(state, view.key, values, opened),
            )
        )
    return lines


def _last_check(view: MarkView) -> datetime | None:
    if view.stake is None:
        return None
    passed = [p.passed_at for p in view.stake.proofs("pe") if p.passed_at]
    return max(passed, default=None)


def set_on_old_value(record: Record, mark: UUID) -> list[OldValueStake]:
    """Stakes that stand on a value the mark no longer has, with how much they differ."""
    state = job_state(record)
    return _old_stakes(state, mark, all_values(record), _openings(state))


def _openings(state: JobState) -> dict[UUID, SetupOpened]:
    said = reading.entries(
        state.record, kinds=[SetupOpened.KIND], at=state.at, known=state.known
    )
    return {c.fact.setup: c.fact for c in said if isinstance(c.fact, SetupOpened)}


def _old_stakes(
    state: JobState,
    mark: UUID,
    values: Mapping[UUID, Sequence[Value]],
    opened: Mapping[UUID, SetupOpened],
) -> list[OldValueStake]:
    now = state.marks[mark].plan.value if mark in state.marks else None
    if now is None:
        return []
    old = {
        key: fact
        for key, fact in opened.items()
        if any(u.mark == mark and u.value not in (None, now) for u in fact.used)
    }
    if not old:
        return []
    set_from = [
        view
        for view in state.marks.values()
        if view.stake and view.stake.setup in old and not view.plan.is_control
    ]
    found = [
        _differs(state, view, old[view.stake.setup], values)
        for view in in_order(set_from)
    ]
    return [stake for stake in found if not stake.is_same]


def _differs(
    state: JobState,
    view: MarkView,
    opened: SetupOpened,
    values: Mapping[UUID, Sequence[Value]],
) -> OldValueStake:
    """Where the stake is by the values of now, less where it was set by the old ones.

    What the instrument measured is held: a setup on a mark moves with that mark and
    turns with its orientation; any other setup moves as its marks moved on the whole.
    """
    plan, unit = view.plan, state.record.length_unit
    pairs = [p for u in opened.used if (p := _pair(state, u, values)) is not None]
    north = east = up = None
    if (
        plan.easting_m is not None
        and plan.northing_m is not None
        and "p" in (view.stake.components if view.stake else "p")
    ):
        moved = _moved_by(opened, pairs, np.array([plan.easting_m, plan.northing_m]))
        if moved is not None:
            east = Length.from_metres(float(moved[0]), unit, decimals(unit))
            north = Length.from_metres(float(moved[1]), unit, decimals(unit))
    free = opened.sort == "free station"
    rises = [
        p.up for p in pairs if p.up is not None and (free or p.role in GIVES_HEIGHT)
    ]
    if rises:
        up = Length.from_metres(max(rises, key=abs), unit, decimals(unit))
    return OldValueStake(view, opened.setup, north, east, up)


@dataclass(frozen=True, slots=True)
class _Pair:
    role: str
    old: np.ndarray | None
    new: np.ndarray | None
    up: float | None


def _pair(
    state: JobState, used: object, values: Mapping[UUID, Sequence[Value]]
) -> _Pair | None:
    mark, key, role = used.mark, used.value, used.role  # type: ignore[attr-defined]
    view = state.marks.get(mark)
    if view is None:
        return None
    had = next((v for v in values.get(mark, ()) if v.key == key), None)
    plan = view.plan
    new = None
    if plan.easting_m is not None and plan.northing_m is not None:
        new = np.array([plan.easting_m, plan.northing_m])
    old = new
    if had and had.northing and had.easting:
        old = np.array([had.easting.metres, had.northing.metres])
    up = None
    if plan.elevation_m is not None:
        was = had.elevation.metres if had and had.elevation else plan.elevation_m
        up = plan.elevation_m - was
    return _Pair(role, old, new, up)


def _moved_by(
    opened: SetupOpened, pairs: Iterable[_Pair], at: np.ndarray
) -> np.ndarray | None:
    usable = [p for p in pairs if p.old is not None and p.new is not None]
    if not usable:
        return None
    stood = next((p for p in usable if p.role == "occupied"), None)
    back = next((p for p in usable if p.role == "oriented on"), None)
    if opened.sort == "total station on a mark" and stood and back:
        turn = _azimuth(stood.new, back.new) - _azimuth(stood.old, back.old)
        return np.asarray(stood.new + _turned(at - stood.old, turn) - at)
    old = np.array([p.old for p in usable])
    new = np.array([p.new for p in usable])
    return _as_a_whole(old, new, at)


def _as_a_whole(old: np.ndarray, new: np.ndarray, at: np.ndarray) -> np.ndarray:
    """Shift and turn that fit old to new best, scale held at one, applied at a place."""
    a, b = old - old.mean(axis=0), new - new.mean(axis=0)
    turn = math.atan2(
        float((a[:, 1] * b[:, 0] - a[:, 0] * b[:, 1]).sum()), float((a * b).sum())
    )
    return np.asarray(new.mean(axis=0) + _turned(at - old.mean(axis=0), turn) - at)


def _azimuth(a: np.ndarray | None, b: np.ndarray | None) -> float:
    assert a is not None and b is not None
    return math.atan2(b[0] - a[0], b[1] - a[1])


def _turned(v: np.ndarray, turn_rad: float) -> np.ndarray:
    """A vector (E, N) turned clockwise."""
    c, s = math.cos(turn_rad), math.sin(turn_rad)
    return np.array([v[0] * c + v[1] * s, -v[0] * s + v[1] * c])


@dataclass(frozen=True, slots=True)
class WorkRow:
    """One comparison of control work, with the numbers of its marks."""

    between: str
    marks: frozenset[UUID]
    row: Compared


@dataclass(frozen=True, slots=True)
class Work:
    """Control work as it is shown."""

    counted: Counted
    fact: ControlMeasured
    rows: Sequence[WorkRow]


def measured_work(record: Record) -> list[Work]:
    """All control work measured so far, the last first."""
    labels = dict(Mark.objects.filter(record=record).values_list("key", "label"))
    found = []
    for counted in reading.entries(record, kinds=[ControlMeasured.KIND])[::-1]:
        fact = counted.fact
        assert isinstance(fact, ControlMeasured)
        rows = [_work_row(row, labels) for row in fact.compared]
        found.append(Work(counted, fact, rows))
    return found


def _work_row(row: Compared, labels: Mapping[UUID, str]) -> WorkRow:
    ends = [m for m in (row.from_mark, row.to_mark) if m is not None]
    between = " to ".join(labels.get(m, "?") for m in ends)
    return WorkRow(between, frozenset(ends), row)


def disagreements(record: Record, work: Sequence[Work] | None = None) -> list[WorkRow]:
    """What was measured against the record and does not agree, until one of its marks
    gets a new value or the same is measured again and agrees."""
    done = measured_work(record) if work is None else work
    valued = {
        mark: values[-1].counted.happened_at
        for mark, values in all_values(record).items()
        if values
    }
    seen: set[tuple[str, frozenset[UUID]]] = set()
    found = []
    for one in done:
        for row in one.rows:
            what = (row.row.quantity, row.marks)
            if what in seen or row.row.verdict not in ("pass", "fail"):
                continue
            seen.add(what)
            later = any(
                valued[m] > one.counted.happened_at for m in row.marks if m in valued
            )
            if row.row.verdict == "fail" and not later:
                found.append(row)
    return found
