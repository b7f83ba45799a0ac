"""Curves: the shapes a road, a curb or a grade is made of.

How long and how far out is this horizontal curve?
    circular_curve    T, L, E, M, chord of a radius and a deflection -> CircularCurve
    radius_of_degree  radius of a degree of curve, arc or chord definition
    curve_stakes      deflections and chords that set a curve out -> CurveStakes
    middle_ordinate   from chord to arc
    chord_for_ordinate  the longest chord that stays within a middle ordinate
    HUNDRED_FEET_M    base of the degree of curve
What does easing into it take?
    spiral            elements of one spiral -> Spiral
    spiraled_curve    spiral, arc, spiral between two tangents -> SpiraledCurve
    path              where linearly changing curvature leads -> Path
How does the grade run?
    vertical_curve    parabola between two grades -> VerticalCurve
    elevations_on_curve  elevations on it
    length_through    the length that passes through a fixed point
How is a corner rounded?
    curb_return       radius point, ends, equal parts, offset stakes -> CurbReturn
"""

from __future__ import annotations

from geometry.curves.circular import (
    HUNDRED_FEET_M,
    CircularCurve,
    CurveStakes,
    chord_for_ordinate,
    circular_curve,
    curve_stakes,
    middle_ordinate,
    radius_of_degree,
)
from geometry.curves.clothoid import Path, path
from geometry.curves.returns import CurbReturn, curb_return
from geometry.curves.spiral import Spiral, SpiraledCurve, spiral, spiraled_curve
from geometry.curves.vertical import (
    VerticalCurve,
    elevations_on_curve,
    length_through,
    vertical_curve,
)

__all__ = [
    "HUNDRED_FEET_M",
    "CircularCurve",
    "CurbReturn",
    "CurveStakes",
    "Path",
    "Spiral",
    "SpiraledCurve",
    "VerticalCurve",
    "chord_for_ordinate",
    "circular_curve",
    "curb_return",
    "curve_stakes",
    "elevations_on_curve",
    "length_through",
    "middle_ordinate",
    "path",
    "radius_of_degree",
    "spiral",
    "spiraled_curve",
    "vertical_curve",
]
