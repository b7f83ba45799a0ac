"""Finding the measurements that are wrong, one after another, and forgiving the rest.

The measurement with the largest standardised residual is set aside and the rest
adjusted again, until none stands out. At the end each one set aside is compared with
what the others predict: one blunder can make a good neighbour look bad, so those that
agree come back. Where setting aside another measurement would do as well, neither is
blamed: both are named.

Baarda 1968 (data snooping), Pope 1976; from memory.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from geometry.adjust.assess import assess_known
from geometry.adjust.frontal import NotDetermined, Plan
from geometry.adjust.iterate import (
    SMALLEST_REDUNDANCY,
    Estimate,
    estimate,
    leverages,
    robust_weights,
)
from geometry.adjust.reliability import critical_w
from geometry.adjust.rows import Flags, Ints, Model, design
from geometry.checked import Array

FAMILY_ALPHA = 0.02
"""Chance that a clean network loses any measurement at all."""


@dataclass(slots=True)
class Snooped:
    """Where the search ended.

    `ambiguous` holds sets of measurement numbers of which one is wrong; `control` is
    true when known values fit worse than any measurement, and the search stopped.
    """

    found: Estimate
    weights: Array
    readmitted: set[int] = field(default_factory=set)
    ambiguous: list[tuple[int, ...]] = field(default_factory=list)
    control: bool = False


def removal_limit(count: int, alpha: float) -> float:
    """Largest |w| a good measurement among `count` is allowed.

    The limit of one test, or wider so that all together raise a false alarm in at
    most one network of fifty.

    >>> round(removal_limit(10, 0.001), 2), round(removal_limit(500, 0.001), 2)
    (3.29, 4.11)
    """
    return critical_w(removal_alpha(count, alpha))


def removal_alpha(count: int, alpha: float) -> float:
    """The level of one test that goes with `removal_limit`."""
    return min(alpha, FAMILY_ALPHA / max(count, 1))


def snoop(
    model: Model, start: Array, order: Plan, alpha: float, *, robust: bool
) -> Snooped:
    """Adjust, set aside what does not fit, bring back what does."""
    weights = np.ones(len(model.rows(start).misclosure))
    limit = removal_limit(len(weights), alpha)
    if robust:
        weights, start = _without_outliers(model, start, order, weights, limit)
    state = Snooped(estimate(model, start, order, weights), weights)
    for _ in range(4):
        _set_aside(model, order, state, limit, critical_w(alpha))
        if not _bring_back(model, order, state, limit, critical_w(alpha)):
            break
    return state


def _without_outliers(
    model: Model, start: Array, order: Plan, weights: Array, limit: float
) -> tuple[Array, Array]:
    """Weights without what a robust estimate rejects, unless the rest is too little."""
    huber, x = robust_weights(model, start, order, weights)
    kept = np.where(huber * limit < 2.0, 0.0, weights)
    try:
        return kept, estimate(model, x, order, kept).unknowns
    except NotDetermined:
        return weights, x


def _set_aside(
    model: Model, order: Plan, state: Snooped, limit: float, single: float
) -> None:
    named = np.zeros(len(state.weights), dtype=np.bool_)
    for group in state.ambiguous:
        named[list(group)] = True
    for _ in range(len(state.weights)):
        redundancy, w = standardised(state.found)
        size = np.where(named | (redundancy < SMALLEST_REDUNDANCY), 0.0, np.abs(w))
        worst = int(np.argmax(size)) if len(size) else 0
        if not len(size) or size[worst] <= limit:
            return
        if _control_is_worse(model, state.found, float(size[worst])):
            state.control = True
            return
        others = rivals(state.found, worst, redundancy, w, single)
        if len(others):
            together = tuple(sorted({worst, *(int(i) for i in others)}))
            state.ambiguous.append(together)
            named[list(together)] = True
            continue
        if _spare(state) <= 1:
            return
        for i in _worst_apart(state.found, size, limit):
            state.weights[i] = 0.0
        state.found = estimate(model, state.found.unknowns, order, state.weights)


def _spare(state: Snooped) -> int:
    """Degrees of freedom; the last one is never spent, or nothing would confirm it."""
    known = sum(len(group.columns) for group in state.found.rows.groups)
    return int((state.weights > 0).sum()) + known - len(state.found.unknowns)


def standardised(found: Estimate) -> tuple[Array, Array]:
    """Redundancy numbers and w of the measurements in use, (m,) each; 0 for others."""
    leverage = leverages(found.rows, found.factor)
    active = found.weights > 0
    redundancy = np.where(active, np.maximum(1.0 - leverage, 0.0), 0.0)
    spread = np.sqrt(np.maximum(redundancy, SMALLEST_REDUNDANCY))
    return redundancy, np.where(active, -found.rows.misclosure / spread, 0.0)


def _worst_apart(found: Estimate, size: Array, limit: float) -> list[int]:
    """The worst measurement of all, and in large networks the worst far from it too.

    Two that share an unknown are never taken together: one may be the other's echo.
    """
    by_size = np.argsort(-size, kind="stable")
    taken: list[int] = []
    touched: set[int] = set()
    for i in by_size[: int((size > limit).sum())]:
        own = {int(c) for c in found.rows.columns[i] if c >= 0}
        if len(size) < 5000 or len(taken) == 50:
            return taken or [int(by_size[0])]
        if not own & touched:
            taken.append(int(i))
        touched |= own
    return taken


def _control_is_worse(model: Model, found: Estimate, size: float) -> bool:
    for group in found.rows.groups:
        judged = assess_known(group, found.factor, model.count, 0.001, 0.8)
        if float(np.abs(judged.w).max(initial=0.0)) >= size * (1 - 1e-9):
            return True
    return False


def rivals(
    found: Estimate, suspect: int, redundancy: Array, w: Array, single: float
) -> Ints:
    """Measurements whose removal would excuse the suspect as well.

    With rho the correlation of two standardised residuals, removing j leaves
    (w_i - rho w_j) / sqrt(1 - rho^2) of w_i.
    """
    count = len(found.factor.scale)
    a = design(found.rows, count, np.ones(len(w)))
    pulled = found.factor.solve(a[suspect].toarray()[0])
    usable = (redundancy >= SMALLEST_REDUNDANCY) & (np.abs(w) > single)
    usable[suspect] = False
    if not usable.any():
        return np.flatnonzero(usable)
    safe = np.sqrt(np.maximum(redundancy * redundancy[suspect], 1e-12))
    rho = -(a @ pulled) / safe
    left = np.maximum(1.0 - rho**2, 1e-9)
    excused = np.abs(w[suspect] - rho * w) / np.sqrt(left) < single
    same: Flags = 1.0 - rho**2 < 1e-6
    return np.flatnonzero(usable & (excused | same))


def _bring_back(
    model: Model, order: Plan, state: Snooped, limit: float, single: float
) -> bool:
    """Readmit what agrees with the others; true when something came back."""
    came_back = False
    for _ in range(len(state.weights)):
        out = np.flatnonzero(state.weights == 0)
        out = np.array([i for i in out if i not in state.readmitted], dtype=np.intp)
        if not len(out):
            return came_back
        leverage = leverages(state.found.rows, state.found.factor)[out]
        size = np.abs(state.found.rows.misclosure[out]) / np.sqrt(1.0 + leverage)
        best = int(np.argmin(size))
        if size[best] > single:
            return came_back
        # Far within the limit they come together; near it, one at a time.
        back = out[size < 0.6 * single]
        back = back if len(back) else out[best : best + 1]
        state.weights[back] = 1.0
        state.readmitted.update(int(i) for i in back)
        state.found = estimate(model, state.found.unknowns, order, state.weights)
        came_back = True
    return came_back
