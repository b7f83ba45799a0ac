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


Shift = tuple[str, Array]
"""An explanation in words, and what it does to the place of each mark, (k, w)."""


def tell(
    names: Sequence[str],
    places_m: Array,
    joint_m2: Array,
    shifts: Sequence[Shift],
    sigma_m: float,
) -> Tell | None:
    """The distance (or rise) between two marks that tells explanations apart best.

    `places_m` (k, w) are the adjusted marks, `joint_m2` (k w, k w) their covariance.
    None when no pair of marks would.
    """
    width = places_m.shape[1]
    best: Tell | None = None
    for a, b in combinations(range(min(len(names), TRIED_MARKS)), 2):
        value, unit = _between(places_m[a], places_m[b])
        row = np.zeros(joint_m2.shape[0])
        row[width * a : width * (a + 1)] = -unit
        row[width * b : width * (b + 1)] = unit
        spread = math.sqrt(sigma_m**2 + float(row @ joint_m2 @ row))
        values = [(word, value + float(unit @ (s[b] - s[a]))) for word, s in shifts]
        sigmas = _apart([v for _, v in values]) / spread
        if sigmas >= ENOUGH_SIGMAS and (best is None or sigmas > best.sigmas):
            ends = (names[a], names[b])
            kind = "distance" if width == 2 else "levels"
            words = f"{kind} {ends[0]} to {ends[1]}"
            best = Tell(words, ends, tuple(values), sigmas)
    return best


def _between(start: Array, end: Array) -> tuple[float, Array]:
    """Distance and unit vector in the plane, rise and 1 in height."""
    delta = end - start
    if len(delta) == 1:
        return float(delta[0]), np.ones(1)
    length = math.hypot(*delta)
    return length, delta / max(length, 1e-9)


def tell_between_marks(
    net: NetworkAdjustment | LevelAdjustment,
    recorded: Coordinates | Heights,
    evidence: Evidence,
    suspects: Sequence[Suspicion],
    sigma_m: float,
) -> Tell | None:
    """The same for suspects from measurements against a record."""
    names = recorded.names
    at = [net.number(n) for n in names]
    if isinstance(net, NetworkAdjustment):
        places = net.positions_m
    else:
        places = net.heights_m[:, None]
    shifts = _shifts(net, recorded, evidence, suspects)
    own = [(word, shift[at]) for word, shift in shifts]
    return tell(names, places[at], net.joint_covariance(names), own, sigma_m)


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
) -> list[Shift]:
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
