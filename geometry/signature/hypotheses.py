"""A cause as something that predicts how far each point lies off its design."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from geometry.checked import Array
from geometry.signature.kinds import Kind
from geometry.signature.setups import Setup, rays

Field = Callable[[Array], Array]
"""Points (n, 2) to displacements: (n, rows) when fixed, (n, rows, k) per parameter."""


@dataclass(frozen=True, slots=True, eq=False)
class Hypothesis:
    """A cause: a fixed field, a field per free parameter, and what it concerns.

    `spent` parameters were already used to find the fixed field. `rarity` is added to
    the loss: minus twice the logarithm of how likely the cause is beforehand.
    A parameter beyond its limit (1 per parameter, none: no limit) makes the cause
    another one. `base` is what the fixed field already holds of each parameter.
    `setup` and `mark` are places in the lists the caller gave. `about` says which
    known field. `rows` is 2 for displacements, 1 for heights.
    """

    kind: Kind
    fixed: Field | None = None
    free: Field | None = None
    spent: int = 0
    rarity: float = 0.0
    limits: tuple[float, ...] = ()
    base: tuple[float, ...] = ()
    setup: int | None = None
    mark: int | None = None
    about: str = ""
    rows: int = 2

    def fixed_at(self, points: Array) -> Array:
        """Displacements (n, rows) at points (n, 2), metres."""
        if self.fixed is None:
            return np.zeros((len(points), self.rows))
        return self.fixed(points)

    def free_at(self, points: Array) -> Array:
        """Displacement per unit of each parameter, (n, rows, k)."""
        if self.free is None:
            return np.zeros((len(points), self.rows, 0))
        return self.free(points)


def shift_field(points: Array) -> Array:
    """East and north, the same everywhere."""
    return np.broadcast_to(np.eye(2), (len(points), 2, 2))


def rotation_field(one: Setup) -> Field:
    """Per radian clockwise about the setup."""
    return lambda points: _column(
        rays(one.at, points).across, rays(one.at, points).length_m
    )


def radial_field(one: Setup) -> Field:
    """Per metre outward, whatever the distance: the prism constant's mark."""
    return lambda points: rays(one.at, points).along[:, :, None]


def scale_field(one: Setup) -> Field:
    """Per unit of scale, growing with the distance from the setup."""
    return lambda points: (points - one.at)[:, :, None]


def joined(*fields: Field) -> Field:
    """Several fields side by side."""
    return lambda points: np.concatenate([f(points) for f in fields], axis=2)


def similarity_field(centre: Array) -> Field:
    """Shift, rotation and scale about a centre: four parameters."""

    def field(points: Array) -> Array:
        d = points - centre
        right = np.column_stack([d[:, 1], -d[:, 0]])
        return np.concatenate(
            [shift_field(points), right[:, :, None], d[:, :, None]], axis=2
        )

    return field


def _column(direction: Array, size: Array) -> Array:
    return (direction * size[:, None])[:, :, None]
