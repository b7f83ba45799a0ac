"""The few entries of an inverse that a network needs, without the inverse.

Redundancy numbers and point covariances use only entries of the inverse where the
normal matrix itself has entries. They follow front by front from the top down, each
front's from its parent's, at about the cost of one more factorisation.

Takahashi, Fagan & Chin 1973; Erisman & Tinney 1975; from memory.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
from scipy.linalg import lapack

from geometry.adjust.frontal import Factor, Front
from geometry.adjust.rows import Ints
from geometry.checked import Array


def inverse_blocks(factor: Factor, cliques: Sequence[Ints]) -> list[Array]:
    """Blocks of the inverse over sets of unknowns that stand together in some row.

    Each of `cliques` is (k, w) unknowns, -1 for unused; the answer for it is
    (k, w, w), with zeros where an unknown is unused.
    """
    wanted = [_Wanted(factor, clique) for clique in cliques]
    for number, front, inverse in _fronts_of_inverse(factor):
        for want in wanted:
            want.take(number, front, inverse)
    return [want.found for want in wanted]


class _Wanted:
    """The blocks asked for one array of cliques, filled in as their fronts come by."""

    def __init__(self, factor: Factor, clique: Ints) -> None:
        layout = factor.plan
        used = clique >= 0
        safe = np.where(used, clique, 0)
        last = len(layout.order)
        self.places = np.where(used, layout.place[safe], last) if last else safe
        self.scale = np.where(used, factor.scale[safe], 0.0) if last else 0.0 * safe
        self.used = used
        self.found = np.zeros((*clique.shape, clique.shape[1]))
        rows = np.flatnonzero(used.any(axis=1))
        fronts = layout.front_of[self.places[rows].min(axis=1)]
        by_front = np.argsort(fronts, kind="stable")
        self.rows = rows[by_front]
        self.begins = np.searchsorted(
            fronts[by_front], np.arange(len(layout.fronts) + 1)
        )

    def take(self, number: int, front: Front, inverse: Array) -> None:
        rows = self.rows[self.begins[number] : self.begins[number + 1]]
        if not len(rows):
            return
        at = np.where(self.used[rows], front.local(self.places[rows]), 0)
        scale = self.scale[rows]
        block = inverse[at[:, :, None], at[:, None, :]]
        self.found[rows] = block * scale[:, :, None] * scale[:, None, :]


def _fronts_of_inverse(factor: Factor) -> Iterator[tuple[int, Front, Array]]:
    """Each front with the inverse of the scaled matrix over its places, top down."""
    fronts = factor.plan.fronts
    children = np.zeros(len(fronts), dtype=np.intp)
    for front in fronts:
        if front.parent >= 0:
            children[front.parent] += 1
    kept: dict[int, Array] = {}
    for i in range(len(fronts) - 1, -1, -1):
        front = fronts[i]
        outside = np.zeros((0, 0))
        if front.parent >= 0:
            at = fronts[front.parent].local(front.border)
            outside = kept[front.parent][np.ix_(at, at)]
            children[front.parent] -= 1
            if not children[front.parent]:
                del kept[front.parent]
        inverse = _inverse(factor.pivots[i], factor.below[i], outside)
        if children[i]:
            kept[i] = inverse
        yield i, front, inverse


def _inverse(pivot: Array, below: Array, outside: Array) -> Array:
    width = len(pivot)
    own, _ = lapack.dpotri(pivot, lower=1)
    own = np.tril(own) + np.tril(own, -1).T
    inverse = np.empty((width + len(outside), width + len(outside)))
    inverse[:width, :width] = own
    if len(outside):
        passed, _ = lapack.dtrtrs(pivot, below.T, lower=1, trans=1)
        across = outside @ passed.T
        inverse[width:, :width] = -across
        inverse[:width, width:] = -across.T
        inverse[:width, :width] += passed @ across
        inverse[width:, width:] = outside
    return inverse
