"""Rays: a line carried past its last wall point, and where a stake may stand on it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import shapely

from geometry.checked import Array
from geometry.layout.direction import EnclosingRectangle
from geometry.layout.lines import LineKind, WallLine
from geometry.layout.scene import Scene
from geometry.layout.words import compass

SQUARE = 2e-3
"""Sine of the angle within which a line counts as square to the rectangle."""

AT_CORNER_M = 0.02
SLIVER_M = 0.05
"""A line fitted through merged walls may graze the wall it belongs to."""

HORIZON_M = 10.0


@dataclass(frozen=True, slots=True)
class Ray:
    """From a wall point outward. Distances along it are metres from `start`.

    `counted_from_m` is where whole steps are counted from and `measured_from` its name;
    `through_m` is where the ray last leaves the building, 0 when it never enters it;
    `free` are the stretches where a stake may stand, nearest first.
    """

    line_id: str
    end: str
    side: str
    start: tuple[float, float]
    unit: tuple[float, float]
    counted_from_m: float
    measured_from: str
    through_m: float
    in_frame: bool
    free: tuple[tuple[float, float], ...]
    beside_m: float = 0.0

    def at(self, t: float) -> tuple[float, float]:
        return self.start[0] + t * self.unit[0], self.start[1] + t * self.unit[1]

    def is_free(self, t: float) -> bool:
        return any(low - 1e-7 <= t <= high + 1e-7 for low, high in self.free)


@dataclass(frozen=True, slots=True)
class RayStart:
    """What is needed to draw a ray; `beside_m` is how far its string lies from the
    wall, to the right of the line."""

    line_id: str
    end: str
    start: tuple[float, float]
    unit: tuple[float, float]
    in_frame: bool = True
    beside_m: float = 0.0


def line_starts(line: WallLine, beside_m: float = 0.0) -> list[RayStart]:
    """The two rays of a straight line, from its start backwards and its end onwards."""
    a, b = np.asarray(line.start), np.asarray(line.end)
    u = (b - a) / line.length_m
    aside = beside_m * np.array([u[1], -u[0]])
    return [
        _ray_start(line.id, a + aside, -u, beside_m),
        _ray_start(line.id, b + aside, u, beside_m),
    ]


def _ray_start(line_id: str, p: Array, u: Array, beside_m: float) -> RayStart:
    at, unit = (float(p[0]), float(p[1])), (float(u[0]), float(u[1]))
    return RayStart(line_id, compass(*unit), at, unit, beside_m=beside_m)


def all_rays(scene: Scene) -> list[Ray]:
    """The rays of every straight line of the scene, two per line."""
    straight = [line for line in scene.lines if line.kind is not LineKind.CURVED_WALL]
    return cast(scene, [s for line in straight for s in line_starts(line)])


def cast(scene: Scene, starts: Sequence[RayStart]) -> list[Ray]:
    """Rays with the stretches of allowed ground on each, all cut in two calls."""
    if not starts:
        return []
    at = np.array([s.start for s in starts])
    unit = np.array([s.unit for s in starts])
    segments = shapely.linestrings(np.stack([at, at + _length(scene) * unit], axis=1))
    free = _stretches(shapely.intersection(segments, scene.allowed.area), at, unit)
    within = _stretches(shapely.intersection(segments, scene.outline.polygon), at, unit)
    return [
        _ray(scene.rectangle, s, f, w)
        for s, f, w in zip(starts, free, within, strict=True)
    ]


def _length(scene: Scene) -> float:
    low_e, low_n, high_e, high_n = scene.allowed.area.bounds or (0.0, 0.0, 0.0, 0.0)
    return math.hypot(high_e - low_e, high_n - low_n) + HORIZON_M


def _stretches(
    cut: Any, at: Array, unit: Array
) -> list[tuple[tuple[float, float], ...]]:
    """Where each ray runs inside, as (from, to) along it, sorted; points left out."""
    parts, owner = shapely.get_parts(cut, return_index=True)
    lines = shapely.get_type_id(parts) == 1
    lines &= ~shapely.is_empty(parts)
    parts, owner = parts[lines], owner[lines]
    ends = np.stack([shapely.get_point(parts, 0), shapely.get_point(parts, -1)])
    xy = shapely.get_coordinates(ends.ravel()).reshape(2, -1, 2)
    t = ((xy - at[owner]) * unit[owner]).sum(axis=2)
    low, high = t.min(axis=0).tolist(), t.max(axis=0).tolist()
    found: list[list[tuple[float, float]]] = [[] for _ in at]
    for i, a, b in zip(owner.tolist(), low, high, strict=True):
        if b - a > 1e-6:
            found[i].append((a, b))
    return [tuple(sorted(each)) for each in found]


def _ray(
    rectangle: EnclosingRectangle | None,
    s: RayStart,
    free: tuple[tuple[float, float], ...],
    within: tuple[tuple[float, float], ...],
) -> Ray:
    through = max((b for _, b in within if b > SLIVER_M), default=0.0)
    in_frame = s.in_frame and rectangle is not None
    side, counted = s.end, through
    if in_frame and rectangle is not None:
        leaves, normal, square = leaving(rectangle, s.start, s.unit, 0.0)
        side = compass(*normal)
        if square:
            counted = max(through, leaves)
    if counted < AT_CORNER_M:
        counted, source = 0.0, "the corner" if s.beside_m == 0 else "the wall's end"
    elif counted - through < AT_CORNER_M and through > 0:
        counted, source = through, "the far side"
    else:
        source = f"the line of the {side} side"
    return Ray(
        line_id=s.line_id,
        end=s.end,
        side=side,
        start=s.start,
        unit=s.unit,
        counted_from_m=counted,
        measured_from=source,
        through_m=through,
        in_frame=in_frame,
        free=tuple((a, b) for a, b in free if b > max(through, 0.0)),
        beside_m=s.beside_m,
    )


def leaving(
    rectangle: EnclosingRectangle,
    start: tuple[float, float],
    unit: tuple[float, float],
    margin_m: float,
) -> tuple[float, tuple[float, float], bool]:
    """Where a ray leaves the rectangle widened by `margin_m`: distance along the ray
    (not below 0), outward normal of that side, and whether the ray is square to it."""
    s, c = math.sin(rectangle.azimuth_rad), math.cos(rectangle.azimuth_rad)
    de, dn = start[0] - rectangle.centre[0], start[1] - rectangle.centre[1]
    axes = ((c, -s, rectangle.across_m / 2), (s, c, rectangle.along_m / 2))
    best = (math.inf, (0.0, 1.0), False)
    for ax_e, ax_n, half in axes:
        speed = unit[0] * ax_e + unit[1] * ax_n
        if abs(speed) < SQUARE:
            continue
        sign = 1.0 if speed > 0 else -1.0
        t = (half + margin_m - sign * (de * ax_e + dn * ax_n)) / abs(speed)
        if t < best[0]:
            best = (t, (sign * ax_e, sign * ax_n), abs(speed) > 1 - SQUARE**2)
    return max(best[0], 0.0), best[1], best[2]
