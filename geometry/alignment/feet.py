"""Every place on a line from which a point stands square, nearest first.

Inside a sharp bend, between two legs of a loop or at the centre of an arc a point
has several stations; outside an angle point it has the angle point itself. All are
found by the sign changes of what is left along the tangent between close samples,
each then closed in on by Brent's method.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.optimize import brentq

from geometry import checked
from geometry.alignment.line import Alignment
from geometry.alignment.placing import on_line
from geometry.alignment.samples import sample_distances
from geometry.checked import Array

BEYOND_M = 1e-8
"""A point less than this past an end stands at the end."""

_CENTRE_M = 1e-7
_ON_TANGENT_M = 1e-6


@dataclass(frozen=True, slots=True)
class Foot:
    """A foot: distance along and offset, metres; `away_m` is the straight distance.

    `beyond_m` is negative before the start, positive after the end. `whole_arc` is
    true at an arc's centre, where every station of the arc is equally near.
    """

    distance_m: float
    offset_m: float
    azimuth_rad: float
    beyond_m: float
    away_m: float
    whole_arc: bool


def feet_of(
    line: Alignment, point: ArrayLike, *, near_m: float | None = None
) -> tuple[Foot, ...]:
    """All feet of a point (E, N; metres) on the line, ends included, nearest first.

    With `near_m`, the expected distance along (from the stake's number, or the last
    shot), the foot closest to it along the line comes first instead.

    >>> from geometry.alignment import alignment, arc, straight
    >>> bend = [straight(100.0), arc(157.0796, 100.0), straight(100.0)]
    >>> line = alignment((0.0, 0.0), 0.0, bend)
    >>> [round(f.distance_m) for f in feet_of(line, (150.0, 50.0))]
    [50, 307]

    Raises NotFinite or WrongShape.
    """
    local = checked.point("The point", point) - line.origin
    s = sample_distances(line)
    t, _ = _left(line, s, local)
    found = [_foot(line, local, d, arc) for d, arc in _minima(line, local, s, t)]
    if near_m is None:
        return tuple(sorted(found, key=lambda foot: foot.away_m))
    hint = checked.number("near_m", near_m)
    return tuple(sorted(found, key=lambda foot: abs(foot.distance_m - hint)))


def _left(line: Alignment, s: Array, local: Array) -> tuple[Array, Array]:
    """What is left along the tangent, and the offset, from stations (n,)."""
    centre, azimuth, _ = on_line(line, s)
    d = local - centre
    sine, cosine = np.sin(azimuth), np.cos(azimuth)
    along = sine * d[:, 0] + cosine * d[:, 1]
    return along, cosine * d[:, 0] - sine * d[:, 1]


def _minima(
    line: Alignment, local: Array, s: Array, t: Array
) -> list[tuple[float, bool]]:
    """Distances where the line comes nearest: t turns from ahead to behind."""
    flat = np.abs(t) < _CENTRE_M
    found: list[tuple[float, bool]] = []
    for first, last in _flat_runs(flat):
        found.append((float(0.5 * (s[first] + s[last])), last - first > 1))
    falls = (t[:-1] > 0) & (t[1:] < 0) & ~flat[:-1] & ~flat[1:]
    for i in np.flatnonzero(falls):
        root = brentq(
            lambda d: float(_left(line, np.array([d]), local)[0][0]), s[i], s[i + 1]
        )
        found.append((float(root), False))
    if t[0] < 0 and not flat[0]:
        found.append((float(s[0]), False))
    if t[-1] > 0 and not flat[-1]:
        found.append((float(s[-1]), False))
    return found


def _flat_runs(flat: NDArray[np.bool_]) -> list[tuple[int, int]]:
    edges = np.flatnonzero(np.diff(np.pad(flat.astype(np.int8), 1)))
    return [(int(a), int(b) - 1) for a, b in edges.reshape(-1, 2)]


def _at_corner(along_m: float) -> bool:
    """Something is left along the tangent: the foot is an end or an angle point."""
    return abs(along_m) > _ON_TANGENT_M


def _foot(line: Alignment, local: Array, distance_m: float, whole_arc: bool) -> Foot:
    at = np.array([distance_m])
    _, azimuth, _ = on_line(line, at)
    along, offset = (float(a[0]) for a in _left(line, at, local))
    ends = (distance_m <= line.start_m and along < -BEYOND_M) or (
        distance_m >= line.end_m and along > BEYOND_M
    )
    beyond = along if ends else 0.0
    away = float(np.hypot(along if _at_corner(along) else 0.0, offset))
    return Foot(
        distance_m=distance_m + beyond,
        offset_m=offset if ends else float(np.copysign(away, offset)),
        azimuth_rad=float(azimuth[0]),
        beyond_m=beyond,
        away_m=away,
        whole_arc=whole_arc,
    )
