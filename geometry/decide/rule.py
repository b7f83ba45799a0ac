"""The two decision rules, and the numbers that go with them."""

from __future__ import annotations

from enum import StrEnum

FACTOR_ONE_SIDED_95 = 1.6448536269514722
"""Standard normal quantile of 0.95: a guard band of this many standard uncertainties
leaves at most 5 % risk of accepting what is outside (JCGM 106:2012, from memory)."""

FACTOR_95_1D = 1.959963984540054
"""Standard normal quantile of 0.975: half-width of the 95 % interval of one number."""

FACTOR_95_RADIAL = 2.447746830680816
"""Half-axes of the 95 % ellipse of a position over those of the standard ellipse."""

SLACK = 1e-8
"""What two lengths may differ by and still be called equal: more than a float loses in
the difference of two plane coordinates, less than anybody measures or writes."""

WANTED_SHARE = 1.0 / 3.0
"""The 95 % uncertainty of a check should be at most this share of the tolerance
(common practice)."""


class Rule(StrEnum):
    """How a difference is held against a tolerance.

    SIMPLE: inside the tolerance is a pass, outside a fail; the uncertainty is shown.
    GUARDED: pass and fail both have to be proved against the uncertainty; what lies
    between is undecided (JCGM 106:2012, from memory).
    """

    SIMPLE = "simple acceptance"
    GUARDED = "guard band"
