"""How often an undecided measurement must be repeated before it can be decided."""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry import checked
from geometry.decide.rule import FACTOR_ONE_SIDED_95, SLACK
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True)
class Repeats:
    """`total` measurements would settle it as `towards`, if their mean stays.

    `total` is None when no number of repeats can: the difference stands on the limit,
    or the part that does not average out is already too large. `reason` says which.
    """

    total: int | None
    towards: Verdict
    reason: str


def repeats(
    difference: float,
    tolerance: float,
    random_uncertainty: float,
    fixed_uncertainty: float = 0.0,
    *,
    factor: float = FACTOR_ONE_SIDED_95,
) -> Repeats:
    """Repeats n with factor x sqrt(fixed² + random² / n) <= |tolerance - |difference||.

    Only the random part averages: centring, a wrong prism constant and the coordinates
    of the control stay what they are, and belong in `fixed_uncertainty`. Standard
    uncertainties, all lengths in one unit. Raises NotFinite, OutOfRange.

    >>> repeats(4.0, 6.0, 2.0).total
    3
    >>> repeats(5.0, 6.0, 2.0, 1.0).total is None
    True
    """
    size = abs(checked.number("difference", difference))
    limit = checked.positive("tolerance", tolerance)
    random = checked.not_negative("random uncertainty", random_uncertainty)
    fixed = checked.not_negative("fixed uncertainty", fixed_uncertainty)
    k = checked.positive("factor", factor)
    checked.metres("the largest of them", max(size, limit, random, fixed))
    margin = abs(limit - size)
    towards = Verdict.PASS if size <= limit else Verdict.FAIL
    if margin <= SLACK:
        return Repeats(
            None, Verdict.UNDECIDED, "The difference stands on the limit itself."
        )
    room = (margin / k) ** 2 - fixed * fixed
    if room <= 0:
        return Repeats(
            None, towards, "What does not average out is already too uncertain."
        )
    count = max(1, math.ceil(random * random / room - 1e-9))
    return Repeats(count, towards, "If the mean of the repeats stays what it is.")
