"""Where circles cross lines and each other: distances swung from known points.

Two places fit every pair of distances. Both are given, in a fixed order, because only
the plan knows on which side the point belongs.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.cogo.crossings import Crossing, along, unit_vector
from geometry.cogo.polar import SAME_PLACE_M, reach
from geometry.errors import CoincidentPoints, NoIntersection

_TOUCHING = 1e-12
"""Relative to the radius; inside it a circle touches rather than misses."""


def direction_and_distance(
    start: ArrayLike, azimuth_rad: float, centre: ArrayLike, radius_m: float
) -> tuple[Crossing, ...]:
    """Where the line from `start` at `azimuth_rad` is `radius_m` from `centre`.

    Two crossings in order along the line, or one where it touches. Raises
    NoIntersection saying by how much it misses, NotFinite, OutOfRange, WrongShape.

    >>> [c.first_m for c in direction_and_distance((0, 0), 0.0, (3, 10), 5.0)]
    [6.0, 14.0]
    """
    azimuth = checked.number("azimuth", azimuth_rad)
    return _line_and_circle(
        checked.point("start", start), along(azimuth), centre, radius_m
    )


def line_and_circle(
    start: ArrayLike, end: ArrayLike, centre: ArrayLike, radius_m: float
) -> tuple[Crossing, ...]:
    """Where the line through two points crosses a circle; as direction_and_distance.

    >>> [c.point_m.tolist() for c in line_and_circle((0, 0), (0, 1), (5, 7), 5.0)]
    [[0.0, 7.0]]
    """
    a = checked.point("start", start)
    return _line_and_circle(a, unit_vector("line", a, end), centre, radius_m)


def distances_cross(
    first: ArrayLike, first_m: float, second: ArrayLike, second_m: float
) -> tuple[Crossing, ...]:
    """Where two distances swung from two points meet: circle and circle.

    The crossing left of first to second, then the one on the right; or one where the
    circles touch. Raises CoincidentPoints, NoIntersection saying how much is short or
    over, NotFinite, OutOfRange, WrongShape.

    >>> [c.point_m.tolist() for c in distances_cross((0, 0), 5.0, (6, 0), 5.0)]
    [[3.0, 4.0], [3.0, -4.0]]
    """
    a, b = checked.point("first point", first), checked.point("second point", second)
    ra = reach("first distance", first_m)
    rb = reach("second distance", second_m)
    apart = math.hypot(*(b - a))
    if apart < SAME_PLACE_M:
        raise CoincidentPoints("Both distances are swung from the same point.")
    _must_reach(apart, ra, rb)
    u = (b - a) / apart
    x = (apart + (ra - rb) * (ra + rb) / apart) / 2
    height = math.sqrt(max((ra - x) * (ra + x), 0.0))
    if height <= math.sqrt(_TOUCHING) * ra:
        return (Crossing(a + x * u, ra, rb, 0.0),)
    right = np.array([u[1], -u[0]])
    angle = math.asin(min(apart * height / (ra * rb), 1.0))
    return tuple(
        Crossing(a + x * u + side * height * right, ra, rb, angle) for side in (-1, 1)
    )


def _line_and_circle(
    a: Array, u: Array, centre: ArrayLike, radius_m: float
) -> tuple[Crossing, ...]:
    c = checked.point("centre", centre) - a
    radius = reach("radius", radius_m)
    middle = float(c @ u)
    offset = abs(float(c[0] * u[1] - c[1] * u[0]))
    if offset > radius * (1 + _TOUCHING):
        raise NoIntersection(
            "The line does not reach the circle.",
            where=f"It misses it by {offset - radius:.4f} m.",
            do="Check the azimuth and the distance.",
        )
    half = math.sqrt(max((radius - offset) * (radius + offset), 0.0))
    if half <= math.sqrt(_TOUCHING) * radius:
        return (Crossing(a + middle * u, middle, radius, 0.0),)
    angle = math.acos(min(offset / radius, 1.0))
    return tuple(
        Crossing(a + s * u, s, radius, angle) for s in (middle - half, middle + half)
    )


def _must_reach(apart: float, ra: float, rb: float) -> None:
    allowed = _TOUCHING * max(ra, rb)
    if apart > ra + rb + allowed:
        raise NoIntersection(
            "The two distances are too short to meet.",
            where=f"They miss each other by {apart - ra - rb:.4f} m.",
            do="Check both distances and the two marks.",
        )
    if apart < abs(ra - rb) - allowed:
        raise NoIntersection(
            "One distance reaches past everything the other can.",
            where=f"It is {abs(ra - rb) - apart:.4f} m too long.",
            do="Check both distances and the two marks.",
        )
