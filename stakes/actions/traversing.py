"""Run a traverse between known marks: closed, judged by its class, balanced."""

from __future__ import annotations

import math
import uuid
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from geometry.cogo.closures import (
    TRAVERSE_CLASSES,
    Closure,
    TraverseClass,
    angular_closure,
    linear_closure,
)
from geometry.cogo.traversing import (
    BalancedAngles,
    Traverse,
    balanced_link_angles,
    carried_azimuths,
    traverse,
)
from geometry.errors import GeometryError
from geometry.units import Length, Unit, angle_text
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

Placed = Sequence[tuple["Leg", np.ndarray]]


@dataclass(frozen=True, slots=True)
class Leg:
    """One course of a traverse: the angle turned clockwise from the mark behind, the
    distance, and the number of the mark it leads to."""

    to: str
    angle_rad: float
    distance: Measured
    angle_text: str = ""


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
        by_label = by_label_of(record, [leg.to for leg in legs])
        ends = marks_found(
            record, [start, back, *([closing_back] if closing_back else [])]
        )
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
            results=(
                *_as_measured(legs, closing_angle_rad),
                *_coordinates(record, places[:-1], passed),
            ),
            method=short(f"{chosen.name}, {chosen.source}. {method}", "method", 300),
            occasion=occasion,
        )
        return append(record, said_of(fact, key, at), by=by, act=act)

    entry = once(record, key, asked, do)[0]
    return worked(entry, draft_of(record, new, "traverse", key, by))


@dataclass(frozen=True, slots=True)
class _Solved:
    balanced: Traverse
    angles: BalancedAngles | None


def _solve(
    ends: Mapping[uuid.UUID, Mark],
    start: uuid.UUID,
    back: uuid.UUID,
    legs: Sequence[Leg],
    end: Mark,
    closing_rad: float | None,
    closing_back: uuid.UUID | None,
) -> _Solved:
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
        difference = computed_length(got - had, unit)
        rows.append(
            Compared(
                quantity=quantity,
                from_mark=mark.key,
                measured=computed_length(got, unit),
                computed=computed_length(had, unit),
                difference=difference,
                tolerance=limit,
                verdict=verdict_of(difference, limit),
            )
        )
    return rows


def _as_measured(legs: Sequence[Leg], closing_rad: float | None) -> list[str]:
    """The legs as they were written in the field, so that a stranger can run it again."""
    said = [
        f"Measured to {leg.to}: {leg.angle_text or angle_text(leg.angle_rad)}, "
        f"{leg.distance.text} {leg.distance.unit}"
        for leg in legs
    ]
    if closing_rad is not None:
        said.append(f"Measured, closing angle: {angle_text(closing_rad)}")
    return said


def _coordinates(record: Record, places: Placed, passed: bool) -> list[str]:
    """Northing and easting of the marks on the way, after balancing."""
    unit = record.length_unit
    said = [
        f"Balanced {leg.to}: {computed_length(float(place[1]), unit).text}, "
        f"{computed_length(float(place[0]), unit).text}"
        for leg, place in places
    ]
    if not passed:
        said.append("It does not close in its class: nothing was drafted from it.")
    return said


def _new_control(
    record: Record, places: Placed, by_label: Mapping[str, Mark]
) -> list[Row]:
    unit = record.length_unit
    return [
        Row(
            row=number,
            label=leg.to,
            purpose="control",
            carries="position",
            northing=computed_length(float(place[1]), unit),
            easting=computed_length(float(place[0]), unit),
        )
        for number, (leg, place) in enumerate(places[:-1], 1)
        if leg.to not in by_label
    ]


def _place(mark: Mark) -> np.ndarray:
    if mark.easting_m is None or mark.northing_m is None:
        raise Refused(f"{mark.label} has no place.", do="Adopt a value for it first.")
    return np.array([mark.easting_m, mark.northing_m])
