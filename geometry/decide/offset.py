"""One number against its tolerance: a distance, an elevation, an offset from a line."""

from __future__ import annotations

from geometry import checked
from geometry.decide.decision import Decision, Reason, compare
from geometry.decide.rule import (
    FACTOR_95_1D,
    FACTOR_ONE_SIDED_95,
    SLACK,
    WANTED_SHARE,
    Rule,
)
from geometry.verdicts import Verdict


def decide(
    difference: float,
    tolerance: float,
    uncertainty: float | None = None,
    *,
    rule: Rule = Rule.SIMPLE,
    factor: float = FACTOR_ONE_SIDED_95,
    tolerance_below: float | None = None,
) -> Decision:
    """`difference` (measured less computed) against plus or minus `tolerance`.

    All lengths in one unit. `uncertainty` is the standard uncertainty of the
    difference. `tolerance_below` is the limit for negative differences where it is
    another one (a footing may be 2 in low but only 1/2 in high). By simple acceptance
    the verdict is pass or fail; with a guard band g = factor x uncertainty it is pass
    up to tolerance - g, fail from tolerance + g, undecided between (JCGM 106:2012 and
    ISO 14253-1, from memory). Raises NotFinite, or OutOfRange for a tolerance that is
    not positive or a negative uncertainty.

    >>> decide(0.004, 0.006, 0.001, rule=Rule.GUARDED).verdict.value
    'pass'
    >>> decide(0.005, 0.006, 0.001, rule=Rule.GUARDED).verdict.value
    'undecided'
    >>> decide(-0.02, 0.02).verdict.value
    'pass'
    """
    d = checked.number("difference", difference)
    limit = checked.positive("tolerance", tolerance)
    if tolerance_below is not None and d < 0:
        limit = checked.positive("tolerance below", tolerance_below)
    u = _uncertainty(uncertainty)
    guard = factor * u if rule is Rule.GUARDED and u is not None else 0.0
    accept_to, reject_from = limit - guard, limit + guard
    if rule is Rule.GUARDED and u is None:
        verdict, reason = Verdict.UNDECIDED, Reason.NOT_KNOWN
    else:
        verdict, reason = compare(
            abs(d), accept_to, reject_from, rule=rule, slack=SLACK
        )
    wide = None if u is None else FACTOR_95_1D * u
    return Decision(
        verdict=verdict,
        reason=reason,
        difference=d,
        tolerance=limit,
        uncertainty=u,
        uncertainty_95=wide,
        rule=rule,
        factor=factor,
        accept_to=accept_to,
        reject_from=reject_from,
        well_measured=wide is not None and wide <= WANTED_SHARE * limit + SLACK,
    )


def _uncertainty(value: float | None) -> float | None:
    return None if value is None else checked.not_negative("uncertainty", value)
