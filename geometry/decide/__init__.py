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
How is it shown?
  shown               digits by one rule that every language gives alike
  shown_apart         value and limit with enough digits to tell which is larger
"""

from __future__ import annotations

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
    "conformance",
    "conformance_radial",
    "could_have_seen",
    "decide",
    "decide_radial",
    "independence",
    "missing",
    "noncentrality",
    "reach",
    "repeats",
    "shown",
    "shown_apart",
    "smallest_move",
    "smallest_seen",
    "worst_uncertainty",
]
