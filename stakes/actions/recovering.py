"""Recover control: how it was found, and every distance and rise between what is found."""

from __future__ import annotations

import math
import uuid
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

from stakes.actions.control_work import (
    MOST_ROWS,
    Worked,
    computed_length,
    marks_found,
    said_of,
    verdict_of,
    worked,
)
from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.kinds.condition import MarksGone, MarksSeen
from stakes.kinds.control import Compared, ControlMeasured
from stakes.models import Entry, Mark, Record
from stakes.queries.tolerance import classes_of, control_class
from stakes.record import By, Fact, Refused, Said, append
from stakes.record.lengths import Measured

NOT_FOUND = "not found"
CONDITIONS = ("undisturbed", "leaning", "hit", "put back by others", NOT_FOUND)


@dataclass(frozen=True, slots=True)
class Between:
    """A distance between two marks, or the rise from the first to the second."""

    first: uuid.UUID
    second: uuid.UUID
    measured: Measured


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
        said = [said_of(fact, key, at), *_conditions(found, occasion, key, at)]
        return append(record, said, by=by, act=act)

    return worked(once(record, key, asked, do)[0])


def questions_of(
    compared: Sequence[Compared], names: Mapping[uuid.UUID, str]
) -> list[str]:
    """What disagrees, and which marks explain it: never one blamed where two do.

    Distances and rises are told apart, for a mark may have sunk where it stands.
    """
    said = []
    for quantity in dict.fromkeys(c.quantity for c in compared):
        failed = [c for c in compared if (c.quantity, c.verdict) == (quantity, "fail")]
        said += [
            f"{names[c.from_mark]} to {names[c.to_mark]}: {quantity} differs by "
            f"{c.difference.text} {c.difference.unit}. Not averaged: a question."
            for c in failed
            if c.to_mark is not None and c.difference is not None
        ]
        said += _explained(failed, names)
    return said


def _explained(failed: Sequence[Compared], names: Mapping[uuid.UUID, str]) -> list[str]:
    if not failed:
        return []
    common = set.intersection(*({c.from_mark, c.to_mark} for c in failed))
    listed = sorted(names[m] for m in common if m is not None)
    if len(listed) == 1:
        return [f"Every disagreement names {listed[0]}: measure to it again."]
    if len(listed) == 2:
        return [
            f"{listed[0]} or {listed[1]}: measure from each to a third mark to tell."
        ]
    return ["No one mark explains all of it: measure the others again."]


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
    computed = computed_length(computed_m, record.length_unit)
    difference = computed_length(
        between.measured.metres - computed_m, record.length_unit
    )
    return Compared(
        **said,
        computed=computed,
        difference=difference,
        tolerance=limit,
        verdict=verdict_of(difference, limit),
    )


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
    return marks_found(record, keys)
