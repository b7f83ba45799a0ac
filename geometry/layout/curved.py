"""Curved walls: stakes set out radially, close enough that chords hold the curve."""

from __future__ import annotations

import dataclasses
import math

from geometry.layout.arcs import Arc, chords_needed
from geometry.layout.lines import LineKind, WallLine
from geometry.layout.rays import Ray, RayStart, cast
from geometry.layout.scene import Scene

TOWARD_CENTRE = 0.9
"""A stake inside a curve stays short of the centre, where radial lines cross."""


def radial_rays(scene: Scene) -> list[Ray]:
    """Rays square to each curved wall, at every chord point, ends included.

    The chords are the fewest whose mid-ordinate stays within the chord tolerance.
    """
    starts, limits = [], []
    for line in scene.lines:
        if line.kind is LineKind.CURVED_WALL and line.arc is not None:
            found = _starts(line, line.arc, scene.rules.chord_tolerance_m)
            inward = line.arc.turn_rad < 0
            limit = TOWARD_CENTRE * line.arc.radius_m if inward else math.inf
            starts += found
            limits += [limit] * len(found)
    rays = cast(scene, starts)
    return [_within(r, limit) for r, limit in zip(rays, limits, strict=True)]


def _starts(line: WallLine, arc: Arc, tolerance_m: float) -> list[RayStart]:
    count = chords_needed(arc, tolerance_m)
    outward = 1.0 if arc.turn_rad > 0 else -1.0
    starts = []
    for i, (e, n) in enumerate(arc.points(count).tolist(), start=1):
        de, dn = e - arc.centre[0], n - arc.centre[1]
        r = outward * math.hypot(de, dn)
        end = f"point {i} of {count + 1}"
        starts.append(RayStart(line.id, end, (e, n), (de / r, dn / r), in_frame=False))
    return starts


def _within(ray: Ray, limit: float) -> Ray:
    free = tuple((a, min(b, limit)) for a, b in ray.free if a < limit)
    source = "the curved wall" if ray.counted_from_m == 0.0 else ray.measured_from
    return dataclasses.replace(ray, free=free, measured_from=source)
