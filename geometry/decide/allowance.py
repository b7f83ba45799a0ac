"""Tolerances that grow with a length: three shapes, to be filled in by the firm.

Which figures hold is a matter of contract; the figures are data, not part of this.
"""

from __future__ import annotations

import math

from geometry import checked


def growing(length: float, each: float, per: float, most: float) -> float:
    """`each` for every `per` of `length`, `most` at most; any one unit.

    Accumulation along a column line, plumb of a column: AISC 303 7.5, 7.13.

    >>> growing(350 * 12, 0.25, 100 * 12, 1.0)
    0.875
    """
    grown = checked.not_negative("length", length) * checked.positive("each", each)
    grown /= checked.positive("per", per)
    return min(grown, checked.positive("most", most))


def rooted(length: float, factor: float, least: float = 0.0) -> float:
    """`factor` times the root of `length`, `least` at least; units of the firm's rule.

    The shape of ISO 4463-1 (from memory): millimetres from metres.

    >>> rooted(100.0, 0.75, 4.0), rooted(16.0, 0.75, 4.0)
    (7.5, 4.0)
    """
    root = math.sqrt(checked.not_negative("length", length))
    return max(
        checked.positive("factor", factor) * root, checked.not_negative("least", least)
    )


def fixed_and_ppm(length: float, fixed: float, ppm: float) -> float:
    """`fixed` plus `ppm` parts in a million of `length`, added, not squared.

    The shape of the relative positional precision of ALTA/NSPS surveys, 2 cm + 50 ppm.

    >>> round(fixed_and_ppm(300.0, 0.02, 50.0), 6)
    0.035
    """
    share = 1e-6 * checked.not_negative("ppm", ppm)
    grown = share * checked.not_negative("length", length)
    return checked.not_negative("fixed", fixed) + grown
