"""Coordinates from one EPSG system to another, with the exactness it could achieve.

The work is PROJ's, through pyproj, which is an optional extra. A transformation
between datums is only as good as the operation found for the place and the grid files
at hand, so the answer always carries which one was used, how accurate it is said to
be, and whether a better one was missing. Nothing is ever fetched from a network.
"""

from __future__ import annotations

import warnings
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import EmptyInput, GeometryError, OutOfRange

_METRES_PER_DEGREE = 111_320.0


class EpsgUnavailable(GeometryError):
    """The epsg extra is not installed, or a code is not a system it knows."""


@dataclass(frozen=True, slots=True, eq=False)
class Transformed:
    """Points (n, 2) in the target system, and how exact they can be.

    `accuracy_m` is the published accuracy of the operation, 0 where only a projection
    was applied, None where it is not known; `round_trip_m` the largest distance by
    which transforming back misses; `better_missing` names a better operation whose
    grid file is not at hand, or is empty.
    """

    points: Array = field(repr=False)
    operation: str
    accuracy_m: float | None
    round_trip_m: float
    better_missing: str


@dataclass(frozen=True, slots=True, eq=False)
class GridScale:
    """Grid scale (n,) and convergence (n,), radians, east of the meridian positive
    in the northern hemisphere; grid azimuth = geodetic azimuth - convergence + (t - T).
    """

    scale: Array
    convergence_rad: Array


def transformed(points: ArrayLike, source_epsg: int, target_epsg: int) -> Transformed:
    """Points (n, 2) from one EPSG system to another, in the systems' own units.

    East before north, longitude before latitude (degrees), whatever order the
    register gives. Raises EpsgUnavailable, EmptyInput, and OutOfRange where a point
    lies outside what the systems cover.

    The example is IOGP Guidance Note 373-7-2, Lambert Conic Conformal (2SP), from
    memory.

    >>> there = transformed([(-96.0, 28.5)], 4267, 32040)
    >>> there.points.round(2).tolist(), there.accuracy_m
    ([[2963503.91, 254759.8]], 0.0)
    """
    given = checked.points("points", points)
    if len(given) == 0:
        raise EmptyInput("There are no points to transform.")
    proj = _pyproj()
    source, target = (_system(proj, code) for code in (source_epsg, target_epsg))
    group = _operations(proj, source, target, _longitudes_latitudes(source, given))
    if not group.transformers:
        raise EpsgUnavailable(
            f"No operation leads from EPSG:{source_epsg} to EPSG:{target_epsg} here.",
            do="Transform outside and enter the coordinates with their source.",
        )
    best = group.transformers[0]
    there = _through(best, given, "FORWARD")
    back = _through(best, there, "INVERSE")
    missing = group.unavailable_operations
    return Transformed(
        points=there,
        operation=str(best.description),
        accuracy_m=float(best.accuracy) if best.accuracy >= 0 else None,
        round_trip_m=float(np.abs(back - given).max()) * _metres_per_unit(source),
        better_missing="" if group.best_available else str(missing[0].name),
    )


def grid_scale(points: ArrayLike, epsg: int) -> GridScale:
    """Grid scale and convergence of a conformal projection at points (n, 2).

    Points are E, N of the projected system, in its own unit. Raises EpsgUnavailable,
    EmptyInput, OutOfRange for a system that is not a conformal map.
    """
    given = checked.points("points", points)
    if len(given) == 0:
        raise EmptyInput("There are no points to find the grid scale at.")
    proj = _pyproj()
    system = _system(proj, epsg)
    if not system.is_projected:
        raise OutOfRange(
            f"EPSG:{epsg} is not a projected system and has no grid scale."
        )
    places = _longitudes_latitudes(system, given)
    factors = proj.Proj(system).get_factors(places[:, 0], places[:, 1])
    along, across = np.asarray(factors.meridional_scale), factors.parallel_scale
    if float(np.abs(along - across).max()) > 1e-6:
        raise OutOfRange(
            f"The map of EPSG:{epsg} is not conformal: scale has no value."
        )
    return GridScale(along, np.radians(np.asarray(factors.meridian_convergence)))


def _pyproj() -> Any:
    try:
        import pyproj
        import pyproj.transformer
    except ImportError:
        raise EpsgUnavailable(
            "Transformations between EPSG systems are not installed here.",
            do="Install Lathbook with its epsg extra.",
        ) from None
    return pyproj


def _system(proj: Any, epsg: int) -> Any:
    try:
        return proj.CRS.from_epsg(epsg)
    except proj.exceptions.CRSError:
        raise EpsgUnavailable(
            f"EPSG:{epsg} is not a coordinate system in the register.",
            do="Check the number on the sheet.",
        ) from None


def _operations(proj: Any, source: Any, target: Any, places: Array) -> Any:
    west, south = places.min(axis=0)
    east, north = places.max(axis=0)
    area = proj.aoi.AreaOfInterest(west, south, east, north)
    with warnings.catch_warnings():
        # what is missing is told in the answer instead
        warnings.simplefilter("ignore", UserWarning)
        return proj.transformer.TransformerGroup(
            source, target, always_xy=True, area_of_interest=area
        )


def _longitudes_latitudes(system: Any, given: Array) -> Array:
    if system.is_geographic:
        return given
    proj = _pyproj()
    down = proj.Transformer.from_crs(system, system.geodetic_crs, always_xy=True)
    return _through(down, given, "FORWARD")


def _through(transformer: Any, given: Array, direction: str) -> Array:
    east, north = transformer.transform(given[:, 0], given[:, 1], direction=direction)
    there = np.column_stack([east, north])
    bad = ~np.isfinite(there).all(axis=1)
    if bad.any():
        raise OutOfRange(
            "A point lies outside what the coordinate systems cover.",
            where=f"It is in row {int(np.argmax(bad)) + 1}.",
            do="Check the order of its coordinates, their unit and the EPSG number.",
        )
    return there


def _metres_per_unit(system: Any) -> float:
    if system.is_geographic:
        return _METRES_PER_DEGREE
    return float(system.axis_info[0].unit_conversion_factor)
