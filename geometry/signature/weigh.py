"""How well one cause explains residuals that also hold noise and wild shots.

Residual = fixed part + design x parameters + setup effects + noise. Parameters are
free, setup effects have a prior; shots are weighted by Huber's function and then,
from there, by outright rejection at a Bonferroni bound, so that the loss

    sum of min(m², cut) + effects' prior + parameters x ln(rows)

is what the estimate minimises. The last term is Schwarz's (BIC, 1978), the
likelihood that of a random-effects linear model; from memory.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from geometry.checked import Array

HUBER = 2.5
MISS_PROBABILITY = 0.01
"""Chance that an honest set of shots has even one beyond the rejection bound."""

_ROUNDS = 14
_SOFT_ROUNDS = 8
_SETTLED = 1e-7


@dataclass(frozen=True, slots=True, eq=False)
class Evidence:
    """Residuals whitened: `values` (n, q), `whiten` (n, q, q), effects (n, q, m)."""

    values: Array
    whiten: Array
    effects: Array
    prior: Array

    @property
    def cut(self) -> float:
        """The squared distance beyond which a shot counts as wild."""
        return 2.0 * math.log(max(len(self.values), 1) / MISS_PROBABILITY)


@dataclass(frozen=True, slots=True, eq=False)
class Fit:
    """One cause weighed. `parameters` (k,), `covariance` (k, k), `loss` as above.

    `wild` (n,) marks shots the cause does not explain; `share` is of those it does.
    """

    loss: float
    parameters: Array
    covariance: Array
    wild: NDArray[np.bool_]
    share: float


def evidence(
    residuals: Array, covariance: Array, effects: Array, variances: Array
) -> Evidence:
    """Residuals (n, q) with blocks (n, q, q), effects (n, q, m) of variance (m,)."""
    whiten = np.linalg.inv(np.linalg.cholesky(covariance))
    return Evidence(
        values=np.einsum("nij,nj->ni", whiten, residuals),
        whiten=whiten,
        effects=whiten @ effects,
        prior=1.0 / variances,
    )


def weigh(
    ev: Evidence,
    fixed: Array,
    design: Array,
    *,
    spent: int = 0,
    rarity: float = 0.0,
) -> Fit | None:
    """Weigh a fixed field (n, q) with a free design (n, q, k).

    `spent` counts parameters already used to find the fixed part, `rarity` is added
    to the loss. None when the shots cannot determine the parameters (too few, or all
    at one distance).
    """
    n, q = ev.values.shape
    k = design.shape[2]
    if n * q <= k + spent:
        return None
    target = ev.values - np.einsum("nij,nj->ni", ev.whiten, fixed)
    full = np.concatenate([ev.whiten @ design, ev.effects], axis=2)
    scale = np.sqrt(np.einsum("nij,nij->j", full, full))
    scale[scale == 0] = 1.0
    full = full / scale
    prior = np.concatenate([np.zeros(k), ev.prior]) / scale**2
    if k and not _determined(full[:, :, :k]):
        return None
    x, distance, normal = _fitted(full, target, prior, ev.cut)
    wild = distance**2 > ev.cut
    effects_loss = float((x[k:] ** 2 * prior[k:]).sum())
    loss = float(np.minimum(distance**2, ev.cut).sum()) + effects_loss
    inverse = np.linalg.inv(normal) / np.outer(scale, scale)
    return Fit(
        loss=loss + (k + spent) * math.log(n * q) + rarity,
        parameters=x[:k] / scale[:k],
        covariance=inverse[:k, :k],
        wild=wild,
        share=1.0 - float(wild.mean()),
    )


def _determined(columns: Array) -> bool:
    normal = np.einsum("nij,nik->jk", columns, columns)
    return float(np.linalg.eigvalsh(normal)[0]) > 1e-9


def _fitted(
    full: Array, target: Array, prior: Array, cut: float
) -> tuple[Array, Array, Array]:
    """Parameters, each shot's distance in standard deviations, the normal matrix."""
    rows = full.shape[0]
    weights, x = np.ones(rows), np.zeros(full.shape[2])
    distance = np.sqrt((target**2).sum(axis=1))
    normal = np.eye(full.shape[2])
    hard = False
    for number in range(_ROUNDS):
        fresh, distance, normal = _step(full, target, prior, weights)
        moved = float(np.abs(fresh - x).max(initial=0.0))
        x = fresh
        settled = moved < _SETTLED * (1.0 + float(np.abs(x).max(initial=0.0)))
        if settled and hard:
            break
        hard = hard or settled or number + 1 >= _SOFT_ROUNDS
        weights = _hard(distance, cut) if hard else _soft(distance)
    return x, distance, normal


def _step(
    full: Array, target: Array, prior: Array, weights: Array
) -> tuple[Array, Array, Array]:
    flat = full.reshape(full.shape[0] * full.shape[1], full.shape[2])
    rows = np.repeat(weights, full.shape[1])
    normal = (flat * rows[:, None]).T @ flat + np.diag(prior)
    # a set of shots all rejected leaves nothing to solve: keep the start
    normal = normal + 1e-12 * np.eye(len(normal))
    x = np.linalg.solve(normal, flat.T @ (rows * target.ravel()))
    left: Array = target - full @ x
    return np.asarray(x), np.sqrt((left**2).sum(axis=1)), normal


def _soft(distance: Array) -> Array:
    return np.minimum(1.0, HUBER / np.maximum(distance, 1e-12))


def _hard(distance: Array, cut: float) -> Array:
    return (distance**2 <= cut).astype(np.float64)
