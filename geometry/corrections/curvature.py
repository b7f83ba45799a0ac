"""Curvature of the Earth and refraction over a level sight.

Published in Ghilani & Wolf, *Elementary Surveying*, chapter 4 (from memory): the line
of sight rises over the level surface by D²/2R and is bent down by the part k of that.
"""

from __future__ import annotations

from geometry import checked
from geometry.errors import OutOfRange

EARTH_RADIUS_M = 6_371_000.0
REFRACTION = 0.14
"""Coefficient of refraction, the usual mean by day; 0.13 is also in use."""

FARTHEST_M = 50_000.0


def curvature_m(distance_m: float) -> float:
    """By how much a level line rises over the level surface, metres.

    >>> round(curvature_m(1000.0), 4)
    0.0785
    """
    distance = checked.number("distance_m", distance_m)
    if abs(distance) > FARTHEST_M:
        raise OutOfRange(
            f"A sight of {distance:g} m is too long for this formula.",
            do=f"It holds up to {FARTHEST_M / 1000:g} km.",
        )
    return distance * distance / (2 * EARTH_RADIUS_M)


def refraction_m(distance_m: float, coefficient: float = REFRACTION) -> float:
    """By how much refraction bends the sight back down, metres."""
    return checked.number("coefficient", coefficient) * curvature_m(distance_m)


def curvature_and_refraction_m(
    distance_m: float, coefficient: float = REFRACTION
) -> float:
    """Both together: what a rod reading at this distance is too high by, metres.

    >>> round(curvature_and_refraction_m(1000.0), 4)
    0.0675
    """
    return curvature_m(distance_m) - refraction_m(distance_m, coefficient)
