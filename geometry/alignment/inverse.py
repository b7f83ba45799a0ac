"""From points to distance along and offset: where a shot lies on the line.

The nearest sample starts Newton's method on t = 0, t being what is left along the
tangent: the step is t / (1 - k o), k the curvature and o the offset. A point with
another foot nearly as near is flagged, never decided in silence (see feet).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import cast

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.spatial import cKDTree

from geometry import checked
from geometry.alignment.feet import BEYOND_M, feet_of
from geometry.alignment.line import Alignment
from geometry.alignment.placing import on_line
from geometry.alignment.samples import sample_distances, sample_points
from geometry.checked import Array

RIVAL_M = 1.0
"""A second foot this little farther away makes the answer ambiguous."""

_NEIGHBOURS = 6
_ROUNDS = 10
_CLOSE_M = 1e-9
_FAR_SAMPLES = 2000
_CHUNK = 500


@dataclass(frozen=True, slots=True, eq=False)
class OnLine:
    """One row per point: distance along and offset (right positive), metres.

    `azimuth_rad` is the line's direction at the foot. `beyond_m` is 0 on the line,
    negative before its start, positive after its end (measured on the tangent).
    `ambiguous` is true where another foot is as near, or nearly: ask `feet_of` for
    all of them, or give a hint.
    """

    distance_m: Array
    offset_m: Array
    azimuth_rad: Array
    beyond_m: Array
    ambiguous: NDArray[np.bool_]


def stations_and_offsets(
    line: Alignment, points: ArrayLike, *, rival_m: float = RIVAL_M
) -> OnLine:
    """Distance along and offset of points (n, 2), E, N in metres.

    >>> from geometry.alignment import alignment, straight
    >>> on = stations_and_offsets(alignment((0, 0), 0.0, [straight(100)]), [(3, 40)])
    >>> on.distance_m.tolist(), on.offset_m.tolist()
    ([40.0], [3.0])

    Raises NotFinite, OutOfRange or WrongShape for points that are none.
    """
    rows = checked.points("points", points) - line.origin
    rival = checked.number("rival_m", rival_m)
    if not len(rows):
        none = np.zeros(0)
        return OnLine(none, none, none, none, np.zeros(0, dtype=bool))
    first, second = _seeds(line, rows, rival)
    best = _foot(line, rows, first)
    other = second >= 0
    ambiguous = np.zeros(len(rows), dtype=bool)
    if other.any():
        rivals = _foot(line, rows[other], second[other])
        best, ambiguous[other] = _nearer(best, rivals, other, rival)
    _settle(line, rows, best, ambiguous, rival)
    return OnLine(best.distance, best.offset, best.azimuth, best.beyond, ambiguous)


@dataclass(slots=True, eq=False)
class _Feet:
    distance: Array
    offset: Array
    azimuth: Array
    beyond: Array
    gap: Array
    settled: NDArray[np.bool_]


def _foot(line: Alignment, rows: Array, seed: Array) -> _Feet:
    s = seed.copy()
    n = len(rows)
    along, offset, azimuth, room = (np.empty(n) for _ in range(4))
    live = np.arange(n)
    for _ in range(_ROUNDS):
        centre, az, bend = on_line(line, s[live])
        d = rows[live] - centre
        sine, cosine = np.sin(az), np.cos(az)
        t = sine * d[:, 0] + cosine * d[:, 1]
        o = cosine * d[:, 0] - sine * d[:, 1]
        along[live], offset[live], azimuth[live] = t, o, az
        room[live] = den = 1.0 - bend * o
        moved = _limited(t, den)
        target = np.clip(s[live] + moved, line.start_m, line.end_m)
        going = np.abs(target - s[live]) > _CLOSE_M
        s[live[going]] = target[going]
        live = live[going]
        if not live.size:
            break
    return _measured(line, s, along, offset, azimuth, room)


def _limited(t: Array, den: Array) -> Array:
    """Newton's step, held to the size of t where the curve's centre is near."""
    safe = np.where(den > 0.05, den, 1.0)
    return t / safe


def _measured(
    line: Alignment, s: Array, along: Array, offset: Array, azimuth: Array, room: Array
) -> _Feet:
    before = (s <= line.start_m) & (along < -BEYOND_M)
    after = (s >= line.end_m) & (along > BEYOND_M)
    beyond = np.where(before | after, along, 0.0)
    on = np.abs(along - beyond) <= 1e-7
    minimum = (room > 0.05) | before | after
    return _Feet(
        s + beyond, offset, azimuth, beyond, np.hypot(beyond, offset), on & minimum
    )


def _nearer(
    best: _Feet, rivals: _Feet, where: NDArray[np.bool_], rival_m: float
) -> tuple[_Feet, NDArray[np.bool_]]:
    rows = np.flatnonzero(where)
    same = np.abs(rivals.distance - best.distance[rows]) < 1e-3
    close = ~same & (np.abs(rivals.gap - best.gap[rows]) < rival_m)
    better = rivals.gap < best.gap[rows]
    for name in ("distance", "offset", "azimuth", "beyond", "gap", "settled"):
        getattr(best, name)[rows[better]] = getattr(rivals, name)[better]
    return best, close


def _settle(
    line: Alignment,
    rows: Array,
    best: _Feet,
    ambiguous: NDArray[np.bool_],
    rival_m: float,
) -> None:
    """Points near a curve's centre, where Newton has no ground, one by one."""
    for i in np.flatnonzero(~best.settled):
        found = feet_of(line, rows[i] + line.origin)
        nearest = found[0]
        best.distance[i], best.offset[i] = nearest.distance_m, nearest.offset_m
        best.azimuth[i], best.beyond[i] = nearest.azimuth_rad, nearest.beyond_m
        ambiguous[i] = nearest.whole_arc or (
            len(found) > 1 and found[1].away_m - nearest.away_m < rival_m
        )


def _seeds(line: Alignment, rows: Array, rival_m: float) -> tuple[Array, Array]:
    """Distance of the nearest sample, and of the nearest on another part, or -1."""
    distances = sample_distances(line)
    samples = sample_points(line, distances)
    count = min(_NEIGHBOURS, len(samples))
    away, index = cKDTree(samples).query(rows, k=count)
    second = _elsewhere(cast("NDArray[np.int64]", index))
    unseen = (second < 0) & (away[:, -1] - away[:, 0] < rival_m)
    if unseen.any() and len(samples) > count:
        second[unseen] = _far_rivals(samples, rows[unseen], index[unseen, 0])
    seeds = np.where(second >= 0, distances[second] - line.start_m, -1.0)
    return distances[index[:, 0]], np.where(seeds >= 0, seeds + line.start_m, -1.0)


def _elsewhere(index: NDArray[np.int64]) -> NDArray[np.int64]:
    """The nearest neighbour not joined to the nearest by neighbouring samples."""
    order = np.argsort(index, axis=1)
    runs = np.diff(np.take_along_axis(index, order, axis=1), axis=1) > 1
    label_sorted = np.pad(np.cumsum(runs, axis=1), ((0, 0), (1, 0)))
    label = np.empty_like(label_sorted)
    np.put_along_axis(label, order, label_sorted, axis=1)
    apart = label != label[:, :1]
    first = np.argmax(apart, axis=1)
    chosen = index[np.arange(len(index)), first]
    return np.where(apart.any(axis=1), chosen, -1)


def _far_rivals(
    samples: Array, rows: Array, nearest: NDArray[np.int64]
) -> NDArray[np.int64]:
    """For points far off, where all neighbours look alike: the next local minimum."""
    stride = max(1, len(samples) // _FAR_SAMPLES)
    thin = samples[::stride]
    found = np.full(len(rows), -1, dtype=np.int64)
    for at in range(0, len(rows), _CHUNK):
        part = rows[at : at + _CHUNK]
        away = np.hypot(
            part[:, None, 0] - thin[None, :, 0], part[:, None, 1] - thin[None, :, 1]
        )
        found[at : at + _CHUNK] = _next_minimum(away, nearest[at : at + _CHUNK], stride)
    return found


def _next_minimum(
    away: Array, nearest: NDArray[np.int64], stride: int
) -> NDArray[np.int64]:
    padded = np.pad(away, ((0, 0), (1, 1)), constant_values=np.inf)
    low = (away <= padded[:, :-2]) & (away < padded[:, 2:])
    column = np.arange(away.shape[1])
    low &= np.abs(column[None, :] * stride - nearest[:, None]) > 2 * stride
    masked = np.where(low, away, np.inf)
    best = np.argmin(masked, axis=1)
    has = np.isfinite(masked[np.arange(len(best)), best])
    return np.where(has, best * stride, -1)
