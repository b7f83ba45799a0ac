"""Station equations: what the stationing calls a distance along the line.

Where a line was lengthened or shortened after it was stationed, "back" equals
"ahead": the same point has two stations. So a station is not a number but a number
and the region it belongs to; a number may name two points (overlap) or none (gap).
True distances never jump, and everything is computed on them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from geometry import checked
from geometry.checked import Array
from geometry.errors import NoIntersection, OutOfRange, WrongShape

_SAME_M = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class Stationing:
    """Regions of even stationing, numbered from 0; all arrays (regions,), metres.

    Region i begins at true distance `distances_m[i]` with the station
    `stations_m[i]` and ends with the station `ends_m[i]` (the last: infinity).
    """

    distances_m: Array
    stations_m: Array
    ends_m: Array


@dataclass(frozen=True, slots=True, eq=False)
class Stations:
    """Stations (n,) in metres and the region (n,) each belongs to."""

    station_m: Array
    region: NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class StationPlace:
    """One place a station names: its true distance and its region."""

    distance_m: float
    region: int


def stationing(
    start_station_m: float,
    equations: Sequence[tuple[float, float]] = (),
    *,
    start_m: float = 0.0,
) -> Stationing:
    """Stationing from the start's station and the (back, ahead) pairs in order.

    `start_m` is the true distance of the start, as the alignment has it.

    >>> table = stationing(1000.0, [(1250.0, 1200.0)])
    >>> stations_at(table, [249.0, 251.0]).station_m.tolist()
    [1249.0, 1201.0]

    Raises NotFinite, or OutOfRange when a back station does not lie ahead of the
    station its region begins with.
    """
    stations = [checked.number("The start station", start_station_m)]
    distances = [checked.number("The start distance", start_m)]
    ends: list[float] = []
    for number, (back, ahead) in enumerate(equations, start=1):
        end = checked.number(f"The back station of equation {number}", back)
        if end <= stations[-1]:
            raise OutOfRange(
                "A back station must lie ahead of where its stationing begins.",
                where=f"Equation {number}: back {end:g}, begun at {stations[-1]:g}.",
                do="Give the equations in order along the line, back before ahead.",
            )
        distances.append(distances[-1] + end - stations[-1])
        ends.append(end)
        stations.append(checked.number(f"The ahead station {number}", ahead))
    ends.append(np.inf)
    return Stationing(np.array(distances), np.array(stations), np.array(ends))


def stations_at(table: Stationing, distance_m: ArrayLike) -> Stations:
    """Stations of true distances (n,). At an equation itself: the ahead station.

    Distances before the start count down from the start's station.
    """
    distance = checked.numbers("distances", distance_m)
    region = np.searchsorted(table.distances_m[1:], distance, side="right")
    station = table.stations_m[region] + distance - table.distances_m[region]
    return Stations(station, region.astype(np.int64))


def places_of(table: Stationing, station_m: float) -> tuple[StationPlace, ...]:
    """Every place a station names: none in a gap, two in an overlap.

    >>> table = stationing(1000.0, [(1250.0, 1200.0)])
    >>> [p.distance_m for p in places_of(table, 1220.0)]
    [220.0, 270.0]
    """
    station = checked.number("The station", station_m)
    places: list[StationPlace] = []
    rows = zip(table.distances_m, table.stations_m, table.ends_m, strict=True)
    for region, (distance, first, end) in enumerate(rows):
        before = region == 0 or station >= first - _SAME_M
        if before and station <= end + _SAME_M:
            at = float(distance + station - first)
            # back and ahead of one equation are one place
            if not places or at - places[-1].distance_m > 2 * _SAME_M:
                places.append(StationPlace(at, region))
    return tuple(places)


def distance_of(
    table: Stationing, station_m: float, region: int | None = None
) -> float:
    """The true distance of a station, of a region where two have that number.

    Raises NoIntersection for a station inside a gap, OutOfRange when two places have
    it and no region is given, or the region does not hold it.
    """
    places = places_of(table, station_m)
    if region is not None:
        return _in_region(table, station_m, region)
    if not places:
        raise NoIntersection(
            "No point of the line has this station.",
            where=f"{station_m:g} falls into the gap of a station equation.",
            do="Read the station again; ahead of the equation the numbers jump.",
        )
    if len(places) > 1:
        regions = " and ".join(str(place.region) for place in places)
        raise OutOfRange(
            "Two points of the line have this station.",
            where=f"{station_m:g} is found in regions {regions}.",
            do="Say whether it is back or ahead of the equation.",
        )
    return places[0].distance_m


def _in_region(table: Stationing, station_m: float, region: int) -> float:
    if not 0 <= region < len(table.distances_m):
        raise WrongShape(
            "The stationing has no such region.",
            where=f"Region {region}; there are {len(table.distances_m)}.",
        )
    first, end = table.stations_m[region], table.ends_m[region]
    outside = station_m > end + _SAME_M or (region > 0 and station_m < first - _SAME_M)
    if outside:
        raise OutOfRange(
            "The station does not lie in its region.",
            where=f"{station_m:g} in region {region}, {first:g} to {end:g}.",
        )
    return float(table.distances_m[region] + station_m - first)
