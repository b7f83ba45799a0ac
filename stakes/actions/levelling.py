"""Run levels between benchmarks: closed, judged, the misclosure shared."""

from __future__ import annotations

import uuid
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from geometry.cogo.closures import LEVEL_LOOP_CLASSES, LevelClass, level_closure
from geometry.cogo.level_run import LevelRun, level_notes, level_run
from geometry.errors import GeometryError
from geometry.units import Length
from stakes.actions.control_work import (
    Worked,
    by_label_of,
    computed_length,
    draft_of,
    marks_found,
    said_of,
    verdict_of,
    worked,
)
from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.exchange.rows import Row
from stakes.kinds.control import Compared, ControlMeasured
from stakes.models import Entry, Mark, Record
from stakes.queries.tolerance import classes_of, control_class
from stakes.record import By, Refused, append
from stakes.record.lengths import Measured


@dataclass(frozen=True, slots=True)
class LevelSetup:
    """One level setup: backsight, foresight, the mark the rod stood on, and the length
    of the section when it was taken."""

    to: str
    back: Measured
    fore: Measured
    length: Measured | None = None


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
        by_label = by_label_of(record, [s.to for s in setups])
        (first,) = marks_found(record, [start]).values()
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
            results=(*_as_measured(setups), *_adjusted(setups, run, record)),
            method=short(f"{by_rule} {method}", "method", 300),
            occasion=occasion,
        )
        return append(record, said_of(fact, key, at), by=by, act=act)

    entry = once(record, key, asked, do)[0]
    return worked(entry, draft_of(record, new, sort, key, by))


def _as_measured(setups: Sequence[LevelSetup]) -> list[str]:
    """The rod readings as they were written in the field."""
    return [
        f"Measured to {s.to}: back {s.back.text}, fore {s.fore.text} {s.fore.unit}"
        + (f", length {s.length.text} {s.length.unit}" if s.length else "")
        for s in setups
    ]


def _adjusted(setups: Sequence[LevelSetup], run: LevelRun, record: Record) -> list[str]:
    unit = record.length_unit
    return [
        f"Adjusted {s.to}: {computed_length(float(z), unit).text} {unit}"
        for s, z in zip(setups[:-1], run.elevations_m[1:-1], strict=True)
    ]


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
    record: Record, run: LevelRun, setups: Sequence[LevelSetup], class_name: str
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


def _misclosure(
    record: Record, first: Mark, last: Mark, run: LevelRun, passed: bool
) -> Compared:
    unit = record.length_unit
    known = last.elevation_m - first.elevation_m
    return Compared(
        quantity="rise",
        from_mark=first.key,
        to_mark=last.key,
        measured=computed_length(known + run.misclosure_m, unit),
        computed=computed_length(known, unit),
        difference=computed_length(run.misclosure_m, unit),
        verdict="pass" if passed else "fail",
    )


def _elevation(
    record: Record, mark: Mark, elevation_m: float, start: uuid.UUID
) -> Compared:
    unit = record.length_unit
    limit = control_class(classes_of(record)).elevation
    difference = computed_length(elevation_m - mark.elevation_m, unit)
    return Compared(
        quantity="elevation",
        from_mark=mark.key,
        measured=computed_length(elevation_m, unit),
        computed=computed_length(mark.elevation_m, unit),
        difference=difference,
        tolerance=limit,
        verdict=verdict_of(difference, limit),
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
                    elevation=computed_length(float(z), record.length_unit),
                )
            )
    return rows
