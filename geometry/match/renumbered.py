"""Shots whose numbers run ahead of or behind the marks they stand at.

One stake skipped, and from there every number is one off: the place of each shot
gives its mark, and the difference of the two numbers is the same along the run.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry.match.nearest import nearest_marks

_LAST_DIGITS = re.compile(r"^(.*?)(\d+)\D*$")
_FEWEST = 3


@dataclass(frozen=True, slots=True)
class NumberShift:
    """The commonest difference of shot number less mark number, if not zero.

    `shift` holds for `shots` of the `placed` shots that stand at a planned mark of
    the same prefix; `rows` are theirs.
    """

    shift: int
    shots: int
    placed: int
    rows: tuple[int, ...]


def number_shift(
    planned_numbers: Sequence[str],
    planned: ArrayLike,
    shot_numbers: Sequence[str],
    shots: ArrayLike,
    *,
    near_m: float = 0.5,
) -> NumberShift | None:
    """The shift by which at least three shots, and half of those off, were misnamed.

    None when numbers and places agree, or disagree in no common way.

    >>> plan = [(0.0, 0.0), (9.0, 0.0), (18.0, 0.0), (27.0, 0.0)]
    >>> found = number_shift(["1", "2", "3", "4"], plan, ["2", "3", "4"], plan[:3])
    >>> found.shift, found.shots
    (1, 3)

    Raises NotFinite, WrongShape or OutOfRange.
    """
    place = nearest_marks(planned, shots, near_m=near_m)
    differences: dict[int, int] = {}
    for i in np.flatnonzero((place.row >= 0) & place.clear):
        mark = _parts(planned_numbers[int(place.row[i])])
        shot = _parts(shot_numbers[int(i)])
        if mark and shot and mark[0] == shot[0]:
            differences[int(i)] = shot[1] - mark[1]
    off = Counter(d for d in differences.values() if d)
    if not off:
        return None
    shift, count = off.most_common(1)[0]
    if count < _FEWEST or 2 * count < off.total():
        return None
    rows = tuple(i for i, d in differences.items() if d == shift)
    return NumberShift(shift, count, len(differences), rows)


def _parts(number: str) -> tuple[str, int] | None:
    """A number's prefix, without case and spaces, and its last whole number."""
    found = _LAST_DIGITS.match(number.strip().upper())
    return (found.group(1), int(found.group(2))) if found else None
