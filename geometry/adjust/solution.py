"""Covariances between any points of an adjusted network, and shifts of all of them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from geometry.adjust.datum import Datum
from geometry.adjust.frontal import Factor
from geometry.adjust.iterate import columns_of_inverse
from geometry.adjust.rows import Ints, picked
from geometry.checked import Array


@dataclass(frozen=True, slots=True, eq=False)
class Solution:
    """Where covariances between any points come from: the factor and the datum.

    `columns` (n, w) are the unknowns of each point, -1 where held.
    """

    factor: Factor
    columns: Ints
    datum: Datum | None

    def columns_of_inverse(self, columns: Ints) -> Array:
        """Some columns of the inverse normal matrix, zeros where a column is -1."""
        return columns_of_inverse(self.factor, columns, len(self.factor.scale))

    def joint(self, at: Sequence[int]) -> Array:
        """Joint covariance (k w, k w) of the points with these numbers, m²."""
        columns = self.columns[list(at)].ravel()
        block = picked(self.columns_of_inverse(columns), columns)
        block = 0.5 * (block + block.T)
        if self.datum is None:
            return block
        width = self.columns.shape[1]
        places = (np.array(at)[:, None] * width + np.arange(width)).ravel()
        spread = self.datum.spread[places]
        carried = picked(self.datum.carried, columns)
        cross = carried @ spread.T
        moved: Array = block - cross - cross.T + spread @ self.datum.inner @ spread.T
        return moved

    def shifts(self, right: Array) -> Array:
        """Shift (n, w) of all points by a right-hand side of the normal equations."""
        change = self.factor.solve(right)
        moved = picked(change, self.columns)
        if self.datum is not None:
            flat = moved.ravel()
            flat = flat - self.datum.spread @ (self.datum.gathered.T @ flat)
            moved = flat.reshape(moved.shape)
        return moved
