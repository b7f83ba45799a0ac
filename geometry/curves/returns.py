"""The curb return: the arc that joins two curb lines at a corner.

The radius point lies at the radius from both curb lines, so it is where their
parallels meet; the arc is staked from it at equal parts (quarter or eighth points)
and on an offset. Plane geometry; common practice for the points staked.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.curves.circular import middle_ordinate
from geometry.errors import NoIntersection, OutOfRange

_LEAST_TURN = 1e-4


@dataclass(frozen=True, slots=True)
class CurbReturn:
    """An arc from `begin` to `end` about `centre`; points are E, N in metres.

    `turn_rad` is signed, right positive. `curb` holds the equal parts, ends
    included, `stakes` the same points moved on the radius by the offset; rows match
    `along_m` and, with elevations given, `elevation_m` (else None).
    `middle_ordinate_m` belongs to the chord between neighbouring points.
    """

    centre: Array
    begin: Array
    end: Array
    corner: Array
    radius_m: float
    turn_rad: float
    length_m: float
    tangent_m: float
    curb: Array
    stakes: Array
    along_m: Array
    elevation_m: Array | None
    chord_m: float
    middle_ordinate_m: float


def curb_return(
    curb_in: tuple[ArrayLike, float],
    curb_out: tuple[ArrayLike, float],
    radius_m: float,
    *,
    parts: int = 4,
    offset_m: float = 0.0,
    elevations_m: tuple[float, float] | None = None,
) -> CurbReturn:
    """The return from one curb line into another, each a point and an azimuth.

    `curb_in` is walked towards the corner and `curb_out` away from it. A positive
    `offset_m` moves the stakes away from the radius point, a negative one towards
    it. `elevations_m` are those at the begin and the end; between them the grade is
    even along the arc.

    >>> r = curb_return(((0.0, 0.0), 0.0), ((0.0, 50.0), math.pi / 2), 10.0)
    >>> r.centre.round(6).tolist(), r.begin.round(6).tolist()
    ([10.0, 40.0], [0.0, 40.0])

    Raises NoIntersection for parallel curbs, OutOfRange for a radius, a number of
    parts or an offset that makes no arc.
    """
    radius = checked.positive("The radius", radius_m)
    if not 1 <= parts <= 10_000:
        raise OutOfRange("The number of parts must be from 1 to 10,000.")
    offset = checked.number("The offset", offset_m)
    if radius + offset <= 0:
        raise OutOfRange(
            "The offset reaches the radius point.",
            where=f"Radius {radius:g} m, offset {offset:g} m.",
            do="Stake the radius point itself.",
        )
    corner, azimuth, turn = _corner(curb_in, curb_out)
    tangent = radius * math.tan(abs(turn) / 2)
    side = math.copysign(1.0, turn)
    begin = corner - tangent * _along(azimuth)
    centre = begin + side * radius * _right(azimuth)
    fraction = np.arange(parts + 1) / parts
    outward = -side * _right(azimuth + turn * fraction)
    length = radius * abs(turn)
    arc = length / parts
    return CurbReturn(
        centre=centre,
        begin=begin,
        end=corner + tangent * _along(azimuth + turn),
        corner=corner,
        radius_m=radius,
        turn_rad=turn,
        length_m=length,
        tangent_m=tangent,
        curb=centre + radius * outward,
        stakes=centre + (radius + offset) * outward,
        along_m=length * fraction,
        elevation_m=_grade(elevations_m, fraction),
        chord_m=2 * radius * math.sin(arc / (2 * radius)),
        middle_ordinate_m=middle_ordinate(radius, arc),
    )


def _corner(
    curb_in: tuple[ArrayLike, float], curb_out: tuple[ArrayLike, float]
) -> tuple[Array, float, float]:
    """Where the curb lines meet, the azimuth in, and the signed turn."""
    a = checked.point("The curb in", curb_in[0])
    b = checked.point("The curb out", curb_out[0])
    azimuth = checked.number("The azimuth in", curb_in[1])
    out = checked.number("The azimuth out", curb_out[1])
    turn = (out - azimuth + math.pi) % (2 * math.pi) - math.pi
    if abs(math.sin(turn)) < _LEAST_TURN:
        raise NoIntersection(
            "The two curb lines are parallel, so no return joins them.",
            do="Check the two azimuths: one towards the corner, one away from it.",
        )
    reach = float((b - a) @ _right(out)) / float(_along(azimuth) @ _right(out))
    return a + reach * _along(azimuth), azimuth, turn


def _grade(elevations_m: tuple[float, float] | None, fraction: Array) -> Array | None:
    if elevations_m is None:
        return None
    first, last = checked.numbers("elevations", elevations_m)
    return np.asarray(first + (last - first) * fraction)


def _along(azimuth: float) -> Array:
    return np.array([math.sin(azimuth), math.cos(azimuth)])


def _right(azimuth: ArrayLike) -> Array:
    return np.stack([np.cos(azimuth), -np.sin(azimuth)], axis=-1)
