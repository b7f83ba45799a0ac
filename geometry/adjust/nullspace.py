"""Which unknowns can move without any measurement noticing."""

from __future__ import annotations

import numpy as np
import scipy.sparse

from geometry.adjust.frontal import NotDetermined, factorise, plan
from geometry.adjust.rows import Ints
from geometry.checked import Array

DENSE_UNKNOWNS = 900
VANISHING = 1e-11
"""Eigenvalue of the scaled normal matrix that counts as none."""


def free_motions(matrix: scipy.sparse.csr_matrix, nodes: Ints) -> Array:
    """A basis (count, d) of what the normal matrix leaves undetermined.

    In large networks at most a dozen motions are found; that is enough to say what
    is missing first.
    """
    diagonal = np.asarray(matrix.diagonal())
    scale = 1.0 / np.sqrt(np.where(diagonal > 0, diagonal, 1.0))
    across = scipy.sparse.diags(scale)
    scaled = scipy.sparse.csr_matrix(across @ matrix @ across)
    if len(diagonal) <= DENSE_UNKNOWNS:
        values, vectors = np.linalg.eigh(scaled.toarray())
    else:
        values, vectors = _smallest(scaled, nodes)
    chosen = values < VANISHING
    if not chosen.any():
        chosen = values <= values.min() * (1 + 1e-9)
    basis: Array = scale[:, None] * vectors[:, chosen]
    return basis


def _smallest(scaled: scipy.sparse.csr_matrix, nodes: Ints) -> tuple[Array, Array]:
    """A dozen smallest eigenvalues by inverse iteration on a slightly raised matrix."""
    count = scaled.shape[0]
    raised = scaled + scipy.sparse.identity(count) * (VANISHING * 10)
    try:
        factor = factorise(plan(raised, nodes), scipy.sparse.csr_matrix(raised))
    except NotDetermined:
        raised = scaled + scipy.sparse.identity(count) * 1e-7
        factor = factorise(plan(raised, nodes), scipy.sparse.csr_matrix(raised))
    place = np.arange(count, dtype=np.float64)
    # Any twelve vectors without pattern do; these need no random numbers.
    vectors = np.stack([np.sin((1.0 + place) * (0.7 + k * 1.3)) for k in range(12)], 1)
    for _ in range(6):
        vectors = np.linalg.qr(factor.solve(vectors))[0]
    inner = vectors.T @ (scaled @ vectors)
    values, turn = np.linalg.eigh(inner)
    return values, vectors @ turn
