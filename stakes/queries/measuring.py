"""What measuring itself adds to a difference: one-sigma figures of each means.

Instruments come with the figures of `geometry.precision` until the firm has better
ones; those of satellite and laser are common practice.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from geometry.checked import Array
from geometry.errors import GeometryError
from geometry.precision import (
    Level,
    StringLine,
    Tape,
    TotalStation,
    free_station,
    one_setup_variance,
    polar,
    sighted,
)
from stakes.models import Mark
from stakes.queries import expected

METHODS = {
    "total station on a mark": "total station",
    "free station": "total station",
    "satellite": "satellite",
    "level run": "level",
    "tape": "tape",
    "string": "string",
    "laser": "laser",
}
"""The method of each sort of setup, as independence compares them."""

STATION = TotalStation()
SATELLITE_PLANE_M = 0.010
SATELLITE_HEIGHT_M = 0.020
LASER_HEIGHT_M = 0.002
SIGHT_M = 30.0
"""A usual sight, where none is known."""


def length_variance(method: str, distance_m: float) -> float:
    """Variance in m² of a measured distance."""
    match method:
        case "tape":
            return Tape().variance(distance_m)
        case "string":
            return StringLine().sd_m ** 2
        case "satellite":
            return 2 * SATELLITE_PLANE_M**2
    return (
        STATION.distance_variance(distance_m)
        + STATION.station_centring_m**2
        + STATION.target_centring_m**2
    )


def angle_variance() -> float:
    """Variance in rad² of an angle turned once in one face."""
    return STATION.angle_sd_rad**2


def height_variance(method: str, distance_m: float = SIGHT_M) -> float:
    """Variance in m² of a height brought from the setup's own marks."""
    match method:
        case "level":
            return one_setup_variance(distance_m, distance_m, Level())
        case "laser":
            return 2 * LASER_HEIGHT_M**2
        case "satellite":
            return SATELLITE_HEIGHT_M**2
        case "tape" | "string":
            return 2 * LASER_HEIGHT_M**2
    sight = STATION.zenith_sd_rad * distance_m
    return 2 * sight**2 + 2 * STATION.height_sd_m**2


def place_covariance(
    method: str,
    target: Mark,
    *,
    occupied: Mark | None = None,
    backsight: Mark | None = None,
    station: Array | None = None,
    sights: Sequence[Mark] = (),
) -> Array:
    """Covariance (2, 2) in m² of a place measured from a setup, its control included.

    With a station whose marks are not known in full, one of usual sights is assumed.
    """
    if method == "satellite":
        return np.eye(2) * SATELLITE_PLANE_M**2
    try:
        if occupied is not None and backsight is not None:
            return polar(
                expected.place(occupied),
                expected.place(backsight),
                expected.place(target),
                STATION,
                station_covariance=expected.covariance(occupied),
                backsight_covariance=expected.covariance(backsight),
            ).covariance_m2
        if station is not None and len(sights) > 1:
            free = free_station(
                station,
                [expected.place(m) for m in sights],
                STATION,
                [expected.covariance(m) for m in sights],
            )
            return sighted(free, expected.place(target), STATION).covariance_m2
    except GeometryError:
        # A target on its own station: only the check's verdict can say what is wrong.
        pass
    return np.eye(2) * _usual_place_variance()


def _usual_place_variance() -> float:
    along = length_variance("total station", SIGHT_M)
    return along + (STATION.angle_sd_rad * SIGHT_M) ** 2


def sigma(*variances: float) -> float:
    """The standard uncertainty of a difference from the variances of its parts."""
    return math.sqrt(math.fsum(variances))
