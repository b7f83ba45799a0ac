"""Between ground and grid: elevation factor, combined factor, grid azimuth.

A distance on the ground is not the distance on the grid: first it is brought down to
the ellipsoid, then scaled by the projection. Published in NOAA Manual NOS NGS 5,
*State Plane Coordinate System of 1983*.
"""

from __future__ import annotations

from geometry import checked
from geometry.errors import OutOfRange
from geometry.units.turns import SECONDS_PER_RADIAN, full_turn

MEAN_RADIUS_M = 6_372_000.0
"""Mean radius of the Earth for the elevation factor, NOAA Manual NOS NGS 5."""

_FARTHEST_HEIGHT_M = 20_000.0


def elevation_factor(
    ellipsoid_height_m: float, radius_m: float = MEAN_RADIUS_M
) -> float:
    """R / (R + h): ellipsoid distance over ground distance, h above the ellipsoid.

    h is the levelled height plus the geoid height. Raises NotFinite, OutOfRange.

    >>> round(elevation_factor(300.0), 9)
    0.999952921
    """
    height = checked.number("ellipsoid height", ellipsoid_height_m)
    radius = checked.positive("radius", radius_m)
    if abs(height) > _FARTHEST_HEIGHT_M * radius / MEAN_RADIUS_M:
        raise OutOfRange(
            "The height is beyond any ground on Earth.", do="Check its unit."
        )
    return radius / (radius + height)


def combined_factor(
    scale: float, ellipsoid_height_m: float, radius_m: float = MEAN_RADIUS_M
) -> float:
    """Grid distance over ground distance: the grid scale times the elevation factor.

    >>> round(combined_factor(0.99995, 300.0), 7)
    0.9999029
    """
    factor = elevation_factor(ellipsoid_height_m, radius_m)
    return checked_factor("grid scale", scale) * factor


def line_scale(start: float, middle: float, end: float) -> float:
    """The grid scale of a long line from its ends and middle, weighted 1, 4, 1.

    >>> round(line_scale(0.99990, 0.99992, 0.99996), 7)
    0.9999233
    """
    a, m, b = (checked_factor("grid scale", k) for k in (start, middle, end))
    return (a + 4.0 * m + b) / 6.0


def second_term(midpoint_north_of_parallel_m: float, easting_change_m: float) -> float:
    """Arc-to-chord correction t - T in radians of a line in a Lambert zone.

    25.4 dN dE 1e-10 seconds: dN from the central parallel to the line's middle, dE
    from its start to its end, metres. NOAA Manual NOS NGS 5.
    """
    north = checked.number("midpoint", midpoint_north_of_parallel_m)
    east = checked.number("easting change", easting_change_m)
    return 25.4e-10 * north * east / SECONDS_PER_RADIAN


def grid_azimuth(
    geodetic_azimuth_rad: float, convergence_rad: float, second_term_rad: float = 0.0
) -> float:
    """Grid azimuth from the geodetic one: less convergence, plus t - T; [0, 2 pi).

    >>> round(grid_azimuth(1.0, 0.25), 9)
    0.75
    """
    azimuth = checked.number("geodetic azimuth", geodetic_azimuth_rad)
    convergence = checked.number("convergence", convergence_rad)
    second = checked.number("second term", second_term_rad)
    return full_turn(azimuth - convergence + second)


def checked_factor(name: str, factor: float) -> float:
    """`factor` if it lies where grid and ground factors lie, else OutOfRange."""
    value = checked.positive(name, factor)
    if not 0.99 < value < 1.01:
        raise OutOfRange(
            f"The {name} must be near one.",
            where=f"It is {value:g}.",
            do="Give the factor itself, such as 0.9999029, not parts per million.",
        )
    return value
