"""In which order to eliminate: nested dissection of the graph of points.

Take out the thinnest layer of points that parts the network in two, do the same with
each half, and eliminate the layers last. The work for a network spread over a plane
then grows with the power 1.5 of its size, where eliminating along the sweep of one
breadth-first search grows with the square. A setup that sees hundreds of points is
one node of a layer here and does no harm.

George 1973 (nested dissection), George & Liu 1978 (layers from a breadth-first
search); from memory.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import scipy.sparse
from scipy.sparse import csgraph

from geometry.adjust.rows import Flags, Ints

LEAF_UNKNOWNS = 120
"""Pieces up to this size are eliminated as one dense block: BLAS outruns splitting."""


@dataclass(frozen=True, slots=True, eq=False)
class Piece:
    """Nodes eliminated together, and the place in the list of the piece above."""

    nodes: Ints
    parent: int


def dissect(
    graph: scipy.sparse.csr_matrix, sizes: Ints, leaf: int = LEAF_UNKNOWNS
) -> list[Piece]:
    """Pieces of a symmetric graph, each parent before its children.

    `sizes` is the number of unknowns of each node. Eliminate in reverse order.

    >>> step = np.roll(np.eye(6), 1, axis=0)
    >>> ring, sizes = scipy.sparse.csr_matrix(step + step.T), np.ones(6, dtype=np.intp)
    >>> sorted(len(piece.nodes) for piece in dissect(ring, sizes, leaf=2))
    [1, 1, 2, 2]
    """
    pieces: list[Piece] = []
    waiting = [(np.arange(len(sizes)), -1)] if len(sizes) else []
    while waiting:
        nodes, parent = waiting.pop()
        inside = graph[nodes][:, nodes]
        parts = _parts(inside, sizes[nodes], leaf)
        if len(parts) > 1:
            waiting.extend((nodes[part], parent) for part in parts)
            continue
        layer = _layer(inside, sizes[nodes], leaf)
        pieces.append(Piece(nodes[layer], parent))
        rest = nodes[~layer]
        if len(rest):
            waiting.append((rest, len(pieces) - 1))
    return pieces


def _parts(inside: scipy.sparse.csr_matrix, sizes: Ints, leaf: int) -> list[Ints]:
    """Unconnected parts, the small ones bundled so that no piece is tiny."""
    if int(sizes.sum()) <= leaf:
        return [np.arange(len(sizes))]
    count, label = csgraph.connected_components(inside, directed=False)
    if count == 1:
        return [np.arange(len(sizes))]
    weight = np.bincount(label, weights=sizes, minlength=count)
    bundle = np.zeros(count, dtype=np.intp)
    number, filled = 0, 0.0
    for part in np.argsort(-weight, kind="stable"):
        if filled and filled + weight[part] > leaf:
            number, filled = number + 1, 0.0
        bundle[part] = number
        filled += weight[part]
    by_bundle = bundle[label]
    return [np.flatnonzero(by_bundle == k) for k in range(number + 1)]


def _layer(inside: scipy.sparse.csr_matrix, sizes: Ints, leaf: int) -> Flags:
    """The nodes to take out: a layer that parts the rest, or all of them."""
    everything = np.ones(len(sizes), dtype=np.bool_)
    if int(sizes.sum()) <= leaf:
        return everything
    level = _levels(inside)
    width = np.bincount(level, weights=sizes)
    before = np.cumsum(width) - width
    after = width.sum() - before - width
    inner = (before > 0) & (after > 0)
    if not inner.any():
        return everything
    # Thin layers near the middle: the ratio cut.
    cost = np.where(inner, width / np.maximum(before * after, 1.0), np.inf)
    best = int(np.argmin(cost))
    # A node without a neighbour beyond the layer need not be in it.
    beyond = inside @ (level == best + 1).astype(np.float64)
    layer: Flags = (level == best) & (beyond > 0)
    return layer


def _levels(inside: scipy.sparse.csr_matrix) -> Ints:
    """Steps from a node at the rim, reached by running to the far side twice."""
    start = 0
    steps = _steps(inside, start)
    for _ in range(2):
        start = int(np.argmax(steps))
        steps = _steps(inside, start)
    return steps


def _steps(inside: scipy.sparse.csr_matrix, start: int) -> Ints:
    far = csgraph.dijkstra(inside, directed=False, unweighted=True, indices=start)
    steps: Ints = far.astype(np.intp)
    return steps
