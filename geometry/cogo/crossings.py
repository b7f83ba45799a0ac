"""Where directions and lines cross: the common point of two straight lines."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.cogo.polar import SAME_PLACE_M, inverse
from geometry.errors import CoincidentPoints, NoIntersection

_PARALLEL = 1e-8
"""Sine of 0.002 seconds: no pointing in the field is finer."""


@dataclass(frozen=True, slots=True, eq=False)
class Crossing:
    """A point (2,) E, N in metres found from two lines, circles or one of each.

    `first_m` and `second_m` are the distances from the two given points, signed along
    a direction, plain from a centre. `angle_rad` is the acute angle at which the two
    cross; near zero the point is weak along them.
    """

    point_m: Array
    first_m: float
    second_m: float
    angle_rad: float


def directions_cross(
    first: ArrayLike, azimuth_rad: float, second: ArrayLike, other_azimuth_rad: float
) -> Crossing:
    """Where the line at `azimuth_rad` from `first` meets the other from `second`.

    A negative distance means the point lies behind. Raises CoincidentPoints,
    NoIntersection when parallel, NotFinite, WrongShape, OutOfRange.

    >>> at = directions_cross((0, 0), math.pi / 4, (10, 0), -math.pi / 4)
    >>> at.point_m.round(6).tolist(), round(at.first_m, 6)
    ([5.0, 5.0], 7.071068)
    """
    a, b = checked.point("first point", first), checked.point("second point", second)
    if math.hypot(*(b - a)) < SAME_PLACE_M:
        raise CoincidentPoints(
            "Both directions start from the same point.", do="Name two marks."
        )
    return _cross(
        a,
        along(checked.number("first azimuth", azimuth_rad)),
        b,
        along(checked.number("second azimuth", other_azimuth_rad)),
    )


def lines_cross(
    first: ArrayLike, first_end: ArrayLike, second: ArrayLike, second_end: ArrayLike
) -> Crossing:
    """Where the line through the first two points meets the line through the others.

    Lines go on beyond their points; `first_m` and `second_m` tell how far along from
    `first` and `second`. Raises CoincidentPoints, NoIntersection, NotFinite.

    >>> lines_cross((0, 0), (4, 0), (3, -1), (3, 1)).first_m
    3.0
    """
    a, b = checked.point("first point", first), checked.point("second point", second)
    u = unit_vector("first line", a, first_end)
    v = unit_vector("second line", b, second_end)
    return _cross(a, u, b, v)


def along(azimuth_rad: float) -> Array:
    """The unit vector (E, N) of an azimuth."""
    return np.array([math.sin(azimuth_rad), math.cos(azimuth_rad)])


def unit_vector(name: str, start: Array, end: ArrayLike) -> Array:
    """The unit vector (E, N) from `start` to `end`, or CoincidentPoints."""
    step = checked.point(f"end of {name}", end) - start
    length = math.hypot(*step)
    if length < SAME_PLACE_M:
        raise CoincidentPoints(
            f"The two points of the {name} are the same.", do="Name two marks."
        )
    return np.asarray(step / length)


def _cross(a: Array, u: Array, b: Array, v: Array) -> Crossing:
    sine = float(u[0] * v[1] - u[1] * v[0])
    if abs(sine) < _PARALLEL:
        raise NoIntersection(
            "The two lines are parallel and do not meet.",
            do="Check the azimuths, or use another mark.",
        )
    d = b - a
    first = float(d[0] * v[1] - d[1] * v[0]) / sine
    second = float(d[0] * u[1] - d[1] * u[0]) / sine
    if max(abs(first), abs(second)) > checked.LARGEST_M:
        raise NoIntersection("The two lines meet farther away than any place on Earth.")
    angle = math.asin(min(abs(sine), 1.0))
    return Crossing(a + first * u, first, second, angle)


def crossing_angle(first: ArrayLike, second: ArrayLike, point: ArrayLike) -> float:
    """The acute angle, radians, at which lines from two marks cross at `point`.

    >>> round(math.degrees(crossing_angle((0, 0), (10, 0), (0, 10))), 6)
    45.0
    """
    turn = inverse(point, first).azimuth_rad - inverse(point, second).azimuth_rad
    return math.asin(min(abs(math.sin(turn)), 1.0))
