"""Things that stand in the way of a sight: outlines with, where known, a top."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array, Flags
from geometry.errors import BadOutline

MARGIN_M = 0.15
"""A line of sight keeps this distance: warm walls bend it, people lean into it."""


@dataclass(frozen=True, slots=True, eq=False)
class Obstacle:
    """`outline` (n, 2), not repeated at the end, already inflated by the margin.

    `bare` is the outline as given, `top_m` its elevation; infinite when not known.
    """

    outline: Array
    bare: Array
    top_m: float


def obstacle(
    outline: ArrayLike, top_m: float = math.inf, *, margin_m: float = MARGIN_M
) -> Obstacle:
    """An obstacle from its outline (n, 2) in metres, open or closed, any direction.

    Raises BadOutline when it crosses itself or has no area; WrongShape, NotFinite.

    >>> len(obstacle([(0, 0), (4, 0), (4, 4), (0, 4)], 3.0).outline)
    4
    """
    corners = checked.points("obstacle outline", outline)
    if len(corners) > 1 and bool(np.all(corners[0] == corners[-1])):
        corners = corners[:-1]
    shape = shapely.Polygon(corners) if len(corners) >= 3 else shapely.Polygon()
    if len(corners) < 3 or not shape.is_valid or shape.area < 1e-9:
        raise BadOutline(
            "An obstacle outline crosses itself or has no area.",
            where=f"It has {len(corners)} corners.",
            do="Draw it corner by corner, in order.",
        )
    grown = shape.buffer(
        checked.not_negative("margin", margin_m), join_style="mitre", mitre_limit=2.0
    )
    ring = np.asarray(grown.exterior.coords)[:-1]
    top = float(top_m)
    return Obstacle(ring, corners, math.inf if math.isnan(top) else top)


def outline_for(thing: Obstacle, mark: Array) -> Array:
    """The inflated outline, or the bare one where a mark stands within the margin.

    A prism on the face of a wall is inside the inflated wall and would never be seen.
    """
    grown, bare = shapely.Polygon(thing.outline), shapely.Polygon(thing.bare)
    here = shapely.Point(mark)
    if grown.covers(here) and not bare.contains(here):
        inner = bare.buffer(-1e-6, join_style="mitre")
        if isinstance(inner, shapely.Polygon) and not inner.is_empty:
            return np.asarray(inner.exterior.coords)[:-1]
    return thing.outline


def inside_any(points: ArrayLike, things: Sequence[Obstacle]) -> Flags:
    """For each of `points` (n, 2) whether it lies in an obstacle; bool (n,)."""
    p = checked.points("points", points)
    found = np.zeros(len(p), dtype=bool)
    for thing in things:
        found |= shapely.contains_xy(shapely.Polygon(thing.outline), p[:, 0], p[:, 1])
    return found
