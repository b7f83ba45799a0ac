"""Decisions: does it hold, how sure is that, and what could this check have seen?

Does it hold?
  decide              one number against its tolerance, simple or with a guard band
  decide_radial       a position against a circle of tolerance
  worst_uncertainty   the one uncertainty of a position that `decide_radial` takes
  Decision, Reason, Rule   the answer, its reason, and the rule used
  FACTOR_ONE_SIDED_95, WANTED_SHARE   the guard factor; the share of tolerance wanted
How sure is that, and what would settle it?
  conformance         probability that a number lies within its tolerance
  conformance_radial  the same for a position
  repeats, Repeats    how many measurements would settle an undecided one
What could this check have seen?
  smallest_seen       smallest move along one direction that one check finds
  smallest_move, SmallestMove   smallest move that several checks together find
  could_have_seen     whether a check would have found a given move
  noncentrality       lambda0 of a test, from its size and power
What is this check worth?
  independence, Independence, Means   grade 0 to 3, by what it does not share
  reach, Reach, Seen, Against, Component   shape, place, fit, height
  missing             reaches a tolerance class needs and no passed check has
Is the instrument as good as it should be?
  spread_agrees       a spread found against the one claimed
  spreads_agree       two spreads against each other
  is_zero, SpreadTest a zero error against nothing; the answer of all three
  position_factor     confidence ellipse over standard ellipse, sigma known or estimated
  accuracy_horizontal radial 95 % accuracy from two root-mean-square errors
How large may a difference be?
  growing, rooted, fixed_and_ppm   tolerances that grow with a length
How is it shown?
  shown               digits by one rule that every language gives alike
  shown_apart         value and limit with enough digits to tell which is larger
"""

from __future__ import annotations

from geometry.decide.allowance import fixed_and_ppm, growing, rooted
from geometry.decide.conformance import conformance, conformance_radial
from geometry.decide.decision import Decision, Reason
from geometry.decide.detectable import (
    SmallestMove,
    could_have_seen,
    noncentrality,
    smallest_move,
    smallest_seen,
)
from geometry.decide.independence import Independence, Means, independence
from geometry.decide.offset import decide
from geometry.decide.radial import decide_radial, worst_uncertainty
from geometry.decide.reach import Against, Component, Reach, Seen, missing, reach
from geometry.decide.repeats import Repeats, repeats
from geometry.decide.rule import FACTOR_ONE_SIDED_95, WANTED_SHARE, Rule
from geometry.decide.shown import shown, shown_apart
from geometry.decide.spread import (
    SpreadTest,
    accuracy_horizontal,
    is_zero,
    position_factor,
    spread_agrees,
    spreads_agree,
)

__all__ = [
    "FACTOR_ONE_SIDED_95",
    "WANTED_SHARE",
    "Against",
    "Component",
    "Decision",
    "Independence",
    "Means",
    "Reach",
    "Reason",
    "Repeats",
    "Rule",
    "Seen",
    "SmallestMove",
    "SpreadTest",
    "accuracy_horizontal",
    "conformance",
    "conformance_radial",
    "could_have_seen",
    "decide",
    "decide_radial",
    "fixed_and_ppm",
    "growing",
    "independence",
    "is_zero",
    "missing",
    "noncentrality",
    "position_factor",
    "reach",
    "repeats",
    "rooted",
    "shown",
    "shown_apart",
    "smallest_move",
    "smallest_seen",
    "spread_agrees",
    "spreads_agree",
    "worst_uncertainty",
]
