"""Which way a building lies: its principal direction, and the rectangle round it.

The direction is the length-weighted mean of the wall azimuths with a period of a right
angle (the directional-statistics mean of four times the angle; Mardia, *Statistics of
Directional Data*, from memory). The minimum-area rectangle is not used: it follows the
hull, is tied for squares, and jumps when a bay window is added.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import EmptyInput, WrongShape

COHERENT = 0.6
"""Below this the walls share no pair of right-angled directions."""

FAMILY_SPREAD_RAD = math.radians(3.0)


@dataclass(frozen=True, slots=True)
class Family:
    """Walls of one direction: azimuth in [0, pi) radians and share of all length."""

    azimuth_rad: float
    share: float


@dataclass(frozen=True, slots=True)
class PrincipalDirection:
    """Azimuth in [0, pi/2) radians; `coherence` is 1 when every wall is square to it.

    `families` are the wall directions, longest first.
    """

    azimuth_rad: float
    coherence: float
    families: tuple[Family, ...]

    @property
    def is_coherent(self) -> bool:
        return self.coherence >= COHERENT


@dataclass(frozen=True, slots=True)
class EnclosingRectangle:
    """The smallest rectangle along the principal direction that holds the outline.

    `corners` run counter-clockwise from the one behind and left, looking along
    `azimuth_rad`; `along_m` lies in that direction, `across_m` to its right.
    """

    corners: tuple[tuple[float, float], ...]
    azimuth_rad: float
    along_m: float
    across_m: float

    @property
    def centre(self) -> tuple[float, float]:
        a, c = self.corners[0], self.corners[2]
        return (a[0] + c[0]) / 2, (a[1] + c[1]) / 2

    @property
    def diagonal_m(self) -> float:
        return math.hypot(self.along_m, self.across_m)


def principal_direction(edges: ArrayLike) -> PrincipalDirection:
    """The direction the straight walls (n, 2, 2; E, N metres) agree on.

    An outline without straight walls has coherence 0.

    Raises WrongShape, NotFinite, OutOfRange for bad numbers.

    >>> p = principal_direction([[(0, 0), (0, 8)], [(0, 8), (5, 8)]])
    >>> p.azimuth_rad, p.coherence, p.is_coherent
    (0.0, 1.0, True)
    """
    given = np.asarray(edges, dtype=np.float64)
    if given.size == 0:
        return PrincipalDirection(0.0, 0.0, ())
    if given.ndim != 3 or given.shape[1:] != (2, 2):
        raise WrongShape(
            "The walls must be pairs of points, shape (n, 2, 2).",
            where=f"The shape is {given.shape}.",
        )
    checked.points("walls", given.reshape(-1, 2))
    step = given[:, 1] - given[:, 0]
    length = np.hypot(step[:, 0], step[:, 1])
    total = float(length.sum())
    if total == 0.0:
        return PrincipalDirection(0.0, 0.0, ())
    azimuth = np.arctan2(step[:, 0], step[:, 1])
    s, c = (float((length * f(4 * azimuth)).sum()) for f in (np.sin, np.cos))
    quarter = math.pi / 2
    theta = (math.atan2(s, c) / 4) % quarter
    return PrincipalDirection(
        azimuth_rad=0.0 if quarter - theta < 1e-12 else theta,
        coherence=min(math.hypot(s, c) / total, 1.0),
        families=_families(azimuth % math.pi, length / total),
    )


def _families(azimuth: Array, share: Array) -> tuple[Family, ...]:
    """Wall directions gathered round the longest walls, modulo half a turn."""
    left, found = np.ones(len(share), dtype=bool), []
    while left.any():
        seed = int(np.argmax(np.where(left, share, -1.0)))
        off = (azimuth - azimuth[seed] + math.pi / 2) % math.pi - math.pi / 2
        near = left & (np.abs(off) <= FAMILY_SPREAD_RAD)
        weight = float(share[near].sum())
        mean = float((share[near] * off[near]).sum()) / weight
        found.append(Family((float(azimuth[seed]) + mean) % math.pi, weight))
        left &= ~near
    return tuple(sorted(found, key=lambda f: -f.share))


def enclosing_rectangle(
    points: ArrayLike, azimuth_rad: float, margin_m: float = 0.0
) -> EnclosingRectangle:
    """The rectangle along `azimuth_rad` round points (n, 2; E, N metres).

    `margin_m` widens it on all four sides. Raises EmptyInput without points, and
    WrongShape, NotFinite or OutOfRange for bad numbers.

    >>> r = enclosing_rectangle([(0, 0), (24, 0), (24, 18)], 0.0, margin_m=1.0)
    >>> r.along_m, r.across_m, r.corners[0]
    (20.0, 26.0, (-1.0, -1.0))
    """
    given = checked.points("points", points)
    azimuth = checked.number("azimuth", azimuth_rad)
    margin = checked.number("margin", margin_m)
    if len(given) == 0:
        raise EmptyInput("There are no points to put a rectangle round.")
    near = given[0]
    s, c = math.sin(azimuth), math.cos(azimuth)
    turned = (given - near) @ np.array([[c, s], [-s, c]])  # columns: right, along
    low, high = turned.min(axis=0) - margin, turned.max(axis=0) + margin
    box = np.array([low, (high[0], low[1]), high, (low[0], high[1])])
    back = box @ np.array([[c, -s], [s, c]]) + near
    return EnclosingRectangle(
        corners=tuple((float(e), float(n)) for e, n in back),
        azimuth_rad=azimuth,
        along_m=float(high[1] - low[1]),
        across_m=float(high[0] - low[0]),
    )
