"""The next measurement: the one whose outcome the explanations disagree on most."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import combinations, pairwise

import numpy as np

from geometry.adjust.observations import Coordinates, Heights
from geometry.adjust.report import LevelAdjustment, NetworkAdjustment
from geometry.adjust.rows import weight_of
from geometry.checked import Array
from geometry.moved.answer import Tell
from geometry.moved.evidence import Evidence, inverse_of
from geometry.moved.suspicion import Suspicion

ENOUGH_SIGMAS = 3.0
"""Explanations closer than this would not be told apart by the measurement."""

TRIED_MARKS = 40


def tell_plane(
    net: NetworkAdjustment,
    recorded: Coordinates,
    evidence: Evidence,
    suspects: Sequence[Suspicion],
    sigma_m: float,
) -> Tell | None:
    """The distance between two marks that tells these suspects apart best."""
    names = recorded.names[:TRIED_MARKS]
    at = [net.number(n) for n in names]
    joint = net.joint_covariance(names)
    shifts = _shifts(net, recorded, evidence, suspects)
    best: Tell | None = None
    for a, b in combinations(range(len(names)), 2):
        delta = net.positions_m[at[b]] - net.positions_m[at[a]]
        length = math.hypot(*delta)
        if length < 1e-3:
            continue
        unit = delta / length
        row = np.zeros(2 * len(names))
        row[2 * a : 2 * a + 2], row[2 * b : 2 * b + 2] = -unit, unit
        variance = sigma_m**2 + float(row @ joint @ row)
        values = [
            (word, length + float(unit @ (s[at[b]] - s[at[a]]))) for word, s in shifts
        ]
        sigmas = _apart([v for _, v in values]) / math.sqrt(variance)
        if sigmas >= ENOUGH_SIGMAS and (best is None or sigmas > best.sigmas):
            ends = (names[a], names[b])
            words = f"distance {ends[0]} to {ends[1]}"
            best = Tell(words, ends, tuple(values), sigmas)
    return best


def tell_heights(
    net: LevelAdjustment,
    recorded: Heights,
    evidence: Evidence,
    suspects: Sequence[Suspicion],
    sigma_m: float,
) -> Tell | None:
    """The rise between two benchmarks that tells these suspects apart best."""
    names = recorded.names[:TRIED_MARKS]
    at = [net.number(n) for n in names]
    joint = net.joint_covariance(names)
    shifts = _shifts(net, recorded, evidence, suspects)
    best: Tell | None = None
    for a, b in combinations(range(len(names)), 2):
        rise = float(net.heights_m[at[b]] - net.heights_m[at[a]])
        spread = float(joint[a, a] + joint[b, b] - 2 * joint[a, b])
        values = [(word, rise + float(s[at[b], 0] - s[at[a], 0])) for word, s in shifts]
        variance = sigma_m**2 + spread
        sigmas = _apart([v for _, v in values]) / math.sqrt(variance)
        if sigmas >= ENOUGH_SIGMAS and (best is None or sigmas > best.sigmas):
            ends = (names[a], names[b])
            best = Tell(f"levels {ends[0]} to {ends[1]}", ends, tuple(values), sigmas)
    return best


def _apart(values: list[float]) -> float:
    """How far the two nearest of the explanations lie apart."""
    ordered = sorted(values)
    gaps = [b - a for a, b in pairwise(ordered)]
    return min(gaps, default=0.0)


def _shifts(
    net: NetworkAdjustment | LevelAdjustment,
    recorded: Coordinates | Heights,
    evidence: Evidence,
    suspects: Sequence[Suspicion],
) -> list[tuple[str, Array]]:
    """What each explanation does to the adjusted points, (n, w) each."""
    weight = weight_of(recorded.covariance_m2, "the recorded marks")
    columns = net.solution.columns[[net.number(n) for n in recorded.names]].ravel()
    found = []
    for one in suspects:
        right = np.zeros(len(net.solution.factor.scale))
        if one.is_mark:
            own = evidence.own(one.index)
            prior = float(evidence.prior[one.index])
            inverse, _ = inverse_of(evidence.strength[own, own], prior)
            push = weight[:, own] @ (inverse @ evidence.pull[own])
            used = columns >= 0
            np.add.at(right, columns[used], push[used])
            word = recorded.names[one.index]
        else:
            share = max(float(evidence.redundancy[one.index]), 1e-9)
            size = float(evidence.residual[one.index]) / share
            right = size * net.rows[one.index].toarray()[0]
            word = str(net.measurements.observations[one.index])
        found.append((word, net.solution.shifts(right)))
    return found
