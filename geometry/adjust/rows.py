"""Whitened, linearised measurements: the only thing the solver ever sees.

Each single measurement is one row, already divided by its standard deviation: up to
six columns with their coefficients, and its misclosure. A group of correlated known
values is a dense block, multiplied by the inverse Cholesky factor of its covariance.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
import scipy.linalg
import scipy.sparse
from numpy.typing import NDArray

from geometry.checked import Array
from geometry.errors import OutOfRange

Ints = NDArray[np.intp]
Flags = NDArray[np.bool_]

SMALLEST_VARIANCE = 1e-24
"""Of a known value, m²: less is no uncertainty at all."""


@dataclass(frozen=True, slots=True, eq=False)
class Group:
    """Correlated known values: columns (k,), weight matrix (k, k), misclosure (k,).

    The misclosure is known minus computed, in metres, not whitened; a column of -1
    is a point held fixed.
    """

    columns: Ints
    weight: Array
    misclosure: Array


@dataclass(frozen=True, slots=True, eq=False)
class Rows:
    """All rows at one state of the unknowns.

    `columns` (m, w) with -1 where a coefficient is unused, `coefficients` (m, w),
    `misclosure` (m,): measured minus computed over sigma.
    """

    columns: Ints
    coefficients: Array
    misclosure: Array
    groups: tuple[Group, ...]


class Model(Protocol):
    """A set of unknowns that can be linearised anywhere."""

    @property
    def count(self) -> int:
        """How many unknowns there are."""

    @property
    def nodes(self) -> Ints:
        """Which unknowns belong to one point: a node number for each, (count,)."""

    @property
    def negligible(self) -> Array:
        """A change of each unknown that no screen could show, (count,)."""

    def rows(self, unknowns: Array) -> Rows:
        """The measurements linearised at these unknowns."""


def picked(values: Array, columns: Ints) -> Array:
    """Rows of `values` (n, ...) by column number, zeros where it is -1."""
    found = np.zeros((*columns.shape, *values.shape[1:]))
    used = columns >= 0
    found[used] = values[columns[used]]
    return found


def weight_of(covariance: Array, words: str) -> Array:
    """The inverse of a joint covariance, refusing one without full rank."""
    least = float(np.diag(covariance).min(initial=np.inf))
    scale = 1.0 / np.sqrt(np.maximum(np.diag(covariance), SMALLEST_VARIANCE))
    correlation = covariance * np.outer(scale, scale)
    lowest = float(np.linalg.eigvalsh(correlation)[0])
    if lowest < 1e-12 or least < SMALLEST_VARIANCE:
        raise OutOfRange(
            "A joint covariance leaves some direction without any uncertainty.",
            where=f"It is the covariance of {words}.",
            do="Hold the points fixed that are without doubt, or add the missing part.",
        )
    weight: Array = scipy.linalg.inv(correlation) * np.outer(scale, scale)
    return 0.5 * (weight + weight.T)


def design(rows: Rows, count: int, weights: Array) -> scipy.sparse.csr_matrix:
    """The whitened design matrix of the single measurements, (m, count)."""
    used = rows.columns >= 0
    data = (rows.coefficients * np.sqrt(weights)[:, None])[used]
    row = np.broadcast_to(np.arange(len(weights))[:, None], used.shape)[used]
    return scipy.sparse.csr_matrix(
        (data, (row, rows.columns[used])), shape=(len(weights), count)
    )


def normal(
    rows: Rows, count: int, weights: Array
) -> tuple[scipy.sparse.csr_matrix, Array]:
    """Normal matrix (count, count) and right-hand side (count,)."""
    a = design(rows, count, weights)
    matrix = a.T @ a
    right: Array = a.T @ (np.sqrt(weights) * rows.misclosure)
    for group in rows.groups:
        matrix = matrix + _block(group, count)
        used = group.columns >= 0
        np.add.at(right, group.columns[used], (group.weight @ group.misclosure)[used])
    return scipy.sparse.csr_matrix(matrix), right


def _block(group: Group, count: int) -> scipy.sparse.csr_matrix:
    used = group.columns >= 0
    columns = group.columns[used]
    row, column = np.meshgrid(columns, columns, indexing="ij")
    data = group.weight[np.ix_(used, used)]
    return scipy.sparse.csr_matrix(
        (data.ravel(), (row.ravel(), column.ravel())), shape=(count, count)
    )


def squares(rows: Rows, weights: Array) -> float:
    """The weighted sum of squared misclosures."""
    single = float(np.sum(weights * rows.misclosure**2))
    return single + sum(
        float(g.misclosure @ g.weight @ g.misclosure) for g in rows.groups
    )
