"""From start values to the least-squares estimate, and what to do when it wanders.

Gauss-Newton converges in a few steps from design coordinates. When it does not, the
damped steps of Levenberg and Marquardt start again from the same place, once, and the
result says so. The robust estimate (Huber's weights on residuals divided by their own
standard deviation, because a long lever hides a blunder from its residual) shows
blunders before they have pulled the network.

Levenberg 1944, Marquardt 1963, Huber 1981; from memory.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import scipy.sparse

from geometry.adjust.frontal import Factor, NotDetermined, Plan, factorise, plan
from geometry.adjust.rows import Ints, Model, Rows, normal, squares
from geometry.adjust.selected import inverse_blocks
from geometry.checked import Array
from geometry.errors import GeometryError

STEPS = 25
DAMPED_STEPS = 200
HUBER_LIMIT = 2.0
SMALLEST_REDUNDANCY = 0.01
"""Below this a measurement is uncontrolled: its residual says nothing about it."""


class DoesNotSettle(GeometryError):
    """No least-squares estimate was reached from these start values."""


@dataclass(frozen=True, slots=True, eq=False)
class Estimate:
    """The unknowns where the steps ended, and the rows and factor there."""

    unknowns: Array
    rows: Rows
    factor: Factor
    weights: Array
    squares: float
    steps: int
    method: str


def layout(model: Model, start: Array) -> Plan:
    """The order of elimination; it serves every later step of the same model."""
    rows = model.rows(start)
    matrix, _ = normal(rows, model.count, np.ones(len(rows.misclosure)))
    return plan(matrix, model.nodes)


def estimate(model: Model, start: Array, order: Plan, weights: Array) -> Estimate:
    """The least-squares estimate from `start`, (count,), with `weights` (m,).

    A weight of 0 leaves a measurement out. Raises NotDetermined when the measurements
    do not fix the unknowns, DoesNotSettle when no minimum is found.
    """
    return _gauss_newton(model, start, order, weights) or _damped(
        model, start, order, weights
    )


def _gauss_newton(
    model: Model, start: Array, order: Plan, weights: Array
) -> Estimate | None:
    x, worse = start, 0
    rows = model.rows(x)
    cost = squares(rows, weights)
    for step in range(1, STEPS + 1):
        matrix, right = normal(rows, model.count, weights)
        try:
            factor = factorise(order, matrix)
        except NotDetermined:
            if step == 1:
                raise
            return None
        change = factor.solve(right)
        x = x + change
        rows = model.rows(x)
        last, cost = cost, squares(rows, weights)
        if bool((np.abs(change) <= model.negligible).all()):
            return Estimate(x, rows, factor, weights, cost, step, "Gauss-Newton")
        worse = worse + 1 if cost > last else 0
        if worse > 2 or not np.isfinite(cost):
            return None
    return None


def _damped(model: Model, start: Array, order: Plan, weights: Array) -> Estimate:
    x, damping = start, 1e-3
    rows = model.rows(x)
    cost = squares(rows, weights)
    for step in range(1, DAMPED_STEPS + 1):
        matrix, right = normal(rows, model.count, weights)
        raised = matrix + damping * scipy.sparse.diags(matrix.diagonal())
        change = factorise(order, scipy.sparse.csr_matrix(raised)).solve(right)
        ahead = model.rows(x + change)
        reached = squares(ahead, weights)
        if bool((np.abs(change) <= model.negligible).all()):
            factor = factorise(order, matrix)
            return Estimate(x, rows, factor, weights, cost, step, "Levenberg-Marquardt")
        if reached < cost:
            x, rows, cost, damping = x + change, ahead, reached, damping / 10
        else:
            damping = damping * 10
        if damping > 1e12:
            break
    raise DoesNotSettle(
        "The adjustment does not settle.",
        where="The start coordinates are too far from what the measurements say.",
        do="Look for a wrong point name, a transposed coordinate or a wrong unit.",
    )


def leverages(rows: Rows, factor: Factor) -> Array:
    """a N^-1 a' of each whitened row, (m,): 1 less the redundancy number."""
    (blocks,) = inverse_blocks(factor, [rows.columns])
    c = np.where(rows.columns >= 0, rows.coefficients, 0.0)
    found: Array = np.einsum("ra,rab,rb->r", c, blocks, c)
    return found


def robust_weights(
    model: Model, start: Array, order: Plan, weights: Array, rounds: int = 12
) -> tuple[Array, Array]:
    """Huber weights (m,) and the unknowns they lead to.

    Residuals are divided by their standard deviation, taken once at the start: the
    shape of the network changes little while the weights change.
    """
    huber = weights.copy()
    x = start
    redundancy = np.ones(len(weights))
    for step in range(rounds):
        found = estimate(model, x, order, huber)
        if step == 0:
            redundancy = np.maximum(
                1.0 - leverages(found.rows, found.factor), SMALLEST_REDUNDANCY
            )
        size = np.abs(found.rows.misclosure) / np.sqrt(redundancy)
        fresh = weights * np.minimum(1.0, HUBER_LIMIT / np.maximum(size, 1e-12))
        settled = float(np.abs(fresh - huber).max(initial=0.0)) < 1e-3
        huber, x = fresh, found.unknowns
        if settled:
            break
    return huber, x


def columns_of_inverse(factor: Factor, columns: Ints, count: int) -> Array:
    """Some columns of the inverse, (count, k); zeros where a column is -1."""
    right = np.zeros((count, len(columns)))
    used = np.flatnonzero(columns >= 0)
    right[columns[used], used] = 1.0
    return factor.solve(right)
