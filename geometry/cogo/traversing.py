"""Traverses: from angles to azimuths, from courses to a closure, and the balance.

Balanced by the compass rule (Bowditch 1808): each course takes of the misclosure the
share its length has of the whole. Angles are balanced first, in equal parts. Ghilani &
Wolf, *Elementary Surveying*, chapters 9 and 10 (from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import EmptyInput, OutOfRange, WrongShape
from geometry.units.turns import TWO_PI, half_turn


@dataclass(frozen=True, slots=True, eq=False)
class BalancedAngles:
    """Angles (n,) in radians after sharing the misclosure; redundancy is one."""

    angles_rad: Array = field(repr=False)
    misclosure_rad: float
    correction_each_rad: float
    redundancy: int = 1


@dataclass(frozen=True, slots=True, eq=False)
class Traverse:
    """A traverse of n courses, measured and balanced by the compass rule.

    `misclosure_m` (2,) E, N is where the courses end less where they should. `ratio` is
    the length over the linear misclosure, None when it closes exactly. `points_m`
    (n + 1, 2) are balanced and end where they should. Redundancy is two.
    """

    courses_m: Array = field(repr=False)
    misclosure_m: Array
    linear_misclosure_m: float
    length_m: float
    ratio: float | None
    corrections_m: Array = field(repr=False)
    balanced_m: Array = field(repr=False)
    points_m: Array = field(repr=False)
    redundancy: int = 2

    @property
    def departures_m(self) -> Array:
        """Eastings (n,) of the courses as measured."""
        return self.courses_m[:, 0]

    @property
    def latitudes_m(self) -> Array:
        """Northings (n,) of the courses as measured."""
        return self.courses_m[:, 1]

    @property
    def azimuths_rad(self) -> Array:
        """Azimuths (n,) of the balanced courses, radians in [0, 2 pi)."""
        return np.asarray(
            np.arctan2(self.balanced_m[:, 0], self.balanced_m[:, 1]) % TWO_PI
        )

    @property
    def distances_m(self) -> Array:
        """Lengths (n,) of the balanced courses."""
        return np.asarray(np.hypot(self.balanced_m[:, 0], self.balanced_m[:, 1]))


def traverse(
    start: ArrayLike,
    azimuths_rad: ArrayLike,
    distances_m: ArrayLike,
    end: ArrayLike | None = None,
) -> Traverse:
    """A traverse from `start` (2,) to `end` (2,), or back to its start without `end`.

    Azimuths (n,) in radians, distances (n,) in metres. Raises EmptyInput, WrongShape,
    NotFinite, OutOfRange for a distance that is not positive.

    >>> square = traverse((0, 0), np.radians([0, 90, 180, 270]), [10, 10, 10, 10.1])
    >>> round(square.linear_misclosure_m, 4), round(square.ratio)
    (0.1, 401)
    """
    azimuths, distances = _courses(azimuths_rad, distances_m)
    begin = checked.point("start", start)
    finish = begin if end is None else checked.point("end", end)
    courses = np.column_stack([np.sin(azimuths), np.cos(azimuths)]) * distances[:, None]
    misclosure = courses.sum(axis=0) - (finish - begin)
    length = float(distances.sum())
    corrections = -misclosure * (distances / length)[:, None]
    balanced = courses + corrections
    points = begin + np.vstack([np.zeros(2), np.cumsum(balanced, axis=0)])
    points[-1] = finish
    linear = math.hypot(*misclosure)
    exact = linear <= 1e-12 * length
    return Traverse(
        courses_m=courses,
        misclosure_m=misclosure,
        linear_misclosure_m=linear,
        length_m=length,
        ratio=None if exact else length / linear,
        corrections_m=corrections,
        balanced_m=balanced,
        points_m=points,
    )


def carried_azimuths(first_rad: float, angles_rad: ArrayLike) -> Array:
    """Azimuths (n + 1,) of the courses, from the first and the angles (n,) between.

    Each angle is turned clockwise from the back course to the next. Raises NotFinite.

    >>> np.degrees(carried_azimuths(0.0, [math.pi / 2, math.pi])).round(6).tolist()
    [0.0, 270.0, 270.0]
    """
    angles = _angles(angles_rad)
    turned = np.concatenate([[0.0], np.cumsum(angles + math.pi)])
    return np.asarray((checked.number("first azimuth", first_rad) + turned) % TWO_PI)


def balanced_loop_angles(angles_rad: ArrayLike) -> BalancedAngles:
    """The angles (n,) of a closed figure, interior or exterior, brought to their sum.

    Interior angles add to (n - 2) half turns and exterior ones to (n + 2), a full two
    turns apart, so that one test serves both. Raises EmptyInput below three angles.

    >>> balanced = balanced_loop_angles(np.radians([90.01, 90, 90, 90.01]))
    >>> round(math.degrees(balanced.misclosure_rad), 6)
    0.02
    """
    angles = _angles(angles_rad)
    if len(angles) < 3:
        raise EmptyInput("A closed figure has at least three angles.")
    return _shared(angles, half_turn(float(angles.sum()) - (len(angles) - 2) * math.pi))


def balanced_link_angles(
    first_rad: float, angles_rad: ArrayLike, last_rad: float
) -> BalancedAngles:
    """The angles (n,) between a known first and a known last azimuth, balanced.

    Raises EmptyInput without angles, NotFinite.

    >>> link = balanced_link_angles(0.0, [math.pi + 0.001], 0.0)
    >>> round(link.misclosure_rad, 6), round(link.correction_each_rad, 6)
    (0.001, -0.001)
    """
    angles = _angles(angles_rad)
    if len(angles) == 0:
        raise EmptyInput("There are no angles to balance.")
    reached = float(carried_azimuths(first_rad, angles)[-1])
    return _shared(
        angles, half_turn(reached - checked.number("last azimuth", last_rad))
    )


def _angles(angles_rad: ArrayLike) -> Array:
    angles = checked.numbers("angles", angles_rad)
    wide = np.abs(angles) > TWO_PI + 1e-9
    if wide.any():
        raise OutOfRange(
            "An angle is more than a full turn.",
            where=f"It is angle {int(np.argmax(wide)) + 1}.",
            do="Give radians.",
        )
    return angles


def _shared(angles: Array, misclosure: float) -> BalancedAngles:
    each = -misclosure / len(angles)
    return BalancedAngles(angles + each, misclosure, each)


def _courses(azimuths_rad: ArrayLike, distances_m: ArrayLike) -> tuple[Array, Array]:
    azimuths = checked.numbers("azimuths", azimuths_rad)
    distances = checked.numbers("distances", distances_m)
    if len(azimuths) == 0:
        raise EmptyInput("A traverse needs at least one course.")
    if azimuths.shape != distances.shape:
        raise WrongShape(
            "There must be as many azimuths as distances.",
            where=f"There are {len(azimuths)} and {len(distances)}.",
        )
    bad = (distances <= 0) | (distances > checked.LARGEST_M)
    if bad.any():
        raise OutOfRange(
            "A course must be longer than zero and no longer than the Earth is round.",
            where=f"It is course {int(np.argmax(bad)) + 1}.",
        )
    return azimuths, distances
