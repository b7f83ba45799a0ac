"""Sight lines: is a mark seen from here, singly or from every point of a grid?

For a list of lines every edge is tested. For a grid, each mark casts the shadow of all
obstacles once, and the grid points are looked up in it: the same answer, many times
faster. An obstacle lower than both ends is no obstacle; one lower than the higher end
hides only up to where the line climbs over it.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
import shapely
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array, Flags
from geometry.errors import WrongShape
from geometry.precision.obstacles import Obstacle, outline_for


def clear(
    start: ArrayLike,
    end: ArrayLike,
    things: Sequence[Obstacle],
    *,
    start_elevation_m: float | None = None,
    end_elevation_m: float | None = None,
) -> bool:
    """Whether nothing stands between `start` and `end` (E, N).

    Elevations are those of instrument and target, not of the ground; with either
    missing every obstacle blocks whatever its top. Raises WrongShape, NotFinite.

    >>> from geometry.precision.obstacles import obstacle
    >>> wall = obstacle([(4, -1), (5, -1), (5, 1), (4, 1)], 2.0)
    >>> clear((0, 0), (9, 0), [wall]), clear((0, 0), (9, 3), [wall])
    (False, True)
    >>> clear((0, 0), (9, 0), [wall], start_elevation_m=3, end_elevation_m=3)
    True
    """
    a, b = checked.point("start", start), checked.point("end", end)
    return all(
        not _blocks(thing, a, b, start_elevation_m, end_elevation_m) for thing in things
    )


def clear_lines(
    starts: ArrayLike,
    ends: ArrayLike,
    things: Sequence[Obstacle],
    *,
    start_elevations_m: ArrayLike | None = None,
    end_elevations_m: ArrayLike | None = None,
) -> Flags:
    """`clear` for a list of lines, `starts` and `ends` (n, 2); bool (n,).

    Elevations (n,), not-a-number where unknown. A tree of the outlines finds the few
    pairs that meet; only those are tested by their edges.
    """
    a, b = checked.points("starts", starts), checked.points("ends", ends)
    if len(a) != len(b):
        raise WrongShape("Starts and ends must be equally many.")
    free = np.ones(len(a), dtype=bool)
    if not len(a) or not things:
        return free
    up = np.full(len(a), np.nan) if start_elevations_m is None else start_elevations_m
    at = np.full(len(a), np.nan) if end_elevations_m is None else end_elevations_m
    heights = [
        [None if math.isnan(h) else float(h) for h in np.asarray(side, dtype=float)]
        for side in (up, at)
    ]
    tree = shapely.STRtree([shapely.Polygon(thing.outline) for thing in things])
    lines = shapely.linestrings(np.stack([a, b], axis=1))
    for i, j in tree.query(lines, predicate="intersects").T:
        if free[i]:
            free[i] = not _blocks(things[j], a[i], b[i], heights[0][i], heights[1][i])
    return free


def seen_from(
    places: ArrayLike,
    mark: ArrayLike,
    things: Sequence[Obstacle],
    *,
    instrument_elevation_m: float | None = None,
    mark_elevation_m: float | None = None,
) -> Flags:
    """For each of `places` (n, 2) whether `mark` is seen from it; bool (n,).

    One shadow for the mark, then a lookup. A place inside an obstacle sees nothing (see
    `inside_any` to leave such places out). Raises WrongShape, NotFinite.

    >>> from geometry.precision.obstacles import obstacle
    >>> wall = obstacle([(4, -1), (5, -1), (5, 1), (4, 1)])
    >>> seen_from([(9, 0), (9, 9), (1, 0)], (0, 0), [wall]).tolist()
    [False, True, True]
    """
    p = checked.points("places", places)
    m = checked.point("mark", mark)
    if len(p) == 0 or not things:
        return np.ones(len(p), dtype=bool)
    reach = float(np.hypot(*(p - m).T).max()) + 1.0
    parts = []
    for thing in things:
        depth = _depth(thing.top_m, mark_elevation_m, instrument_elevation_m)
        if depth is not None:
            parts += _shadow(outline_for(thing, m) - m, depth, reach)
    if not parts:
        return np.ones(len(p), dtype=bool)
    shade = shapely.union_all(parts)
    shapely.prepare(shade)
    hidden = shapely.contains_xy(shade, p[:, 0] - m[0], p[:, 1] - m[1])
    return np.asarray(~hidden)


def visibility(
    places: ArrayLike,
    marks: ArrayLike,
    things: Sequence[Obstacle],
    *,
    instrument_elevation_m: float | None = None,
    mark_elevations_m: ArrayLike | None = None,
) -> Flags:
    """Which of `marks` (k, 2) are seen from which of `places` (n, 2); bool (n, k)."""
    m = checked.points("marks", marks)
    heights: list[float | None] = [None] * len(m)
    if mark_elevations_m is not None:
        given = checked.numbers("mark elevations", mark_elevations_m)
        if len(given) != len(m):
            raise WrongShape("Marks and their elevations must be equally many.")
        heights = [float(h) for h in given]
    columns = [
        seen_from(
            places,
            mark,
            things,
            instrument_elevation_m=instrument_elevation_m,
            mark_elevation_m=height,
        )
        for mark, height in zip(m, heights, strict=True)
    ]
    count = len(checked.points("places", places))
    return np.column_stack(columns) if columns else np.ones((count, 0), dtype=bool)


def _depth(
    top: float, mark: float | None, instrument: float | None
) -> tuple[float, float] | None:
    """From how many times to how many times its own distance an obstacle hides.

    None when it hides nothing. Seen from a mark above it, its shadow ends; from a mark
    below it with the instrument above, places close behind look over it.
    """
    if mark is None or instrument is None or top >= max(mark, instrument):
        return 1.0, math.inf
    if top <= min(mark, instrument):
        return None
    turn = (instrument - mark) / (top - mark)
    return (1.0, turn) if mark > instrument else (turn, math.inf)


def _shadow(
    outline: Array, depth: tuple[float, float], reach: float
) -> list[shapely.Geometry]:
    """Shadow of each edge, and the obstacle itself, about a mark at the origin."""
    parts: list[shapely.Geometry] = [shapely.Polygon(outline)]
    for a, b in zip(outline, np.roll(outline, -1, axis=0), strict=True):
        if abs(float(a[0] * b[1] - a[1] * b[0])) > 1e-12:
            parts.append(shapely.Polygon(_behind(a, b, depth, reach)))
    return parts


def _behind(a: Array, b: Array, depth: tuple[float, float], reach: float) -> Array:
    """What lies behind the edge a-b, from and to these multiples of its distance."""
    near, far = depth
    if math.isfinite(far):
        return np.array([near * a, near * b, far * b, far * a])
    fan = _fan(b / math.hypot(*b), a / math.hypot(*a))
    # A chord over half a radian stays outside 0.96 of its radius, so 1.5 covers reach.
    return np.vstack([near * a, near * b, 1.5 * max(reach, near * _size(a, b)) * fan])


def _size(a: Array, b: Array) -> float:
    return max(math.hypot(*a), math.hypot(*b))


def _fan(start: Array, end: Array) -> Array:
    """Unit vectors from `start` to `end` the short way, at most half a radian apart."""
    cross, dot = float(start[0] * end[1] - start[1] * end[0]), float(start @ end)
    angle = math.atan2(cross, dot)
    turns = np.linspace(0.0, angle, max(2, math.ceil(abs(angle) / 0.5) + 1))
    side = np.array([-start[1], start[0]])
    return np.asarray(np.cos(turns)[:, None] * start + np.sin(turns)[:, None] * side)


def _blocks(
    thing: Obstacle, a: Array, b: Array, from_m: float | None, to_m: float | None
) -> bool:
    ring = _outline_between(thing, a, b)
    fractions = _crossings(ring, a, b)
    shape = shapely.Polygon(ring)
    inside = [t for t, p in ((0.0, a), (1.0, b)) if shape.contains(shapely.Point(p))]
    fractions = np.concatenate([fractions, inside])
    if len(fractions) == 0:
        return False
    if from_m is None or to_m is None:
        return True
    heights = from_m + fractions * (to_m - from_m)
    return bool(heights.min() < thing.top_m)


def _outline_between(thing: Obstacle, a: Array, b: Array) -> Array:
    for end in (a, b):
        ring = outline_for(thing, end)
        if ring is not thing.outline:
            return ring
    return thing.outline


def _crossings(ring: Array, a: Array, b: Array) -> Array:
    """Fractions of a-b at which it crosses an edge of `ring`."""
    start, edge = ring, np.roll(ring, -1, axis=0) - ring
    ray = b - a
    det = ray[0] * edge[:, 1] - ray[1] * edge[:, 0]
    safe = np.where(np.abs(det) < 1e-15, np.nan, det)
    gap = start - a
    along = (gap[:, 0] * edge[:, 1] - gap[:, 1] * edge[:, 0]) / safe
    on_edge = (gap[:, 0] * ray[1] - gap[:, 1] * ray[0]) / safe
    hit = (along >= 0) & (along <= 1) & (on_edge >= 0) & (on_edge <= 1)
    return np.asarray(along[hit])
