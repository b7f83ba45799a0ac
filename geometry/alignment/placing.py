"""From distance along and offset to a point: setting stakes out from the plan."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.alignment.line import Alignment, turned
from geometry.checked import Array
from geometry.curves.clothoid import path
from geometry.errors import WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class Placed:
    """Points (n, 2) E, N in metres and the line's azimuth (n,) at each.

    `beyond_m` (n,) is 0 on the line, negative before its start and positive after
    its end, where the tangent was carried on.
    """

    points: Array
    azimuth_rad: Array
    beyond_m: Array


def place(line: Alignment, distance_m: ArrayLike, offset_m: ArrayLike = 0.0) -> Placed:
    """The points at distances (n,) along the line and offsets (n,) or one for all.

    Offsets are square to the line, right positive. Beyond the ends the tangent is
    carried on and `beyond_m` says by how much.

    >>> from geometry.alignment import alignment, arc, straight
    >>> line = alignment((0.0, 0.0), 0.0, [straight(100.0), arc(100.0, 100.0)])
    >>> place(line, [50.0, -10.0], 2.0).points.round(6).tolist()
    [[2.0, 50.0], [2.0, -10.0]]

    Raises NotFinite or WrongShape.
    """
    distance = checked.numbers("distances", distance_m)
    offset = checked.numbers("offsets", offset_m)
    if offset.size not in (1, distance.size):
        raise WrongShape(
            "There must be one offset, or one for each distance.",
            where=f"{offset.size} offsets, {distance.size} distances.",
        )
    on = np.clip(distance, line.start_m, line.end_m)
    centre, azimuth, _ = on_line(line, on)
    beyond = distance - on
    local = centre + turned(azimuth, beyond, np.broadcast_to(offset, on.shape))
    return Placed(line.origin + local, azimuth, beyond)


def on_line(line: Alignment, distance_m: Array) -> tuple[Array, Array, Array]:
    """Point about the line's origin (n, 2), azimuth (n,), curvature (n,)."""
    i = np.searchsorted(line.distances_m[1:-1], distance_m, side="right")
    k0, k1, length = _tables(line)
    s = distance_m - line.distances_m[i]
    p = path(k0[i], k1[i], length[i], s)
    points = line.starts[i] + turned(line.azimuths_rad[i], p.along_m, p.right_m)
    curvature = k0[i] + (k1[i] - k0[i]) * (s / length[i])
    return points, line.azimuths_rad[i] + p.turn_rad, curvature


def _tables(line: Alignment) -> tuple[Array, Array, Array]:
    rows = [(e.curvature_start, e.curvature_end, e.length_m) for e in line.elements]
    k0, k1, length = np.array(rows, dtype=np.float64).T
    return k0, k1, length
