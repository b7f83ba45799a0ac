"""Is an instrument as good as it should be? Tests of spreads and of a zero error.

The field procedures of ISO 17123 judge by these three tests (from memory): the spread
found against the one claimed (chi-square), against the one found before (F), and a zero
error against nothing (t).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from scipy.stats import chi2, f, t

from geometry import checked
from geometry.errors import OutOfRange
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True)
class SpreadTest:
    """`value` held against `low`..`high`: pass inside, fail outside."""

    value: float
    low: float
    high: float
    verdict: Verdict
    reason: str


def spread_agrees(
    found_sd: float, claimed_sd: float, dof: int, *, confidence: float = 0.95
) -> SpreadTest:
    """Whether a spread found with `dof` degrees of freedom bears out the one claimed.

    found / claimed up to sqrt(chi-square quantile / dof), one-sided. Raises NotFinite,
    OutOfRange.

    >>> round(spread_agrees(1.0, 1.0, 32).high, 2)
    1.2
    """
    _degrees(dof)
    ratio = checked.positive("found", found_sd) / checked.positive(
        "claimed", claimed_sd
    )
    high = math.sqrt(float(chi2.ppf(confidence, dof)) / dof)
    return _answer(
        ratio,
        0.0,
        high,
        "The spread is no larger than claimed.",
        "The spread is larger than claimed.",
    )


def spreads_agree(
    one_sd: float,
    one_dof: int,
    two_sd: float,
    two_dof: int,
    *,
    confidence: float = 0.95,
) -> SpreadTest:
    """Whether two spreads are of one instrument: ratio of variances, two-sided F.

    >>> answer = spreads_agree(1.0, 32, 1.0, 32)
    >>> round(answer.low, 2), round(answer.high, 2)
    (0.49, 2.02)
    """
    _degrees(one_dof)
    _degrees(two_dof)
    ratio = checked.positive("one", one_sd) / checked.positive("two", two_sd)
    tail = (1 - confidence) / 2
    return _answer(
        ratio * ratio,
        float(f.ppf(tail, one_dof, two_dof)),
        float(f.isf(tail, one_dof, two_dof)),
        "The two spreads agree.",
        "The two spreads differ beyond chance.",
    )


def is_zero(
    value: float, sd: float, dof: int, *, confidence: float = 0.95
) -> SpreadTest:
    """Whether a zero error, for instance of prism and instrument, may be none.

    `sd` is the standard deviation of `value`, found with `dof` degrees of freedom.

    >>> is_zero(0.5, 0.447, 14).verdict.value
    'pass'
    """
    _degrees(dof)
    high = float(t.isf((1 - confidence) / 2, dof)) * checked.positive("sd", sd)
    return _answer(
        checked.number("value", value),
        -high,
        high,
        "It is not different from zero beyond chance.",
        "It differs from zero beyond chance.",
    )


def position_factor(dof: int | None = None, *, probability: float = 0.95) -> float:
    """Half-axes of the confidence ellipse over those of the standard ellipse.

    sqrt of chi-square with 2 degrees of freedom when sigma is known (`dof` None), else
    sqrt(2 F) when it was estimated with `dof` (Ghilani, from memory).

    >>> round(position_factor(), 4), round(position_factor(10), 3)
    (2.4477, 2.865)
    """
    if dof is None:
        return math.sqrt(float(chi2.ppf(probability, 2)))
    _degrees(dof)
    return math.sqrt(2 * float(f.ppf(probability, 2, dof)))


def accuracy_horizontal(rmse_east: float, rmse_north: float) -> float:
    """95 % radial accuracy from two root-mean-square errors, same unit.

    2.4477 x half their sum (FGDC-STD-007.3-1998, appendix 3-A). Raises OutOfRange where
    their ratio is below 0.6 and the formula does not hold.

    >>> round(accuracy_horizontal(1.0, 1.0), 4)
    2.4477
    """
    e = checked.positive("rmse east", rmse_east)
    n = checked.positive("rmse north", rmse_north)
    if min(e, n) / max(e, n) < 0.6:
        raise OutOfRange(
            "The two errors differ too much for one radial figure.",
            where=f"Their ratio is {min(e, n) / max(e, n):.2f}, below 0.6.",
            do="Give the ellipse instead.",
        )
    return position_factor() * 0.5 * (e + n)


def _answer(
    value: float, low: float, high: float, inside: str, outside: str
) -> SpreadTest:
    if low <= value <= high:
        return SpreadTest(value, low, high, Verdict.PASS, inside)
    return SpreadTest(value, low, high, Verdict.FAIL, outside)


def _degrees(dof: int) -> None:
    if dof < 1:
        raise OutOfRange(
            "There must be at least one degree of freedom.", where=f"There are {dof}."
        )
