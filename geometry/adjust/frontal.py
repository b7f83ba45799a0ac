"""Sparse Cholesky factor of a normal matrix, block by block (the multifrontal way).

Each piece of the dissection is a dense front: the unknowns eliminated in it and those
later ones they touch. The same fronts give the solution, the pivots that tell an
undetermined network, and the selected inverse.

Duff & Reid 1983 (multifrontal elimination); from memory.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import scipy.linalg
import scipy.sparse
from scipy.linalg import lapack

from geometry.adjust.dissection import dissect
from geometry.adjust.rows import Ints
from geometry.checked import Array

SMALLEST_PIVOT = 1e-12
"""Of a normal matrix scaled to unit diagonal; true singularities leave about 1e-15."""


class NotDetermined(ArithmeticError):
    """The matrix has no Cholesky factor; the caller finds out why."""


@dataclass(frozen=True, slots=True, eq=False)
class Front:
    """Unknowns `first` to `last` of the elimination order and those they touch."""

    first: int
    last: int
    border: Ints
    parent: int

    @property
    def places(self) -> Ints:
        """All places of the front in the elimination order, ascending."""
        return np.concatenate([np.arange(self.first, self.last), self.border])

    def local(self, places: Ints) -> Ints:
        """Where these places stand inside the front."""
        after = np.searchsorted(self.border, places) + self.last - self.first
        return np.where(places < self.last, places - self.first, after)


@dataclass(frozen=True, slots=True, eq=False)
class Plan:
    """The order of elimination and its fronts, children before parents."""

    order: Ints
    place: Ints
    fronts: tuple[Front, ...]
    front_of: Ints


@dataclass(frozen=True, slots=True, eq=False)
class Factor:
    """Cholesky blocks of the scaled, reordered matrix; see `factorise`."""

    plan: Plan
    scale: Array
    pivots: tuple[Array, ...]
    below: tuple[Array, ...]

    def solve(self, right: Array) -> Array:
        """x of N x = right, for a vector (n,) or columns (n, k)."""
        x = _scaled(right, self.scale)[self.plan.order]
        for front, pivot, below in zip(
            self.plan.fronts, self.pivots, self.below, strict=True
        ):
            part = _triangular(pivot, x[front.first : front.last])
            x[front.first : front.last] = part
            x[front.border] -= below @ part
        for i in range(len(self.plan.fronts) - 1, -1, -1):
            front = self.plan.fronts[i]
            part = x[front.first : front.last] - self.below[i].T @ x[front.border]
            x[front.first : front.last] = _triangular(self.pivots[i], part, 1)
        return _scaled(x[self.plan.place], self.scale)


def plan(matrix: scipy.sparse.csr_matrix, nodes: Ints) -> Plan:
    """Order the unknowns of a symmetric matrix; `nodes` (n,) groups them by point."""
    unknowns = len(nodes)
    count = int(nodes.max()) + 1 if unknowns else 0
    member = scipy.sparse.csr_matrix(
        (np.ones(unknowns), (np.arange(unknowns), nodes)), shape=(unknowns, count)
    )
    pattern = abs(matrix)
    graph = scipy.sparse.csr_matrix(member.T @ pattern @ member)
    graph.data[:] = 1.0
    graph.setdiag(0)
    graph.eliminate_zeros()
    sizes = np.bincount(nodes, minlength=count).astype(np.intp)
    pieces = dissect(graph, sizes)[::-1]
    by_node = np.argsort(nodes, kind="stable")
    begins = np.concatenate([[0], np.cumsum(sizes)])
    order = np.concatenate(
        [by_node[begins[n] : begins[n + 1]] for piece in pieces for n in piece.nodes]
        or [np.zeros(0, dtype=np.intp)]
    ).astype(np.intp)
    place = np.empty(unknowns, dtype=np.intp)
    place[order] = np.arange(unknowns)
    lengths = [int(sizes[piece.nodes].sum()) for piece in pieces]
    parents = [len(pieces) - 1 - p.parent if p.parent >= 0 else -1 for p in pieces]
    fronts = _fronts(matrix, order, place, lengths, parents)
    front_of = np.repeat(np.arange(len(lengths)), lengths)
    return Plan(order, place, fronts, front_of)


def _fronts(
    matrix: scipy.sparse.csr_matrix,
    order: Ints,
    place: Ints,
    lengths: list[int],
    parents: list[int],
) -> tuple[Front, ...]:
    handed_up: list[list[Ints]] = [[] for _ in lengths]
    fronts: list[Front] = []
    first = 0
    for i, (length, parent) in enumerate(zip(lengths, parents, strict=True)):
        last = first + length
        touched = place[matrix[order[first:last]].indices]
        seen = np.unique(np.concatenate([touched, *handed_up[i]]))
        border = seen[seen >= last]
        fronts.append(Front(first, last, border, parent))
        if parent >= 0:
            handed_up[parent].append(border)
        first = last
    return tuple(fronts)


def factorise(layout: Plan, matrix: scipy.sparse.csr_matrix) -> Factor:
    """The Cholesky factor of a positive definite matrix.

    Raises NotDetermined when some pivot vanishes against its diagonal.
    """
    diagonal = matrix.diagonal()
    if diagonal.size and float(diagonal.min()) <= 0.0:
        raise NotDetermined
    scale = 1.0 / np.sqrt(diagonal)
    across = scipy.sparse.diags(scale)
    columns = scipy.sparse.csc_matrix(across @ matrix @ across)
    columns = columns[layout.order][:, layout.order]
    columns = scipy.sparse.csc_matrix(scipy.sparse.tril(columns))
    updates: dict[int, list[tuple[Ints, Array]]] = {}
    pivots, belows = [], []
    for i, front in enumerate(layout.fronts):
        block = _assemble(front, columns, updates.pop(i, []))
        width = front.last - front.first
        pivot = _cholesky(block[:width, :width])
        below = _triangular(pivot, block[width:, :width].T).T
        if len(front.border):
            rest = block[width:, width:] - below @ below.T
            updates.setdefault(front.parent, []).append((front.border, rest))
        pivots.append(pivot)
        belows.append(below)
    return Factor(layout, scale, tuple(pivots), tuple(belows))


def _assemble(
    front: Front,
    columns: scipy.sparse.csc_matrix,
    updates: list[tuple[Ints, Array]],
) -> Array:
    size = front.last - front.first + len(front.border)
    block = np.zeros((size, size))
    begin, end = columns.indptr[front.first], columns.indptr[front.last]
    column = np.repeat(
        np.arange(front.last - front.first),
        np.diff(columns.indptr[front.first : front.last + 1]),
    )
    block[front.local(columns.indices[begin:end]), column] = columns.data[begin:end]
    for border, rest in updates:
        at = front.local(border)
        block[np.ix_(at, at)] += rest
    return block


def _cholesky(block: Array) -> Array:
    lower, info = lapack.dpotrf(block, lower=1, clean=1)
    if info != 0 or float(np.diag(lower).min()) ** 2 < SMALLEST_PIVOT:
        raise NotDetermined
    factor: Array = lower
    return factor


def _triangular(lower: Array, right: Array, transposed: int = 0) -> Array:
    if not right.size:
        return right
    solved, _ = lapack.dtrtrs(lower, right, lower=1, trans=transposed)
    result: Array = solved.reshape(right.shape)
    return result


def _scaled(values: Array, scale: Array) -> Array:
    return values * (scale if values.ndim == 1 else scale[:, None])
