"""What a comparison with a tolerance answers, with all that a screen shows of it."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from geometry.decide.rule import Rule
from geometry.verdicts import Verdict


class Reason(StrEnum):
    """Why a decision is what it is; each is a sentence to show."""

    WITHIN = "The difference is within the tolerance."
    OUTSIDE = "The difference is outside the tolerance."
    PROVED_WITHIN = "The difference is within the tolerance, guard band included."
    PROVED_OUTSIDE = "The difference is outside the tolerance, guard band included."
    TOO_CLOSE = "The difference is too close to the tolerance for this uncertainty."
    NOT_CAPABLE = "A measurement this uncertain can never prove this tolerance."
    NOT_KNOWN = "The uncertainty is not recorded, so the guard band is not known."


@dataclass(frozen=True, slots=True)
class Decision:
    """A difference held against a tolerance. All lengths in one unit.

    `difference` is signed for one number and the length of the difference for a
    position. `tolerance` is the limit on the side where the difference lies.
    `uncertainty` is standard (one sigma), None when not recorded; `uncertainty_95`
    is its 95 % half-width. Up to `accept_to` the answer is pass, from `reject_from`
    on it is fail. `well_measured` says whether the 95 % uncertainty is at most a third
    of the tolerance.
    """

    verdict: Verdict
    reason: Reason
    difference: float
    tolerance: float
    uncertainty: float | None
    uncertainty_95: float | None
    rule: Rule
    factor: float
    accept_to: float
    reject_from: float
    well_measured: bool


def compare(
    size: float, accept_to: float, reject_from: float, *, rule: Rule, slack: float
) -> tuple[Verdict, Reason]:
    """Pass up to `accept_to`, fail from `reject_from`, undecided between.

    Only comparisons, so that another language gives the same answer.
    """
    guarded = rule is Rule.GUARDED
    if size <= accept_to + slack:
        return Verdict.PASS, Reason.PROVED_WITHIN if guarded else Reason.WITHIN
    if size >= reject_from - slack:
        return Verdict.FAIL, Reason.PROVED_OUTSIDE if guarded else Reason.OUTSIDE
    if accept_to < 0:
        return Verdict.UNDECIDED, Reason.NOT_CAPABLE
    return Verdict.UNDECIDED, Reason.TOO_CLOSE
