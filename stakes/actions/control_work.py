"""Measure control: recover what is found, run a traverse, run levels.

Everything is compared with the record. A disagreement stays a question; nothing is
averaged away, and no value changes before the surveyor adopts one.
"""

from __future__ import annotations

import math
import uuid
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from geometry.cogo.closures import (
    LEVEL_LOOP_CLASSES,
    TRAVERSE_CLASSES,
    Closure,
    LevelClass,
    TraverseClass,
    angular_closure,
    level_closure,
    linear_closure,
)
from geometry.cogo.level_run import level_notes, level_run
from geometry.cogo.traversing import (
    balanced_link_angles,
    carried_azimuths,
    traverse,
)
from geometry.errors import GeometryError
from geometry.units import Length, Unit
from stakes.actions.issuing import keep_draft
from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.exchange.rows import Row
from stakes.kinds.condition import MarksGone, MarksSeen
from stakes.kinds.control import Compared, ControlMeasured
from stakes.models import Draft, Entry, Mark, Record
from stakes.queries.tolerance import classes_of, control_class
from stakes.record import By, Fact, Known, Refused, Said, append
from stakes.record.lengths import Measured

NOT_FOUND = "not found"
CONDITIONS = ("undisturbed", "leaning", "hit", "put back by others", NOT_FOUND)
MOST_ROWS = 300
FINE = 4


@dataclass(frozen=True, slots=True)
class Between:
    """A distance between two marks, or the rise from the first to the second."""

    first: uuid.UUID
    second: uuid.UUID
    measured: Measured


@dataclass(frozen=True, slots=True)
class Leg:
    """One course of a traverse: the angle turned clockwise from the mark behind, the
    distance, and the number of the mark it leads to."""

    to: str
    angle_rad: float
    distance: Measured
    angle_text: str = ""


@dataclass(frozen=True, slots=True)
class LevelSetup:
    """One level setup: backsight, foresight, the mark the rod stood on, and the length
    of the section when it was taken."""

    to: str
    back: Measured
    fore: Measured
    length: Measured | None = None


@dataclass(frozen=True, slots=True)
class Worked:
    """What control work came to: its entry, the comparison, and a draft of new marks."""

    entry: Entry
    fact: ControlMeasured
    draft: Draft | None = None


def recover_control(
    *,
    record: Record,
    by: By,
    found: Mapping[uuid.UUID, str],
    distances: Sequence[Between] = (),
    rises: Sequence[Between] = (),
    method: str = "",
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Worked:
    """Record how control was found, and what was measured between what is found.

    `found`: each mark with one of CONDITIONS. Each distance and rise is compared with
    the values the record has.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    asked["found"] = sorted((str(m), c) for m, c in found.items())

    def do(act: Act) -> list[Entry]:
        marks = _marks(record, found, [*distances, *rises])
        compared = (
            *(_distance(record, marks, b) for b in distances),
            *(_rise(record, marks, b) for b in rises),
        )
        if not compared and not found:
            raise Refused(
                "Nothing was found or measured.",
                do="Say how each mark was found, and measure between them.",
                field="distances",
            )
        names = {key: mark.label for key, mark in marks.items()}
        fact = ControlMeasured(
            work=follows(key, "work"),
            sort="recovery",
            compared=compared,
            closure=_agreement(compared),
            results=tuple(questions_of(compared, names)),
            method=short(method, "method", 200),
            occasion=occasion,
        )
        said = [_said(fact, key, at), *_conditions(found, occasion, key, at)]
        return append(record, said, by=by, act=act)

    return _worked(once(record, key, asked, do)[0])


def run_traverse(
    *,
    record: Record,
    by: By,
    start: uuid.UUID,
    back: uuid.UUID,
    legs: Sequence[Leg],
    closing_angle_rad: float | None = None,
    closing_back: uuid.UUID | None = None,
    class_name: str = "construction",
    method: str = "",
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Worked:
    """Close and balance a traverse that starts on `start`, oriented on `back`.

    The last leg leads to a mark with a value (`start` for a loop). With a closing angle
    there, turned to `closing_back`, the angles are balanced first; then the compass
    rule shares the misclosure. New marks become a draft when it closes.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    new: list[Row] = []

    def do(act: Act) -> list[Entry]:
        by_label = _by_label(record, [leg.to for leg in legs])
        ends = _found(record, [start, back, *([closing_back] if closing_back else [])])
        end = _closing_mark(legs, by_label)
        chosen = _traverse_class(class_name)
        try:
            solved = _solve(
                ends, start, back, legs, end, closing_angle_rad, closing_back
            )
            closures = _closures(solved, len(legs), chosen)
        except GeometryError as error:
            raise Refused(str(error), field="legs") from error
        passed = all(c.verdict in ("pass", "not tested") for c in closures)
        places = list(zip(legs, solved.balanced.points_m[1:], strict=True))
        compared = [
            row
            for leg, place in places[:-1]
            if leg.to in by_label
            for row in _placed(record, by_label[leg.to], place)
        ]
        new[:] = _new_control(record, places, by_label) if passed else []
        fact = ControlMeasured(
            work=follows(key, "work"),
            sort="traverse",
            compared=tuple(compared),
            closure=_traverse_words(solved, closures, record.length_unit),
            results=tuple(_coordinates(record, places[:-1], passed)),
            method=short(f"{chosen.name}, {chosen.source}. {method}", "method", 300),
            occasion=occasion,
        )
        return append(record, _said(fact, key, at), by=by, act=act)

    entry = once(record, key, asked, do)[0]
    return _worked(entry, _draft_of(record, new, "traverse", key, by))


def run_levels(
    *,
    record: Record,
    by: By,
    start: uuid.UUID,
    setups: Sequence[LevelSetup],
    class_name: str = "",
    sort: str = "level loop",
    method: str = "",
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Worked:
    """Close levels that start on a benchmark and end on one (or on the same).

    The misclosure is shared by length, or by setups when no lengths were taken. Marks
    with an elevation on the way are compared; new ones become a draft when it closes.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    new: list[Row] = []

    def do(act: Act) -> list[Entry]:
        by_label = _by_label(record, [s.to for s in setups])
        (first,) = _found(record, [start]).values()
        last = by_label.get(setups[-1].to) if setups else None
        if first.elevation_m is None or last is None or last.elevation_m is None:
            raise Refused(
                "The levels do not run from one known elevation to another.",
                do="End on a benchmark of this job, or go back to the first.",
                field="setups",
                code="open run",
            )
        try:
            rises = level_notes(
                first.elevation_m,
                [s.back.metres for s in setups],
                [s.fore.metres for s in setups],
            ).rises_m
            lengths = _section_lengths(setups)
            run = level_run(first.elevation_m, rises, lengths, last.elevation_m)
        except GeometryError as error:
            raise Refused(str(error), field="setups") from error
        passed, closure, by_rule = _level_closure(record, run, setups, class_name)
        compared = [
            _elevation(record, by_label[s.to], float(z), first.key)
            for s, z in zip(setups[:-1], run.elevations_m[1:-1], strict=True)
            if s.to in by_label and by_label[s.to].elevation_m is not None
        ]
        new[:] = _new_benchmarks(record, setups, run.elevations_m, by_label, passed)
        same = " One benchmark: the loop proves the levels, not the benchmark."
        fact = ControlMeasured(
            work=follows(key, "work"),
            sort=sort,
            compared=(_misclosure(record, first, last, run, passed), *compared),
            closure=closure + (same if first.key == last.key else ""),
            results=tuple(
                f"{row.label}: {row.elevation.text} {row.elevation.unit}"
                for row in new
                if row.elevation
            ),
            method=short(f"{by_rule} {method}", "method", 300),
            occasion=occasion,
        )
        return append(record, _said(fact, key, at), by=by, act=act)

    entry = once(record, key, asked, do)[0]
    return _worked(entry, _draft_of(record, new, sort, key, by))


def questions_of(
    compared: Sequence[Compared], names: Mapping[uuid.UUID, str]
) -> list[str]:
    """What disagrees, and which marks every disagreement names: never one blamed where
    two explain it."""
    failed = [c for c in compared if c.verdict == "fail"]
    if not failed:
        return []
    said = [
        f"{names[c.from_mark]} to {names[c.to_mark]}: {c.quantity} differs by "
        f"{c.difference.text} {c.difference.unit}. Not averaged: a question."
        for c in failed
        if c.to_mark is not None and c.difference is not None
    ]
    common = set.intersection(*({c.from_mark, c.to_mark} for c in failed))
    listed = sorted(names[m] for m in common if m is not None)
    if len(listed) == 1 and len(failed) > 1:
        said.append(f"Every disagreement names {listed[0]}: measure to it again.")
    elif len(listed) == 2:
        said.append(
            f"{listed[0]} or {listed[1]}: measure from each to a third mark to tell."
        )
    else:
        said.append("No one mark explains all of it: measure the others again.")
    return said


# Comparing


def _distance(
    record: Record, marks: Mapping[uuid.UUID, Mark], between: Between
) -> Compared:
    a, b = marks[between.first], marks[between.second]
    computed = None
    if None not in (a.easting_m, a.northing_m, b.easting_m, b.northing_m):
        computed = math.hypot(a.easting_m - b.easting_m, a.northing_m - b.northing_m)
    limit = control_class(classes_of(record)).position
    return _compared(record, "distance", between, computed, limit)


def _rise(
    record: Record, marks: Mapping[uuid.UUID, Mark], between: Between
) -> Compared:
    a, b = marks[between.first], marks[between.second]
    computed = None
    if a.elevation_m is not None and b.elevation_m is not None:
        computed = b.elevation_m - a.elevation_m
    limit = control_class(classes_of(record)).elevation
    return _compared(record, "rise", between, computed, limit)


def _compared(
    record: Record,
    quantity: str,
    between: Between,
    computed_m: float | None,
    limit: Measured | None,
) -> Compared:
    said = {
        "quantity": quantity,
        "from_mark": between.first,
        "to_mark": between.second,
        "measured": between.measured,
    }
    if computed_m is None:
        return Compared(**said)
    computed = _length(computed_m, record.length_unit)
    difference = _length(between.measured.metres - computed_m, record.length_unit)
    return Compared(
        **said,
        computed=computed,
        difference=difference,
        tolerance=limit,
        verdict=_verdict(difference, limit),
    )


def _verdict(difference: Measured, limit: Measured | None) -> str:
    if limit is None:
        return "not tested"
    return "pass" if abs(int(difference.nm)) <= int(limit.nm) else "fail"


def _agreement(compared: Sequence[Compared]) -> str:
    failed = sum(c.verdict == "fail" for c in compared)
    passed = sum(c.verdict == "pass" for c in compared)
    if not compared:
        return "Nothing was measured."
    words = f"{passed} of {len(compared)} agree with the record"
    return f"{words}, {failed} do not." if failed else f"{words}."


def _conditions(
    found: Mapping[uuid.UUID, str],
    occasion: uuid.UUID | None,
    key: uuid.UUID,
    at: datetime | None,
) -> list[Said]:
    said: list[Said] = []
    for condition in CONDITIONS:
        listed = tuple(m for m, c in found.items() if c == condition)
        if not listed:
            continue
        fact: Fact = (
            MarksGone(listed=listed, occasion=occasion)
            if condition == NOT_FOUND
            else MarksSeen(
                listed=listed,
                condition=condition,  # type: ignore[arg-type]
                occasion=occasion,
            )
        )
        said.append(Said(fact=fact, at=at, key=follows(key, condition)))
    return said


# Traverse


@dataclass(frozen=True, slots=True)
class _Solved:
    balanced: object
    angles: object | None


def _solve(ends, start, back, legs, end, closing_rad, closing_back) -> _Solved:
    here, behind = _place(ends[start]), _place(ends[back])
    first = math.atan2(*(here - behind))
    angles = [leg.angle_rad for leg in legs]
    shared = None
    if closing_rad is not None and closing_back is not None:
        last = math.atan2(*(_place(ends[closing_back]) - _place(end)))
        shared = balanced_link_angles(first, [*angles, closing_rad], last)
        angles = list(shared.angles_rad[:-1])
    azimuths = carried_azimuths(first, angles)[1:]
    distances = [leg.distance.metres for leg in legs]
    return _Solved(traverse(here, azimuths, distances, _place(end)), shared)


def _closures(solved: _Solved, legs: int, by: TraverseClass) -> list[Closure]:
    run = solved.balanced
    closures = [linear_closure(run.linear_misclosure_m, run.length_m, by)]
    if solved.angles is not None:
        missed = solved.angles.misclosure_rad
        closures.append(angular_closure(missed, legs + 1, by))
    return closures


def _traverse_words(solved: _Solved, closures: Sequence[Closure], unit: Unit) -> str:
    run = solved.balanced
    missed = Length.from_metres(run.linear_misclosure_m, unit, 3)
    ratio = f"1:{run.ratio:,.0f}" if run.ratio else "exactly"
    words = f"Misses by {missed.text} {unit}, {ratio}: {closures[0].verdict}."
    if solved.angles is not None:
        seconds = math.degrees(solved.angles.misclosure_rad) * 3600
        words += f" Angles miss by {seconds:.0f} seconds: {closures[1].verdict}."
    else:
        words += " Angles were not closed."
    return words


def _closing_mark(legs: Sequence[Leg], by_label: Mapping[str, Mark]) -> Mark:
    end = by_label.get(legs[-1].to) if legs else None
    if end is None or end.easting_m is None or end.northing_m is None:
        raise Refused(
            "The traverse does not end on a mark with a place.",
            do="Its last leg leads to a control mark of this job, or back to the first.",
            field="legs",
            code="open traverse",
        )
    return end


def _traverse_class(name: str) -> TraverseClass:
    for chosen in TRAVERSE_CLASSES:
        if chosen.name == name:
            return chosen
    raise Refused(f"There is no class {name[:40]!r}.", field="class_name")


def _placed(record: Record, mark: Mark, place: np.ndarray) -> list[Compared]:
    """A mark the record knows already, met on the way: compared, never changed."""
    if mark.easting_m is None or mark.northing_m is None:
        return []
    unit = record.length_unit
    limit = control_class(classes_of(record)).position
    rows = []
    for quantity, got, had in (
        ("northing", float(place[1]), mark.northing_m),
        ("easting", float(place[0]), mark.easting_m),
    ):
        difference = _length(got - had, unit)
        rows.append(
            Compared(
                quantity=quantity,
                from_mark=mark.key,
                measured=_length(got, unit),
                computed=_length(had, unit),
                difference=difference,
                tolerance=limit,
                verdict=_verdict(difference, limit),
            )
        )
    return rows


def _coordinates(record: Record, places, passed: bool) -> list[str]:
    unit = record.length_unit
    said = [
        f"{leg.to}: {_length(float(p[1]), unit).text}, {_length(float(p[0]), unit).text}"
        for leg, p in places
    ]
    if not passed:
        said.append("It does not close in its class: nothing was drafted from it.")
    return said


def _new_control(record: Record, places, by_label: Mapping[str, Mark]) -> list[Row]:
    unit = record.length_unit
    return [
        Row(
            row=number,
            label=leg.to,
            purpose="control",
            carries="position",
            northing=_length(float(place[1]), unit),
            easting=_length(float(place[0]), unit),
        )
        for number, (leg, place) in enumerate(places[:-1], 1)
        if leg.to not in by_label
    ]


# Levels


def _section_lengths(setups: Sequence[LevelSetup]) -> list[float]:
    """Lengths when all were taken; else one for each setup."""
    taken = [s.length.metres for s in setups if s.length is not None]
    if taken and len(taken) != len(setups):
        raise Refused(
            f"{len(taken)} of {len(setups)} setups have a length.",
            do="Give all of them, or none.",
            field="setups",
        )
    return taken or [1.0] * len(setups)


def _level_closure(
    record: Record, run, setups: Sequence[LevelSetup], class_name: str
) -> tuple[bool, str, str]:
    unit = record.length_unit
    missed = Length.from_metres(run.misclosure_m, unit, 4)
    chosen = _level_class(class_name) if class_name else None
    if chosen is not None:
        if setups[0].length is None:
            raise Refused(
                "A class of levelling needs the length of the run.",
                do="Give the lengths, or leave the class empty.",
                field="class_name",
            )
        judged = level_closure(run.misclosure_m, run.length_m, chosen)
        allowed = Length.from_metres(judged.allowed, unit, 4)
        passed, rule = judged.verdict == "pass", f"{chosen.name}, {chosen.source}."
        words = f"allowed {allowed.text} {unit}"
    else:
        limit = control_class(classes_of(record)).elevation
        passed = limit is not None and abs(run.misclosure_m) <= limit.metres
        rule = "Shared by setups." if setups[0].length is None else "Shared by length."
        words = f"tolerance of control {limit.text} {limit.unit}" if limit else ""
    verdict = "pass" if passed else "fail"
    return passed, f"Misses by {missed.text} {unit}, {words}: {verdict}.", rule


def _level_class(name: str) -> LevelClass:
    for chosen in LEVEL_LOOP_CLASSES:
        if chosen.name == name:
            return chosen
    raise Refused(f"There is no class {name[:40]!r}.", field="class_name")


def _misclosure(record: Record, first: Mark, last: Mark, run, passed: bool) -> Compared:
    unit = record.length_unit
    known = last.elevation_m - first.elevation_m
    return Compared(
        quantity="rise",
        from_mark=first.key,
        to_mark=last.key,
        measured=_length(known + run.misclosure_m, unit),
        computed=_length(known, unit),
        difference=_length(run.misclosure_m, unit),
        verdict="pass" if passed else "fail",
    )


def _elevation(
    record: Record, mark: Mark, elevation_m: float, start: uuid.UUID
) -> Compared:
    unit = record.length_unit
    limit = control_class(classes_of(record)).elevation
    difference = _length(elevation_m - mark.elevation_m, unit)
    return Compared(
        quantity="elevation",
        from_mark=mark.key,
        measured=_length(elevation_m, unit),
        computed=_length(mark.elevation_m, unit),
        difference=difference,
        tolerance=limit,
        verdict=_verdict(difference, limit),
    )


def _new_benchmarks(
    record: Record,
    setups: Sequence[LevelSetup],
    elevations_m: np.ndarray,
    by_label: Mapping[str, Mark],
    passed: bool,
) -> list[Row]:
    """Numbers on the way that the job does not know, but for turning points."""
    if not passed:
        return []
    rows = []
    for number, (setup, z) in enumerate(
        zip(setups[:-1], elevations_m[1:-1], strict=True), 1
    ):
        if setup.to and setup.to not in by_label and not setup.to.startswith("TP"):
            rows.append(
                Row(
                    row=number,
                    label=setup.to,
                    purpose="benchmark",
                    carries="elevation",
                    elevation=_length(float(z), record.length_unit),
                )
            )
    return rows


# What all share


def _marks(
    record: Record,
    found: Mapping[uuid.UUID, str],
    measured: Sequence[Between],
) -> dict[uuid.UUID, Mark]:
    if len(found) + len(measured) > MOST_ROWS:
        raise Refused(
            f"{len(found) + len(measured)} rows were sent.",
            do=f"Send at most {MOST_ROWS} at once.",
        )
    for mark, condition in found.items():
        if condition not in CONDITIONS:
            raise Refused(f"{condition[:30]!r} is no condition.", where=str(mark))
    for between in measured:
        if between.first == between.second:
            raise Refused(
                "A measurement goes from a mark to itself.", field="distances"
            )
    keys = {*found, *(m for b in measured for m in (b.first, b.second))}
    return _found(record, keys)


def _found(record: Record, keys) -> dict[uuid.UUID, Mark]:
    marks = {m.key: m for m in Mark.objects.filter(record=record, key__in=set(keys))}
    if len(marks) != len(set(keys)):
        raise Refused("A mark named here is not on this job.", code="no mark")
    return marks


def _by_label(record: Record, labels: Sequence[str]) -> dict[str, Mark]:
    if len(labels) > MOST_ROWS:
        raise Refused(f"At most {MOST_ROWS} rows at once.")
    rows = Mark.objects.filter(record=record, label__in=labels)
    return {m.label: m for m in rows}


def _place(mark: Mark) -> np.ndarray:
    if mark.easting_m is None or mark.northing_m is None:
        raise Refused(f"{mark.label} has no place.", do="Adopt a value for it first.")
    return np.array([mark.easting_m, mark.northing_m])


def _length(metres: float, unit: Unit) -> Measured:
    return Measured.of(Length.from_metres(metres, unit, FINE))


def _said(fact: Fact, key: uuid.UUID, at: datetime | None) -> Said:
    return Said(fact=fact, at=at, known=Known.MEASURED, key=key)


def _draft_of(
    record: Record, rows: Sequence[Row], sort: str, key: uuid.UUID, by: By
) -> Draft | None:
    """New marks wait as a draft, like any plan: to be checked and issued."""
    kept = Draft.objects.filter(key=follows(key, "draft")).first()
    if kept is not None or not rows:
        return kept
    return keep_draft(
        record=record,
        rows=rows,
        title=f"Control from a {sort}",
        sort="marks",
        source=f"{sort}, measured by {by.name}",
        by=by,
        key=follows(key, "draft"),
    )


def _worked(entry: Entry, draft: Draft | None = None) -> Worked:
    from stakes.record.reading import decoded

    fact = decoded(entry, {}).fact
    assert isinstance(fact, ControlMeasured)
    return Worked(entry, fact, draft)
