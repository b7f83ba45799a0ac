"""The profile: grades between points of vertical intersection, with parabolas.

A curve may have unequal halves; its two parabolas then meet below or above the PVI
on a grade parallel to the chord (route-surveying texts: Hickerson; from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import EmptyInput, OutOfRange

_SAME_M = 1e-9


@dataclass(frozen=True, slots=True)
class Pvi:
    """A point of vertical intersection: distance along, elevation, curve; metres.

    The curve reaches `before_m` back and `after_m` ahead; no curve: both 0.
    """

    distance_m: float
    elevation_m: float
    before_m: float = 0.0
    after_m: float = 0.0


def pvi(distance_m: float, elevation_m: float, curve_m: float = 0.0) -> Pvi:
    """A PVI with a symmetrical curve of a length.

    >>> pvi(100.0, 52.0, 40.0).before_m
    20.0
    """
    return Pvi(distance_m, elevation_m, curve_m / 2, curve_m / 2)


@dataclass(frozen=True, slots=True, eq=False)
class Profile:
    """Pieces of even change of grade; arrays (pieces,), `distances_m` one more."""

    distances_m: Array
    elevations_m: Array
    grades: Array
    changes_per_m: Array


@dataclass(frozen=True, slots=True, eq=False)
class Grade:
    """Elevations (n,) in metres, grades (n,) rise over run, and `beyond_m` (n,).

    `beyond_m` is 0 on the profile, negative before its start and positive after its
    end, where the last grade was carried on.
    """

    elevation_m: Array
    grade: Array
    beyond_m: Array


@dataclass(frozen=True, slots=True)
class TurningPoint:
    """A high or low point of the profile."""

    kind: str
    distance_m: float
    elevation_m: float


def profile(pvis: Sequence[Pvi]) -> Profile:
    """The profile through PVIs in order; the first and the last have no curve.

    >>> line = profile([pvi(0, 100.0), pvi(100, 103.0, 80.0), pvi(200, 101.0)])
    >>> grade_at(line, [100.0]).elevation_m.round(3).tolist()
    [102.5]

    Raises EmptyInput for fewer than two, OutOfRange for PVIs out of order, a curve
    of negative length, curves that overlap, or a curve at an end: which PVI.
    """
    if len(pvis) < 2:
        raise EmptyInput("A profile needs at least two PVIs.")
    at = checked.numbers("PVI distances", [p.distance_m for p in pvis])
    z = checked.numbers("PVI elevations", [p.elevation_m for p in pvis])
    before = checked.numbers("curves back", [p.before_m for p in pvis])
    after = checked.numbers("curves ahead", [p.after_m for p in pvis])
    _refuse(at, before, after)
    grades = np.diff(z) / np.diff(at)
    rows: list[tuple[float, float, float, float]] = []
    for i, grade in enumerate(grades.tolist()):
        rows.append((at[i] + after[i], z[i] + grade * after[i], grade, 0.0))
        if i + 1 < len(grades) and before[i + 1] > 0:
            rows += _halves(at[i + 1], z[i + 1], before[i + 1], after[i + 1], grades, i)
    kept = [a for a, b in zip(rows, [*rows[1:], None], strict=True) if _long(a, b, at)]
    table = np.array(kept, dtype=np.float64)
    distances = np.append(table[:, 0], at[-1])
    return Profile(distances, table[:, 1], table[:, 2], table[:, 3])


def grade_at(line: Profile, distance_m: ArrayLike) -> Grade:
    """Elevation and grade at distances (n,) along; at an angle, the grade ahead.

    Beyond the ends the last grade is carried on and `beyond_m` says by how much.
    """
    distance = checked.numbers("distances", distance_m)
    on = np.clip(distance, line.distances_m[0], line.distances_m[-1])
    i = np.searchsorted(line.distances_m[1:-1], on, side="right")
    x = on - line.distances_m[i]
    grade = line.grades[i] + line.changes_per_m[i] * x
    z = line.elevations_m[i] + x * (line.grades[i] + 0.5 * line.changes_per_m[i] * x)
    beyond = distance - on
    return Grade(z + grade * beyond, grade, beyond)


def turning_points(line: Profile) -> tuple[TurningPoint, ...]:
    """High and low points, where water stands or parts, in order along the line.

    >>> line = profile([pvi(0, 100.0), pvi(100, 103.0, 80.0), pvi(200, 101.0)])
    >>> [(p.kind, p.distance_m) for p in turning_points(line)]
    [('high', 108.0)]
    """
    found: list[TurningPoint] = []
    pieces = list(
        zip(
            line.distances_m.tolist(),
            np.diff(line.distances_m).tolist(),
            line.grades.tolist(),
            line.changes_per_m.tolist(),
            strict=False,
        )
    )
    for i, (start, length, grade, change) in enumerate(pieces):
        x = -grade / change if change else -1.0
        if _SAME_M < x < length - _SAME_M:
            found.append(_turning(line, start + x, grade > 0))
        if i + 1 < len(pieces):
            arriving = _sign(grade + change * length, -change)
            leaving = _sign(pieces[i + 1][2], pieces[i + 1][3])
            if arriving * leaving < 0:
                found.append(_turning(line, start + length, arriving > 0))
    return tuple(found)


def _sign(grade: float, otherwise: float) -> float:
    """Uphill or downhill beside a joint, where the grade itself may just be level."""
    level = abs(grade) < 1e-15
    return float(np.sign(otherwise if level else grade))


def _turning(line: Profile, distance_m: float, high: bool) -> TurningPoint:
    z = float(grade_at(line, [distance_m]).elevation_m[0])
    return TurningPoint("high" if high else "low", distance_m, z)


def _refuse(at: Array, before: Array, after: Array) -> None:
    if (before < 0).any() or (after < 0).any():
        raise OutOfRange(
            "A vertical curve has a negative length.",
            where=f"It is at PVI {int(np.argmax((before < 0) | (after < 0))) + 1}.",
        )
    if (np.diff(at) <= _SAME_M).any():
        late = int(np.argmax(np.diff(at) <= _SAME_M)) + 2
        raise OutOfRange(
            "The PVIs are not in order along the line.", where=f"See PVI {late}."
        )
    if before[0] or after[0] or before[-1] or after[-1]:
        raise OutOfRange("The first and the last PVI cannot have a curve.")
    if ((before > 0) != (after > 0)).any():
        half = int(np.argmax((before > 0) != (after > 0))) + 1
        raise OutOfRange("A vertical curve has one half only.", where=f"PVI {half}.")
    free = np.diff(at) - after[:-1] - before[1:]
    if (free < -_SAME_M).any():
        i = int(np.argmin(free))
        raise OutOfRange(
            "Two vertical curves overlap.",
            where=f"Those at PVI {i + 1} and {i + 2}, by {-free[i]:.3f} m.",
            do="Shorten one of them.",
        )


def _halves(
    at: float, z: float, before: float, after: float, grades: Array, i: int
) -> list[tuple[float, float, float, float]]:
    g1, g2 = float(grades[i]), float(grades[i + 1])
    middle = (g1 * before + g2 * after) / (before + after)
    first = (at - before, z - g1 * before, g1, (middle - g1) / before)
    lift = before * after * (g2 - g1) / (2 * (before + after))
    return [first, (at, z + lift, middle, (g2 - middle) / after)]


def _long(
    row: tuple[float, ...], following: tuple[float, ...] | None, at: Array
) -> bool:
    """A grade between two curves that touch has no length and is left out."""
    end = float(at[-1]) if following is None else following[0]
    return end - row[0] > _SAME_M
