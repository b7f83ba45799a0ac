"""Another place on the same line, where the old spot is no longer possible."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import BadOutline, OutOfRange


@dataclass(frozen=True, slots=True)
class Place:
    """`position` (E, N) at a whole `offset` (in the job's unit) along the line.

    `label` the offset as it goes on the lath; `offset_m` in metres; `clear_m` distance
    to the nearest zone; `moved_m` from the old spot, outward positive.
    """

    position: tuple[float, float]
    offset: int
    offset_m: float
    label: str
    clear_m: float
    moved_m: float


def relocated(
    start: ArrayLike,
    azimuth_rad: float,
    old_offset_m: float,
    zones: Sequence[ArrayLike],
    *,
    step: int = 5,
    unit_m: float = 0.3048,
    unit_name: str = "ft",
    property_line: ArrayLike | None = None,
    clearance_m: float = 0.6,
    farthest_m: float = 60.0,
    occupied: ArrayLike = (),
) -> tuple[Place, ...]:
    """Whole offsets on the line from `start` along `azimuth_rad`, nearest the old first.

    `start` (E, N): what the offset counts from (the wall line or corner); the stake
    stood `old_offset_m` from it. Offsets are multiples of `step` units. A place is good
    when it keeps `clearance_m` from every zone (outlines (n, 2): excavation, haul road,
    keep-out) and from `occupied` spots (k, 2), and lies inside `property_line`. An
    empty answer means the line has no room within `farthest_m`. Raises BadOutline,
    WrongShape, NotFinite, OutOfRange.

    >>> found = relocated((0, 0), math.pi / 2, 3.048, [[(2, -2), (5, -2), (5, 2), (2, 2)]])
    >>> found[0].label, round(found[0].offset_m, 3)
    ('20 ft', 6.096)
    """
    origin = checked.point("start", start)
    azimuth = checked.number("azimuth", azimuth_rad)
    old = checked.number("old offset", old_offset_m)
    unit = checked.positive("unit", unit_m)
    room = checked.positive("farthest", farthest_m)
    if step < 1 or room / (step * unit) > 100_000:
        raise OutOfRange("step must be at least one unit.", where=f"It is {step}.")
    keep = checked.not_negative("clearance", clearance_m)
    shapes = [_shape("zone", zone, origin) for zone in zones]
    inside = (
        None if property_line is None else _shape("property", property_line, origin)
    )
    taken = checked.points("occupied", occupied) - origin
    direction = np.array([math.sin(azimuth), math.cos(azimuth)])
    last = math.floor(room / (step * unit) + 1e-9)
    found = []
    for count in range(step, step * last + 1, step):
        spot = count * unit * direction
        clear = _clear(spot, shapes, taken)
        if clear < keep - 1e-9 or not _within(spot, inside):
            continue
        if abs(count * unit - old) < 0.005:
            continue
        east, north = (float(x) for x in origin + spot)
        found.append(
            Place(
                (east, north),
                count,
                count * unit,
                f"{count} {unit_name}",
                clear,
                count * unit - old,
            )
        )
    return tuple(sorted(found, key=lambda p: (abs(p.moved_m), -p.moved_m)))


def _shape(name: str, outline: ArrayLike, origin: Array) -> shapely.Polygon:
    corners = checked.points(name, outline) - origin
    shape = shapely.Polygon(corners) if len(corners) >= 3 else shapely.Polygon()
    if not shape.is_valid or shape.is_empty or shape.area < 1e-9:
        raise BadOutline(
            f"A {name} outline crosses itself or has no area.",
            do="Draw it corner by corner, in order.",
        )
    return shape


def _clear(spot: Array, zones: Sequence[shapely.Polygon], taken: Array) -> float:
    here = shapely.Point(spot)
    gaps = [float(shapely.distance(here, zone)) for zone in zones]
    gaps += np.hypot(*(taken - spot).T).tolist() if len(taken) else []
    return min(gaps, default=math.inf)


def _within(spot: Array, inside: shapely.Polygon | None) -> bool:
    return inside is None or bool(inside.contains(shapely.Point(spot)))
