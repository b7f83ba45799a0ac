"""A position against a circle of tolerance."""

from __future__ import annotations

import math

from numpy.typing import ArrayLike

from geometry import checked
from geometry.decide.decision import Decision, Reason, compare
from geometry.decide.rule import (
    FACTOR_95_RADIAL,
    FACTOR_ONE_SIDED_95,
    SLACK,
    WANTED_SHARE,
    Rule,
)
from geometry.verdicts import Verdict


def decide_radial(
    difference: ArrayLike,
    tolerance: float,
    uncertainty: float | None = None,
    *,
    rule: Rule = Rule.SIMPLE,
    factor: float = FACTOR_ONE_SIDED_95,
) -> Decision:
    """The length of `difference` (dE, dN) against the radius `tolerance`.

    All lengths in one unit. `uncertainty` is the semi-major axis of the standard error
    ellipse of the difference (see `worst_uncertainty`), so that the answer does not
    depend on which way the ellipse lies. With a guard band the pass limit is
    sqrt((T - k u)² - u²): a bare T - k u is right for a straight limit only and would
    pass up to 8 % of positions outside when T is 3 u, because the error across the
    difference also leads out of a circle. The root keeps P(inside | pass) at 95 % or
    more for every ellipse and every T / u (checked by quadrature in the tests).
    Fail from T + k u. Raises WrongShape, NotFinite, OutOfRange.

    >>> decide_radial((0.006, 0.0), 0.010, 0.002, rule=Rule.GUARDED).verdict.value
    'pass'
    >>> decide_radial((0.003, 0.004), 0.005).verdict.value
    'pass'
    """
    east, north = (float(x) for x in checked.point("difference", difference))
    limit = checked.positive("tolerance", tolerance)
    u = (
        None
        if uncertainty is None
        else checked.not_negative("uncertainty", uncertainty)
    )
    size = math.sqrt(east * east + north * north)
    accept_to, reject_from = limit, limit
    if rule is Rule.GUARDED and u is not None:
        accept_to, reject_from = _limits(limit, u, factor)
    if rule is Rule.GUARDED and u is None:
        verdict, reason = Verdict.UNDECIDED, Reason.NOT_KNOWN
    else:
        verdict, reason = compare(size, accept_to, reject_from, rule=rule, slack=SLACK)
    wide = None if u is None else FACTOR_95_RADIAL * u
    return Decision(
        verdict=verdict,
        reason=reason,
        difference=size,
        tolerance=limit,
        uncertainty=u,
        uncertainty_95=wide,
        rule=rule,
        factor=factor,
        accept_to=accept_to,
        reject_from=reject_from,
        well_measured=wide is not None and wide <= WANTED_SHARE * limit + SLACK,
    )


def worst_uncertainty(covariance: ArrayLike) -> float:
    """Semi-major axis of the standard ellipse of a 2x2 covariance (E, N).

    Written with + - * / and sqrt only, so that a phone shows the same digits.

    >>> round(worst_uncertainty([[4.0, 0.0], [0.0, 1.0]]), 6)
    2.0
    """
    c = checked.covariance("covariance", covariance)
    ee, en, nn = float(c[0, 0]), float(c[0, 1]), float(c[1, 1])
    half = (ee - nn) / 2
    return math.sqrt((ee + nn) / 2 + math.sqrt(half * half + en * en))


def _limits(tolerance: float, u: float, factor: float) -> tuple[float, float]:
    inner = tolerance - factor * u
    square = inner * inner - u * u
    accept_to = math.sqrt(square) if inner > 0 and square > 0 else -u
    return (tolerance if u == 0 else accept_to), tolerance + factor * u
