"""From weighed causes to an answer: one cause, a set of them, or nothing.

Posterior weights are exp(-loss/2). A cause is believed over none when its loss is
smaller by 6.9 (odds of some thirty to one), and over the others with 95 %; else the
smallest set that holds 95 % is the answer. A cause whose largest effect is below a
third of the tolerance is real but does not matter.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from geometry.checked import Array
from geometry.signature.findings import Cause
from geometry.signature.kinds import Kind
from geometry.verdicts import Verdict

OVER_NOTHING = 6.9
BELIEVED = 0.95
MATTERS = 1 / 3


def probabilities(losses: Sequence[float]) -> Array:
    """Posterior probabilities of causes given their losses."""
    array = np.asarray(losses, dtype=np.float64)
    weights = np.exp(-0.5 * (array - array.min()))
    return np.asarray(weights / weights.sum())


def credible(causes: Sequence[Cause]) -> tuple[Cause, ...]:
    """The smallest set of real causes that holds 95 %, or nothing.

    `causes` come most probable first.
    """
    nothing = next((c.loss for c in causes if c.kind is Kind.NOTHING), math.inf)
    real = [c for c in causes if c.kind is not Kind.NOTHING]
    if not real or nothing - real[0].loss <= OVER_NOTHING:
        return ()
    total, kept = sum(c.probability for c in real), []
    for cause in real:
        kept.append(cause)
        if sum(c.probability for c in kept) >= BELIEVED * total:
            break
    return tuple(kept)


def verdict(causes: Sequence[Cause], tolerance_m: float) -> Verdict:
    """Pass without a cause that matters, fail for one, ambiguous for several."""
    if not any(matters(cause, tolerance_m) for cause in causes):
        return Verdict.PASS
    return Verdict.FAIL if len(causes) == 1 else Verdict.AMBIGUOUS


def matters(cause: Cause, tolerance_m: float) -> bool:
    """Whether the cause's largest effect passes a third of the tolerance."""
    return cause.effect_m > MATTERS * tolerance_m
