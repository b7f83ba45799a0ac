"""The best place to set up: where every task is predicted within its tolerance.

Each candidate is judged by its worst target: 95 % semi-major axis over tolerance.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array, Flags, Indices
from geometry.ellipse import FACTOR_95_2D
from geometry.errors import EmptyInput, OutOfRange, WrongShape
from geometry.precision.candidates import CHUNK, normals, semi_major_squared
from geometry.precision.free_station import joint_of
from geometry.precision.instruments import TotalStation


@dataclass(frozen=True, slots=True, eq=False)
class Setups:
    """All candidates judged. `score` (n,): worst 95 % semi-major over tolerance among
    the targets seen, infinite where fewer than `marks_needed` marks are seen or no
    target is; 1 or less is within tolerance. `marks_seen`, `targets_seen` (n,).
    `order` (n,): candidates best first: those that see more targets, then by score.
    `worst_target` (n,) index, -1 where none.
    """

    places: Array
    score: Array
    marks_seen: Indices
    targets_seen: Indices
    worst_target: Indices
    order: Indices
    marks_needed: int

    @property
    def best(self) -> int | None:
        """Index of the best candidate; None when no candidate can be used."""
        first = int(self.order[0])
        return first if np.isfinite(self.score[first]) else None


def grid(low: ArrayLike, high: ArrayLike, step_m: float) -> Array:
    """Places (n, 2) every `step_m` in the rectangle from `low` to `high` (E, N).

    >>> grid((0, 0), (2, 1), 1.0).shape
    (6, 2)
    """
    a, b = checked.point("low", low), checked.point("high", high)
    step = checked.positive("step", step_m)
    counts = np.floor((b - a) / step + 1e-9).astype(int) + 1
    if counts.min() < 1 or counts.prod() > 10_000_000:
        raise OutOfRange(
            "The grid has no place, or more than ten million.",
            where=f"It would be {counts[0]} by {counts[1]}.",
            do="Give low before high, or a larger step.",
        )
    axes = [a[i] + step * np.arange(counts[i]) for i in (0, 1)]
    east, north = np.meshgrid(*axes)
    return np.column_stack([east.ravel(), north.ravel()])


def best_setup(
    places: ArrayLike,
    marks: ArrayLike,
    targets: ArrayLike,
    tolerances_m: ArrayLike,
    instrument: TotalStation,
    mark_covariances: ArrayLike | None = None,
    *,
    marks_seen: ArrayLike | None = None,
    targets_seen: ArrayLike | None = None,
    excluded: ArrayLike | None = None,
    marks_needed: int = 3,
) -> Setups:
    """Judge every one of `places` (n, 2) as a free station for `targets` (t, 2).

    `marks` (k, 2) with covariances (k, 2, 2) in m²; `tolerances_m` one or (t,);
    `marks_seen` (n, k), `targets_seen` (n, t) from `visibility`, all seen if left out;
    `excluded` (n,) places nobody can stand on. Three marks are needed by default,
    because two say nothing about which of them is wrong. Raises EmptyInput, WrongShape,
    NotFinite, OutOfRange.

    >>> s = best_setup(grid((0, 0), (40, 40), 10), [(0, 50), (50, 0), (50, 50)],
    ...                [(20, 20)], 0.01, TotalStation())
    >>> s.best is not None and bool(s.score[s.best] < 1.0)
    True
    """
    p, m, t = (
        checked.points(name, value)
        for name, value in (("places", places), ("marks", marks), ("targets", targets))
    )
    if not (len(p) and len(m) and len(t)):
        raise EmptyInput(
            "Places, marks and targets are all needed.",
            where=f"There are {len(p)}, {len(m)} and {len(t)}.",
        )
    tolerance = np.broadcast_to(checked.numbers("tolerances", tolerances_m), (len(t),))
    if float(tolerance.min()) <= 0:
        raise OutOfRange("tolerances must be greater than zero.")
    seen_m = _mask("marks seen", marks_seen, (len(p), len(m)))
    seen_t = _mask("targets seen", targets_seen, (len(p), len(t)))
    origin = m.mean(axis=0)
    joint = joint_of(len(m), mark_covariances)
    blocks = np.array(
        [
            (joint[2 * i, 2 * i], joint[2 * i, 2 * i + 1], joint[2 * i + 1, 2 * i + 1])
            for i in range(len(m))
        ]
    )
    parts = [
        _judged(
            p[i : i + CHUNK] - origin,
            m - origin,
            blocks,
            None if seen_m is None else seen_m[i : i + CHUNK],
            t - origin,
            tolerance,
            None if seen_t is None else seen_t[i : i + CHUNK],
            instrument,
            marks_needed,
        )
        for i in range(0, len(p), CHUNK)
    ]
    score, sights, reached, worst = (
        np.concatenate(x) for x in zip(*parts, strict=True)
    )
    closed = _mask("excluded", excluded, (len(p),))
    if closed is not None:
        score[closed] = np.inf
    usable = np.isfinite(score)
    order = np.lexsort((score, -np.where(usable, reached, -1)))
    return Setups(p, score, sights, reached, worst, order, marks_needed)


def finer(setups: Setups, step_m: float, *, count: int = 5, side: int = 21) -> Array:
    """Places (m, 2) in small grids about the `count` best, for a second look.

    Each grid has `side` x `side` places and reaches half of `step_m`, the step of the
    first grid, to every side and a little over.
    """
    step = checked.positive("step", step_m)
    usable = [i for i in setups.order[:count] if np.isfinite(setups.score[i])]
    offset = np.linspace(-0.6 * step, 0.6 * step, side)
    east, north = np.meshgrid(offset, offset)
    square = np.column_stack([east.ravel(), north.ravel()])
    if not usable:
        return np.empty((0, 2))
    return np.vstack([setups.places[i] + square for i in usable])


def _judged(
    places: Array,
    marks: Array,
    blocks: Array,
    seen_m: Flags | None,
    targets: Array,
    tolerance: Array,
    seen_t: Flags | None,
    instrument: TotalStation,
    needed: int,
) -> tuple[Array, Indices, Indices, Indices]:
    covariance, sights = normals(places, marks, blocks, seen_m, instrument)
    ratio = semi_major_squared(covariance, places, targets, instrument)
    ratio *= (FACTOR_95_2D / tolerance) ** 2
    reached = np.full(len(places), len(targets))
    if seen_t is not None:
        ratio = np.where(seen_t, ratio, -1.0)
        reached = seen_t.sum(axis=1)
    worst = ratio.argmax(axis=1)
    score = np.sqrt(np.maximum(ratio[np.arange(len(ratio)), worst], 0.0))
    usable = (sights >= needed) & (reached > 0) & np.isfinite(score)
    return (
        np.where(usable, score, np.inf),
        sights,
        np.where(usable, reached, 0),
        np.where(usable, worst, -1),
    )


def _mask(name: str, value: ArrayLike | None, shape: tuple[int, ...]) -> Flags | None:
    if value is None:
        return None
    mask: Flags = np.asarray(value, dtype=bool)
    if mask.shape != shape:
        raise WrongShape(
            f"{name} must have shape {shape}.", where=f"It has shape {mask.shape}."
        )
    return mask
