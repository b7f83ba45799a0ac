"""Who moved: detect, name the best, take it out, test again; name none where two fit.

A suspicion that would excuse the strongest one, and is nearly as likely, stands beside
it in a set of suspects. Two that the geometry hardly tells apart need far stronger
evidence before one of them is named alone.

Teunissen 2006, 2018 (detection, identification, adaptation); from memory.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from geometry.moved.evidence import Evidence
from geometry.moved.suspicion import (
    Suspicion,
    again,
    likeness,
    likeness_to_measurement,
    suspect_marks,
    suspect_measurements,
    without,
)

SURE = 0.95
"""Probability, among explanations equally likely before, to name one alone."""

ALIKE = 0.9
"""Canonical correlation from which two suspicions count as hardly separable."""

FEWEST_LEFT = 2
"""Degrees of freedom that must remain for a further test to mean anything."""


@dataclass(slots=True)
class Found:
    """Where the search ended: suspicions named, sets of suspects, what is left."""

    left: Evidence
    named: list[Suspicion] = field(default_factory=list)
    sets: list[tuple[Suspicion, ...]] = field(default_factory=list)


def search(evidence: Evidence, alpha: float) -> Found:
    """Name what is significant at `alpha` for each family, strongest first."""
    found = Found(evidence)
    limit = math.log(alpha)
    for _ in range(len(evidence.prior) + len(evidence.residual)):
        suspicions = suspect_marks(found.left) + suspect_measurements(found.left)
        best = min(suspicions, key=lambda s: s.score, default=None)
        if best is None or best.score >= limit:
            break
        suspects = (best, *_rivals(found.left, best, suspicions, limit))
        if len(suspects) > 1:
            found.sets.append(suspects)
        else:
            found.named.append(best)
        found.left = _without_all(found.left, suspects)
        if found.left.dof <= FEWEST_LEFT:
            break
    _forgive(evidence, found, limit)
    return found


def _rivals(
    left: Evidence, best: Suspicion, suspicions: list[Suspicion], limit: float
) -> list[Suspicion]:
    """What would excuse the best and cannot be told from it with confidence."""
    near = math.log(SURE / (1 - SURE))
    rivals = []
    for other in suspicions:
        if other == best:
            continue
        close = other.score - best.score <= near
        alike = other.score < limit and _likeness(left, best, other) >= ALIKE
        if (close or alike) and again(without(left, other), best).score >= limit:
            rivals.append(other)
    return sorted(rivals, key=lambda s: s.score)


def _likeness(left: Evidence, one: Suspicion, other: Suspicion) -> float:
    if one.is_mark and other.is_mark:
        return likeness(left, one.index, other.index)
    if one.is_mark:
        return likeness_to_measurement(left, one.index, other.index)
    if other.is_mark:
        return likeness_to_measurement(left, other.index, one.index)
    return 1.0


def _forgive(evidence: Evidence, found: Found, limit: float) -> None:
    """Test whatever was named once more, given all the others."""
    for one in list(found.named):
        if len(found.named) + len(found.sets) < 2:
            return
        others = [s for s in found.named if s is not one]
        others.extend(s for group in found.sets for s in group)
        left = _without_all(evidence, others)
        if again(left, one).score >= limit:
            found.named.remove(one)
            found.left = left


def _without_all(
    evidence: Evidence, suspicions: tuple[Suspicion, ...] | list[Suspicion]
) -> Evidence:
    for one in suspicions:
        evidence = without(evidence, one)
    return evidence
