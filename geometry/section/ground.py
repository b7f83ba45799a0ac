"""The ground across a line as it was shot: elevations at offsets, straight between."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import EmptyInput, OutOfRange, WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class Ground:
    """Offsets (n,) from the line, right positive and rising, with elevations (n,)."""

    offsets_m: Array
    elevations_m: Array

    def outward(self, *, right: bool) -> tuple[Array, Array]:
        """Distances out and elevations on one side, going outward."""
        if right:
            return self.offsets_m, self.elevations_m
        return -self.offsets_m[::-1], self.elevations_m[::-1]


def section_ground(offsets_m: ArrayLike, elevations_m: ArrayLike) -> Ground:
    """The ground from shots in any order.

    >>> section_ground([10.0, -10.0], [5.0, 4.0]).offsets_m.tolist()
    [-10.0, 10.0]

    Raises EmptyInput for fewer than two, WrongShape, NotFinite, or OutOfRange for
    two heights at one offset (a wall: give it two offsets a little apart).
    """
    offsets = checked.numbers("ground offsets", offsets_m)
    elevations = checked.numbers("ground elevations", elevations_m)
    if offsets.shape != elevations.shape:
        raise WrongShape("Every ground shot needs an offset and an elevation.")
    if offsets.size < 2:
        raise EmptyInput("The ground needs at least two shots.")
    order = np.argsort(offsets, kind="stable")
    offsets, elevations = offsets[order], elevations[order]
    if (np.diff(offsets) < 1e-6).any():
        twice = float(offsets[int(np.argmin(np.diff(offsets)))])
        raise OutOfRange(
            "Two ground shots have the same offset.",
            where=f"It is {twice:g} m.",
            do="Keep one of them, or set them a little apart if there is a wall.",
        )
    return Ground(offsets, elevations)


def ground_at(ground: Ground, offset_m: float) -> float:
    """The ground's elevation at an offset between its outermost shots.

    Raises OutOfRange outside them: ground is never guessed.
    """
    at = checked.number("The offset", offset_m)
    first, last = float(ground.offsets_m[0]), float(ground.offsets_m[-1])
    if not first - 1e-9 <= at <= last + 1e-9:
        raise OutOfRange(
            "The ground was not measured there.",
            where=f"Offset {at:g} m, shots from {first:g} to {last:g} m.",
            do="Shoot the ground there.",
        )
    return float(np.interp(at, ground.offsets_m, ground.elevations_m))
