"""What the residuals of an adjustment prove: tests, and errors they could not see.

Baarda 1968 (data snooping, minimal detectable bias, external reliability). The table
values 3.2905, 4.1321, 17.0746 for a test at 0.001 with power 0.80 follow from the
non-central chi-square distribution.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

from scipy import optimize, special

from geometry.errors import OutOfRange
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True)
class GlobalTest:
    """Sum of squared residuals against what the given precision lets expect.

    `statistic` over `dof` should be near 1; `lower` and `upper` are the two-sided
    limits for information, `limit` the one-sided one that decides, `p_value` the
    chance of a larger sum when nothing is wrong.
    """

    statistic: float
    dof: int
    alpha: float
    lower: float
    upper: float
    limit: float
    p_value: float
    verdict: Verdict


def global_test(statistic: float, dof: int, alpha: float = 0.05) -> GlobalTest:
    """Chi-square test of the whole adjustment, the given sigmas taken as true.

    >>> global_test(20.0, 10).verdict
    <Verdict.FAIL: 'fail'>
    >>> round(global_test(20.0, 10).limit, 3)
    18.307
    """
    _check(alpha)
    if dof <= 0:
        return GlobalTest(statistic, 0, alpha, 0.0, 0.0, 0.0, 1.0, Verdict.NOT_TESTED)
    limit = float(special.chdtri(dof, alpha))
    verdict = Verdict.PASS if statistic <= limit else Verdict.FAIL
    return GlobalTest(
        statistic=statistic,
        dof=dof,
        alpha=alpha,
        lower=float(special.chdtri(dof, 1 - alpha / 2)),
        upper=float(special.chdtri(dof, alpha / 2)),
        limit=limit,
        p_value=float(special.chdtrc(dof, statistic)),
        verdict=verdict,
    )


def critical_w(alpha: float = 0.001) -> float:
    """Two-sided limit of a standard normal residual.

    >>> round(critical_w(0.001), 4)
    3.2905
    """
    _check(alpha)
    return float(-special.ndtri(alpha / 2))


@lru_cache(maxsize=256)
def noncentrality(alpha: float = 0.001, power: float = 0.80, dof: int = 1) -> float:
    """lambda0: how far from true a model must be for a test to see it with `power`.

    >>> [round(noncentrality(0.001, 0.80, q), 4) for q in (1, 2, 3)]
    [17.0746, 19.6624, 21.545]

    Raises OutOfRange when alpha or power lie outside (0, 1).
    """
    _check(alpha)
    _check(power)
    if power <= alpha:
        return 0.0
    limit = float(special.chdtri(dof, alpha))

    def short(centre: float) -> float:
        return 1.0 - float(special.chndtr(limit, dof, centre)) - power

    high = 10.0
    while short(high) < 0:
        high *= 2
    return float(optimize.brentq(short, 0.0, high, xtol=1e-10))


def detectable(alpha: float = 0.001, power: float = 0.80) -> float:
    """delta0: minimal detectable bias of one measurement over sigma / sqrt(r).

    >>> round(detectable(0.001, 0.80), 4)
    4.1321
    """
    return math.sqrt(noncentrality(alpha, power, 1))


def ellipse_factor(dof: int, probability: float = 0.95) -> float:
    """Half-axes of an ellipse over the standard ones when sigma0 was estimated.

    The square root of 2 F(2, dof); for a known sigma0 the factor is 2.4477.

    >>> round(ellipse_factor(10), 3)
    2.865

    Raises OutOfRange without any degree of freedom.
    """
    _check(probability)
    if dof < 1:
        raise OutOfRange("Without redundancy no precision can be estimated.")
    return math.sqrt(2.0 * float(special.fdtri(2, dof, probability)))


def matching_alpha(dof: int, alpha: float = 0.001, power: float = 0.80) -> float:
    """Level of a global test that sees what one test at `alpha` sees (B-method).

    >>> round(matching_alpha(13), 3)
    0.06
    """
    centre = noncentrality(alpha, power, 1)

    def short(limit: float) -> float:
        return 1.0 - float(special.chndtr(limit, dof, centre)) - power

    limit = float(optimize.brentq(short, 1e-9, dof + 50.0 + 10 * math.sqrt(dof)))
    return float(special.chdtrc(dof, limit))


def _check(probability: float) -> None:
    if not 0.0 < probability < 1.0:
        raise OutOfRange(
            "A probability must lie between 0 and 1.", where=f"It is {probability:g}."
        )
