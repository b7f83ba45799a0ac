"""Inverse and forward: between two points and the azimuth and distance joining them."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import CoincidentPoints, OutOfRange, WrongShape
from geometry.units.turns import TWO_PI, full_turn

SAME_PLACE_M = 1e-9
"""Points nearer than a nanometre have no direction between them."""


@dataclass(frozen=True, slots=True)
class Inverse:
    """From one point to another: azimuth in [0, 2 pi), radians, and metres."""

    azimuth_rad: float
    distance_m: float


@dataclass(frozen=True, slots=True, eq=False)
class Inverses:
    """Azimuths (n,) in [0, 2 pi), radians, and distances (n,) in metres."""

    azimuth_rad: Array = field(repr=False)
    distance_m: Array = field(repr=False)


def inverse(start: ArrayLike, end: ArrayLike) -> Inverse:
    """Azimuth and distance from `start` to `end`, each (2,) E, N in metres.

    Raises CoincidentPoints, NotFinite, WrongShape, OutOfRange.

    >>> line = inverse((2000.0, 1000.0), (1811.082, 480.951))
    >>> round(math.degrees(line.azimuth_rad), 3), round(line.distance_m, 2)
    (200.0, 552.36)
    """
    east, north = checked.point("end", end) - checked.point("start", start)
    distance = math.hypot(east, north)
    if distance < SAME_PLACE_M:
        raise CoincidentPoints(
            "The two points are the same, so there is no direction between them.",
            do="Check the two marks named.",
        )
    return Inverse(full_turn(math.atan2(east, north)), distance)


def inverses(starts: ArrayLike, ends: ArrayLike) -> Inverses:
    """Azimuths and distances from `starts` to `ends`, each (n, 2) E, N in metres.

    Raises CoincidentPoints naming the row, WrongShape, NotFinite, OutOfRange.

    >>> inverses([(0, 0), (1, 1)], [(3, 4), (1, 3)]).distance_m.tolist()
    [5.0, 2.0]
    """
    a, b = checked.points("starts", starts), checked.points("ends", ends)
    if len(a) != len(b):
        raise WrongShape(
            "There must be as many starts as ends.",
            where=f"There are {len(a)} and {len(b)}.",
        )
    apart = b - a
    distance = np.hypot(apart[:, 0], apart[:, 1])
    same = distance < SAME_PLACE_M
    if same.any():
        raise CoincidentPoints(
            "A start and its end are the same point.",
            where=f"They are in row {int(np.argmax(same)) + 1}.",
        )
    azimuth = np.arctan2(apart[:, 0], apart[:, 1]) % TWO_PI
    return Inverses(np.where(azimuth >= TWO_PI, 0.0, azimuth), distance)


def forward(start: ArrayLike, azimuth_rad: float, distance_m: float) -> Array:
    """The point (2,) at `azimuth_rad` and `distance_m` from `start` (2,).

    A negative distance goes backwards. Raises NotFinite, WrongShape, OutOfRange.

    >>> forward((100.0, 200.0), math.pi / 2, 50.0).round(6).tolist()
    [150.0, 200.0]
    """
    azimuth = checked.number("azimuth", azimuth_rad)
    distance = checked.number("distance", distance_m)
    step = np.array([math.sin(azimuth), math.cos(azimuth)]) * distance
    return checked.point("the point reached", checked.point("start", start) + step)


def forwards(
    start: ArrayLike, azimuths_rad: ArrayLike, distances_m: ArrayLike
) -> Array:
    """The points (n, 2) at azimuths (n,) and distances (n,) from one `start` (2,).

    >>> forwards((0, 0), [0.0, math.pi], [1.0, 2.0]).round(6).tolist()
    [[0.0, 1.0], [0.0, -2.0]]
    """
    azimuths = checked.numbers("azimuths", azimuths_rad)
    distances = checked.numbers("distances", distances_m)
    if azimuths.shape != distances.shape:
        raise WrongShape(
            "There must be as many azimuths as distances.",
            where=f"There are {len(azimuths)} and {len(distances)}.",
        )
    steps = np.column_stack([np.sin(azimuths), np.cos(azimuths)]) * distances[:, None]
    return checked.points("the points reached", checked.point("start", start) + steps)


def angle_at(at: ArrayLike, back: ArrayLike, fore: ArrayLike) -> float:
    """The angle at `at`, clockwise from `back` to `fore`, radians in [0, 2 pi).

    >>> round(math.degrees(angle_at((0, 0), (0, 5), (5, 0))), 6)
    90.0
    """
    turn = inverse(at, fore).azimuth_rad - inverse(at, back).azimuth_rad
    return full_turn(turn)


def reach(name: str, value: float) -> float:
    """`value` as a distance to swing: positive and no larger than the Earth."""
    distance = checked.positive(name, value)
    if distance > checked.LARGEST_M:
        raise OutOfRange(
            f"{name} is larger than the Earth.", do="Check its unit and digits."
        )
    return distance
