"""Perpendicular offset: where a point stands against a line, and the way back."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.cogo.crossings import unit_vector
from geometry.errors import WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class Offsets:
    """Points against a line: `along_m` (n,) from its start, `right_m` (n,) to the
    right (left is negative), and the `feet_m` (n, 2) of the perpendiculars."""

    along_m: Array
    right_m: Array
    feet_m: Array = field(repr=False)


def offsets_from_line(points: ArrayLike, start: ArrayLike, end: ArrayLike) -> Offsets:
    """Distance along and offset of points (n, 2) from the line `start` to `end`.

    The line goes on beyond both ends. Raises CoincidentPoints, NotFinite, WrongShape,
    OutOfRange.

    >>> at = offsets_from_line([(3.0, 4.0)], (0.0, 0.0), (0.0, 10.0))
    >>> at.along_m.tolist(), at.right_m.tolist()
    ([4.0], [3.0])
    """
    a = checked.point("start", start)
    u = unit_vector("line", a, end)
    d = checked.points("points", points) - a
    distance = d[:, 0] * u[0] + d[:, 1] * u[1]
    right = d[:, 0] * u[1] - d[:, 1] * u[0]
    return Offsets(distance, right, a + distance[:, None] * u)


def points_off_line(
    start: ArrayLike, end: ArrayLike, along_m: ArrayLike, right_m: ArrayLike
) -> Array:
    """Points (n, 2) at distances along and offsets to the right of a line.

    >>> points_off_line((0, 0), (0, 10), [4.0], [-3.0]).tolist()
    [[-3.0, 4.0]]
    """
    a = checked.point("start", start)
    u = unit_vector("line", a, end)
    distance = checked.numbers("distances along", along_m)
    right = checked.numbers("offsets", right_m)
    if distance.shape != right.shape:
        raise WrongShape(
            "There must be as many distances along as offsets.",
            where=f"There are {len(distance)} and {len(right)}.",
        )
    n = np.array([u[1], -u[0]])
    reached = a + distance[:, None] * u + right[:, None] * n
    return checked.points("the points reached", reached)
