"""Three-point resection: where one stands, from directions to three known marks.

With z = N + iE, a mark seen at circle reading d satisfies
Im[(z - z_P) w exp(-i d)] = 0, where w turns the circle to north. This is linear in w
and in q = w z_P, so three marks leave one null direction (w, q), and z_P = q / w. No
cotangent can overflow, and the danger circle is where the null space widens. Derived
here; the problem and its danger circle are in every surveying text.
"""

from __future__ import annotations

import cmath
import math
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.cogo.polar import SAME_PLACE_M
from geometry.errors import (
    CoincidentPoints,
    DangerCircle,
    NoIntersection,
    OutOfRange,
    WrongShape,
)
from geometry.units.turns import full_turn

_DECIDES = 1e-7
"""Relative size of what fixes the point; below, 0.02 seconds would move it anywhere."""

NEAR_CIRCLE = 0.1
"""Within a tenth of its radius from the danger circle a resection is called weak."""


@dataclass(frozen=True, slots=True, eq=False)
class Resection:
    """A resected point (2,) and what its strength rests on.

    `orientation_rad` added to a circle reading gives an azimuth. `cofactor_m2` (2, 2)
    times the variance of one direction (rad²) is the point's covariance.
    `circle_clearance` is the distance from the danger circle over its radius (one for
    marks on a line). Redundancy is always zero: nothing here can be checked.
    """

    point_m: Array
    orientation_rad: float
    distances_m: Array = field(repr=False)
    cofactor_m2: Array = field(repr=False)
    circle_clearance: float
    redundancy: int = 0

    @property
    def weak(self) -> bool:
        """Whether the point is near the danger circle."""
        return self.circle_clearance < NEAR_CIRCLE

    def covariance(self, direction_sd_rad: float) -> Array:
        """The point's covariance (2, 2) in m² for one direction's sd in radians."""
        return (
            self.cofactor_m2 * checked.positive("direction sd", direction_sd_rad) ** 2
        )


def resection(marks: ArrayLike, directions_rad: ArrayLike) -> Resection:
    """Where the three `marks` (3, 2) are seen at `directions_rad` (3,), clockwise.

    The zero of the circle is arbitrary. Raises CoincidentPoints for marks that are the
    same, DangerCircle when the point is on the circle (or line) through the marks,
    NoIntersection when no place sees them so, NotFinite, WrongShape, OutOfRange.

    >>> marks = [(0.0, 100.0), (100.0, 100.0), (100.0, 0.0)]
    >>> seen = [math.atan2(e - 40.0, n - 20.0) - 1.0 for e, n in marks]
    >>> resection(marks, seen).point_m.round(6).tolist()
    [40.0, 20.0]
    """
    known = checked.points("marks", marks)
    readings = checked.numbers("directions", directions_rad)
    if known.shape != (3, 2) or readings.shape != (3,):
        raise WrongShape(
            "A three-point resection needs three marks and three directions.",
            where=f"There are {len(known)} and {len(readings)}.",
        )
    centre = known.mean(axis=0)
    local = known - centre
    size = _size(local)
    z = (local[:, 1] + 1j * local[:, 0]) / size
    turn, place = _null(z, readings)
    ranges = _ranges(z, place, turn, readings) * size
    point = np.array([place.imag, place.real]) * size
    return _result(centre, local, point, cmath.phase(turn), ranges)


def _size(local: Array) -> float:
    apart = [math.hypot(*(local[i] - local[i - 1])) for i in range(3)]
    if min(apart) < SAME_PLACE_M:
        raise CoincidentPoints(
            "Two of the three marks are the same point.", do="Sight a third mark."
        )
    return max(apart)


def _null(z: np.ndarray, readings: Array) -> tuple[complex, complex]:
    """The orientation (unit complex) and the place, from the null vector of 3 x 4."""
    back = np.exp(-1j * readings)
    seen = z * back
    rows = np.column_stack([seen.imag, seen.real, -back.imag, -back.real])
    _, size, vectors = np.linalg.svd(rows)
    if size[2] < _DECIDES * size[0]:
        raise DangerCircle(
            "The point is on the circle or line through its three marks, where the "
            "directions do not say where it is.",
            do="Sight another mark, or measure a distance to one.",
        )
    w, q = complex(*vectors[3, :2]), complex(*vectors[3, 2:])
    if abs(w) < 1e-9 * abs(q):
        raise NoIntersection(
            "The three directions only fit a point far beyond the marks.",
            do="Check that each direction belongs to its mark.",
        )
    return w / abs(w), q / w


def _ranges(z: np.ndarray, place: complex, turn: complex, readings: Array) -> Array:
    """Signed distances along the sights; all of one sign when the place is real."""
    ranges = np.asarray(((z - place) * turn * np.exp(-1j * readings)).real)
    if float(np.abs(ranges).min()) < 1e-9:
        raise CoincidentPoints("The point falls on one of its own marks.")
    if not (ranges > 0).all() and not (ranges < 0).all():
        raise NoIntersection(
            "No place sees the three marks in these directions.",
            do="Check that each direction belongs to its mark and was read clockwise.",
        )
    return ranges


def _result(
    centre: Array, local: Array, point: Array, phase: float, ranges: Array
) -> Resection:
    orientation = -phase if ranges[0] > 0 else math.pi - phase
    rays = local - point
    distances = np.hypot(rays[:, 0], rays[:, 1])
    return Resection(
        point_m=checked.point("the resected point", centre + point),
        orientation_rad=full_turn(orientation),
        distances_m=distances,
        cofactor_m2=_cofactor(rays, distances),
        circle_clearance=_clearance(local, point),
    )


def _cofactor(rays: Array, distances: Array) -> Array:
    """Of (E, N) from A = d(direction)/d(E, N, orientation), which is square."""
    square = distances**2
    rows = np.column_stack([-rays[:, 1] / square, rays[:, 0] / square, -np.ones(3)])
    spread = np.linalg.inv(rows)[:2]
    return np.asarray(spread @ spread.T)


def _clearance(local: Array, point: Array) -> float:
    a, b, c = local
    twice = float((b - a)[0] * (c - a)[1] - (b - a)[1] * (c - a)[0])
    if abs(twice) < 1e-9 * float((local**2).sum()):
        return 1.0
    squares = ((local - a) ** 2).sum(axis=1)
    e = (squares[1] * (c - a)[1] - squares[2] * (b - a)[1]) / (2 * twice)
    n = (squares[2] * (b - a)[0] - squares[1] * (c - a)[0]) / (2 * twice)
    radius = math.hypot(e, n)
    if radius == 0.0:
        raise OutOfRange("The three marks are too close together for a resection.")
    return abs(math.hypot(*(point - a - np.array([e, n]))) - radius) / radius
