"""Where a stake may stand: the property without the excavation and the keep-outs."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import shapely
from numpy.typing import ArrayLike
from shapely.geometry import LineString, Point, Polygon

from geometry import checked
from geometry.checked import Array
from geometry.errors import BadOutline, EmptyInput, OutOfRange

TOUCH_M = 1e-7


@dataclass(frozen=True, slots=True)
class KeepOut:
    """Something stakes must stay clear of: a haul road, a utility, a building.

    `points` (n, 2; E, N metres): a polygon when `is_area`, else a line or one point.
    `is_structure`: an excavation beside it needs an engineer, and a target may be
    fixed on it when there is no room for a stake.
    """

    name: str
    points: ArrayLike
    clearance_m: float = 0.0
    is_area: bool = True
    is_structure: bool = False


@dataclass(frozen=True, slots=True)
class Barrier:
    """One thing in the way: `shape` with its clearance (shapely), `bare` without."""

    name: str
    shape: Any
    bare: Any
    is_structure: bool = False


@dataclass(frozen=True, slots=True)
class Allowed:
    """The ground where stakes may stand (`area`), and what takes the rest away."""

    area: Any
    property_line: Any
    barriers: tuple[Barrier, ...]

    def holds(self, e: float, n: float) -> bool:
        """Whether a stake may stand at (e, n); on the edge it may."""
        return bool(shapely.dwithin(self.area, shapely.points(e, n), TOUCH_M))

    def in_the_way(self, e: float, n: float) -> tuple[str, ...]:
        """What keeps a stake from standing at (e, n), in plain words."""
        spot = shapely.points(e, n)
        names = [b.name for b in self.barriers if _inside(b.shape, spot)]
        if self.property_line is not None and not shapely.dwithin(
            self.property_line, spot, TOUCH_M
        ):
            names.append("ground off the property")
        return tuple(names)


def _inside(shape: Any, spot: Any) -> bool:
    return bool(shape.intersects(spot)) and not bool(
        shapely.dwithin(shape.boundary, spot, TOUCH_M)
    )


def read_keep_outs(keep_outs: Sequence[KeepOut], origin: Array) -> tuple[Barrier, ...]:
    """Keep-outs as barriers in local metres.

    Raises EmptyInput for one without points, BadOutline for an area that crosses
    itself, OutOfRange for a negative clearance or a line or point without one.
    """
    return tuple(_barrier(k, origin) for k in keep_outs)


def _barrier(k: KeepOut, origin: Array) -> Barrier:
    points = checked.points(k.name, k.points) - origin
    clearance = checked.number(f"clearance of {k.name}", k.clearance_m)
    if len(points) == 0:
        raise EmptyInput(f"The keep-out {k.name} has no points.")
    flat = len(points) < 3 or not k.is_area
    if clearance < 0 or (flat and clearance == 0):
        raise OutOfRange(
            f"{k.name} needs a clearance greater than zero.",
            do="Say how far from it a stake may be driven.",
        )
    shape: Any
    if len(points) == 1:
        shape = Point(points[0])
    elif not flat:
        shape = Polygon(points)
        if not shape.is_valid:
            raise BadOutline(
                f"The outline of {k.name} crosses itself.",
                do="Check the order of its corners.",
            )
    else:
        shape = LineString(points)
    kept = shape
    if clearance > 0:
        # 16 pieces a quarter and a hair more, so that the round ends cover the circle
        kept = shape.buffer(clearance * 1.0013, quad_segs=16)
    return Barrier(k.name, kept, shape, k.is_structure)


def read_property(property_line: ArrayLike | None, origin: Array) -> Any:
    """The property polygon in local metres, or None when none is given."""
    if property_line is None:
        return None
    ring = checked.points("property line", property_line) - origin
    if len(ring) < 3:
        raise BadOutline("The property line needs at least three corners.")
    polygon = Polygon(ring)
    if not polygon.is_valid:
        raise BadOutline(
            "The property line crosses itself.", do="Check the order of its corners."
        )
    return polygon


def allowed_ground(
    dig: Any,
    clearance_m: float,
    property_line: Any,
    barriers: tuple[Barrier, ...],
    reach_m: float,
) -> Allowed:
    """Property (or everything within reach) without dig and barriers.

    `dig` is the excavation limit, kept clear of by `clearance_m`.
    """
    hole = dig.buffer(clearance_m, join_style="mitre") if clearance_m > 0 else dig
    everything = shapely.box(*_grown(dig.bounds, reach_m))
    area = everything if property_line is None else everything & property_line
    forbidden = shapely.union_all([hole, *(b.shape for b in barriers)])
    area = area.difference(forbidden)
    shapely.prepare(area)
    return Allowed(
        area=area,
        property_line=property_line,
        barriers=(Barrier("the excavation", hole, dig), *barriers),
    )


def _grown(bounds: tuple[float, float, float, float], by: float) -> Array:
    grown: Array = np.asarray(bounds) + np.array([-by, -by, by, by])
    return grown
