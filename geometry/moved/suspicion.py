"""Testing one suspicion at a time, and comparing them fairly.

Suspicions of different rank are compared by the chance of so large a value when
nothing is wrong, not by the value itself; and each family, marks or measurements, is
charged for how many of it were tried (Bonferroni).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from scipy import special

from geometry.adjust.reliability import noncentrality
from geometry.checked import Array
from geometry.moved.evidence import (
    Evidence,
    inverse_of,
    without_marks,
    without_measurement,
)

CONTROLLED = 0.01
"""Redundancy below which the residual of a measurement says nothing about it."""


@dataclass(frozen=True, slots=True)
class Suspicion:
    """One mark (or measurement) suspected, and how strongly.

    `log_p` is the logarithm of the chance of such a value when nothing is wrong;
    `score` adds that of the number tried, so that below log(alpha) it is significant.
    """

    is_mark: bool
    index: int
    rank: int
    statistic: float
    log_p: float
    score: float


def log_chance(statistic: float, rank: int) -> float:
    """log P(chi-square(rank) > statistic), without underflow for rank 1 and 2.

    >>> round(log_chance(13.8155, 2), 4) == round(math.log(0.001), 4)
    True
    """
    if rank <= 0:
        return 0.0
    if rank == 1:
        return float(special.log_ndtr(-math.sqrt(max(statistic, 0.0)))) + math.log(2)
    if rank == 2:
        return -0.5 * statistic
    return math.log(max(float(special.chdtrc(rank, statistic)), 1e-300))


def suspect_marks(evidence: Evidence) -> list[Suspicion]:
    """Every mark that was seen, tested; unseen ones are left out."""
    found = []
    for mark in range(len(evidence.prior)):
        rank, statistic = mark_statistic(evidence, mark)
        if rank:
            found.append((mark, rank, statistic))
    charge = math.log(max(len(found), 1))
    return [_suspicion(True, i, rank, t, charge) for i, rank, t in found]


def suspect_measurements(evidence: Evidence) -> list[Suspicion]:
    """Every measurement that others control, tested."""
    seen = np.flatnonzero(evidence.redundancy >= CONTROLLED)
    charge = math.log(max(len(seen), 1))
    w2 = evidence.residual[seen] ** 2 / evidence.redundancy[seen]
    return [
        _suspicion(False, int(i), 1, float(t), charge)
        for i, t in zip(seen, w2, strict=True)
    ]


def mark_statistic(evidence: Evidence, mark: int) -> tuple[int, float]:
    """Rank and test value of one mark; rank 0 when it was not seen."""
    own = evidence.own(mark)
    inverse, rank = inverse_of(evidence.strength[own, own], float(evidence.prior[mark]))
    pull = evidence.pull[own]
    return rank, float(pull @ inverse @ pull)


def again(evidence: Evidence, one: Suspicion) -> Suspicion:
    """The same suspicion tested in other evidence, charged as it was."""
    if one.is_mark:
        rank, statistic = mark_statistic(evidence, one.index)
    else:
        share = float(evidence.redundancy[one.index])
        rank = int(share >= CONTROLLED)
        residual = float(evidence.residual[one.index])
        statistic = residual**2 / share if rank else 0.0
    return _suspicion(one.is_mark, one.index, rank, statistic, one.score - one.log_p)


def without(evidence: Evidence, one: Suspicion) -> Evidence:
    """The evidence left once this suspicion is taken as true."""
    if one.is_mark:
        return without_marks(evidence, (one.index,))
    return without_measurement(evidence, one.index)


def _suspicion(
    is_mark: bool, index: int, rank: int, statistic: float, charge: float
) -> Suspicion:
    log_p = log_chance(statistic, rank)
    return Suspicion(is_mark, index, rank, statistic, log_p, log_p + charge)


def smallest_moves(
    evidence: Evidence, mark: int, alpha: float, power: float
) -> tuple[float | None, float | None, Array | None]:
    """Smallest move of a mark that would be seen: best way, worst way, best direction.

    Metres; None for the worst way when some direction was not seen, all None for a
    mark that was not seen at all. `alpha` is that of one test.
    """
    own = evidence.own(mark)
    values, vectors = np.linalg.eigh(evidence.strength[own, own])
    seen = values > 1e-6 * float(evidence.prior[mark])
    rank = int(seen.sum())
    if not rank:
        return None, None, None
    need = noncentrality(alpha, power, rank)
    best = math.sqrt(need / float(values[-1]))
    worst = math.sqrt(need / float(values[0])) if seen.all() else None
    return best, worst, vectors[:, -1]


def likeness(evidence: Evidence, one: int, other: int) -> float:
    """Largest canonical correlation of two marks' suspicions, 1 when inseparable.

    Foerstner 1983 (separability), from memory.
    """
    a, b = evidence.own(one), evidence.own(other)
    left = _root(evidence.strength[a, a], float(evidence.prior[one]))
    right = _root(evidence.strength[b, b], float(evidence.prior[other]))
    across = left @ evidence.strength[a, b] @ right.T
    if not across.size:
        return 0.0
    return min(1.0, float(np.linalg.svd(across, compute_uv=False)[0]))


def likeness_to_measurement(evidence: Evidence, mark: int, number: int) -> float:
    """The same between a mark and one measurement."""
    own = evidence.own(mark)
    inverse, rank = inverse_of(evidence.strength[own, own], float(evidence.prior[mark]))
    if not rank or evidence.redundancy[number] < CONTROLLED:
        return 0.0
    shared = evidence.shared[number, own]
    size = float(shared @ inverse @ shared) / float(evidence.redundancy[number])
    return min(1.0, math.sqrt(max(size, 0.0)))


def _root(block: Array, prior: float) -> Array:
    """Rows that whiten a block over the directions with evidence."""
    values, vectors = np.linalg.eigh(0.5 * (block + block.T))
    seen = values > 1e-6 * prior
    root: Array = (vectors[:, seen] / np.sqrt(values[seen])).T
    return root
