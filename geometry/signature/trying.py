"""Weighing many causes on the same shots: small ones all, gross ones if promising."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from geometry.checked import Array
from geometry.signature.hypotheses import Hypothesis
from geometry.signature.weigh import Evidence, Fit, weigh

_PROMISING = 0.35
_MOST_GROSS = 12


@dataclass(frozen=True, slots=True, eq=False)
class Weighed:
    """A hypothesis with its fit."""

    hypothesis: Hypothesis
    fit: Fit


def weigh_each(
    ev: Evidence, points: Array, hypotheses: Iterable[Hypothesis]
) -> list[Weighed]:
    """Every hypothesis that the shots can determine and that stays in its limits."""
    found = []
    for one in hypotheses:
        fixed, free = one.fixed_at(points), one.free_at(points)
        fit = weigh(ev, fixed, free, spent=one.spent, rarity=one.rarity)
        if fit is not None and _within(fit.parameters, one.limits):
            found.append(Weighed(one, fit))
    return found


def _within(parameters: Array, limits: tuple[float, ...]) -> bool:
    return not limits or bool((np.abs(parameters) <= limits).all())


def promising(
    gross: Iterable[Hypothesis], plan: Array, residuals: Array, reach: Array
) -> list[Hypothesis]:
    """Blunders under which enough shots come near, the best dozen."""
    ranked = []
    for one in gross:
        left = residuals - one.fixed_at(plan)
        share = float((np.hypot(left[:, 0], left[:, 1]) < reach).mean())
        if share >= _PROMISING:
            ranked.append((share, one))
    ranked.sort(key=lambda pair: -pair[0])
    return [one for _, one in ranked[:_MOST_GROSS]]
