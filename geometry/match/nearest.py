"""The planned mark at a shot's place, and whether another is nearly as near."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.spatial import cKDTree

from geometry import checked
from geometry.checked import Array


@dataclass(frozen=True, slots=True, eq=False)
class Nearest:
    """One row per shot: the mark within reach (-1: none), the next nearest (-1).

    `distance_m` is to the nearest mark at any distance, infinite without marks.
    `clear` is false where the next mark is not clearly farther.
    """

    row: NDArray[np.int64]
    second: NDArray[np.int64]
    distance_m: Array
    clear: NDArray[np.bool_]


def nearest_marks(
    planned: ArrayLike, shots: ArrayLike, *, near_m: float, clearly: float = 3.0
) -> Nearest:
    """The nearest of planned marks (n, 2) to each shot (m, 2); E, N in metres.

    >>> found = nearest_marks([(0, 0), (0.2, 0)], [(0.09, 0), (5, 5)], near_m=0.5)
    >>> found.row.tolist(), found.clear.tolist()
    ([0, -1], [False, True])

    Raises NotFinite, WrongShape or OutOfRange.
    """
    plan, seen = checked.points("planned", planned), checked.points("shots", shots)
    near = checked.positive("near_m", near_m)
    count = len(seen)
    if not len(plan) or not count:
        none = np.full(count, -1, dtype=np.int64)
        return Nearest(none, none, np.full(count, np.inf), np.ones(count, dtype=bool))
    origin = plan[0]
    away, index = cKDTree(plan - origin).query(seen - origin, k=[1, 2])
    within = away[:, 0] <= near
    close = np.isfinite(away[:, 1]) & (away[:, 0] * clearly > away[:, 1])
    # two marks drawn at one place are never told apart by place
    close |= away[:, 1] < 1e-6
    close &= within
    return Nearest(
        row=np.where(within, index[:, 0], -1),
        second=np.where(close, index[:, 1], -1),
        distance_m=away[:, 0],
        clear=~close,
    )
