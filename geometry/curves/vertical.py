"""The vertical curve: a parabola between two grades.

z = z_bvc + g1 x + (g2 - g1) x² / 2L, in every route-surveying text (Hickerson;
Meyer & Gibson; from memory). Grades are rise over run, 0.03 for 3 %.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange


@dataclass(frozen=True, slots=True)
class VerticalCurve:
    """A parabola from BVC to EVC; distances along the line, elevations, metres.

    `turning_m` and `turning_elevation_m` are its highest or lowest point, None when
    the grade does not change sign within it. `rate_m` is K: metres of curve per one
    percent of change. `middle_ordinate_m` is from the PVI to the curve, up positive.
    """

    bvc_m: float
    bvc_elevation_m: float
    evc_m: float
    evc_elevation_m: float
    grade_in: float
    grade_out: float
    length_m: float
    rate_m: float
    middle_ordinate_m: float
    turning_m: float | None
    turning_elevation_m: float | None


def vertical_curve(
    pvi_m: float,
    pvi_elevation_m: float,
    grade_in: float,
    grade_out: float,
    length_m: float,
) -> VerticalCurve:
    """The parabola of a length whose tangents meet at the PVI.

    >>> c = vertical_curve(1380.0, 577.50, -0.0175, 0.0225, 500.0)
    >>> c.bvc_m, round(c.bvc_elevation_m, 3), round(c.turning_m, 2)
    (1130.0, 581.875, 1348.75)

    Raises OutOfRange for no length or two equal grades (there is nothing to round).
    """
    length = checked.positive("The curve's length", length_m)
    pvi = checked.number("The PVI", pvi_m)
    z = checked.number("The PVI's elevation", pvi_elevation_m)
    g1 = checked.number("The grade in", grade_in)
    g2 = checked.number("The grade out", grade_out)
    if g1 == g2:
        raise OutOfRange(
            "The two grades are equal, so there is no curve between them.",
            do="Leave the curve out at this PVI.",
        )
    bvc, z_bvc = pvi - length / 2, z - g1 * length / 2
    turning = -g1 * length / (g2 - g1)
    inside = 0.0 < turning < length
    return VerticalCurve(
        bvc_m=bvc,
        bvc_elevation_m=z_bvc,
        evc_m=pvi + length / 2,
        evc_elevation_m=z + g2 * length / 2,
        grade_in=g1,
        grade_out=g2,
        length_m=length,
        rate_m=length / (100 * abs(g2 - g1)),
        middle_ordinate_m=(g2 - g1) * length / 8,
        turning_m=bvc + turning if inside else None,
        turning_elevation_m=z_bvc + g1 * turning / 2 if inside else None,
    )


def elevations_on_curve(curve: VerticalCurve, distance_m: ArrayLike) -> Array:
    """Elevations (n,) at distances (n,) along the line, within BVC .. EVC.

    >>> c = vertical_curve(50.0, 106.0, 0.03, -0.03, 100.0)
    >>> elevations_on_curve(c, [0.0, 50.0]).round(3).tolist()
    [104.5, 105.25]

    Raises OutOfRange for a distance outside the curve.
    """
    x = checked.numbers("distances", distance_m) - curve.bvc_m
    outside = (x < -1e-9) | (x > curve.length_m + 1e-9)
    if np.any(outside):
        raise OutOfRange(
            "A distance lies outside the vertical curve.",
            where=f"It is in row {int(np.argmax(outside)) + 1}.",
            do="Use the whole profile.",
        )
    bend = (curve.grade_out - curve.grade_in) / (2 * curve.length_m)
    return curve.bvc_elevation_m + x * (curve.grade_in + bend * x)


def length_through(
    pvi_elevation_m: float,
    grade_in: float,
    grade_out: float,
    point_elevation_m: float,
    point_from_pvi_m: float,
) -> float:
    """The length of the curve that passes through a fixed point (a sill, a soffit).

    `point_from_pvi_m` is the point's distance along the line from the PVI, ahead
    positive. The larger root is the curve with the point between BVC and EVC.

    >>> round(length_through(106.0, 0.03, -0.03, 105.25, 0.0), 6)
    100.0

    Raises OutOfRange when no such curve exists: the point lies on the wrong side of
    the tangents.
    """
    d = checked.number("The point's distance from the PVI", point_from_pvi_m)
    change = checked.number("The grade out", grade_out) - checked.number(
        "The grade in", grade_in
    )
    rise = checked.number("The point's elevation", point_elevation_m) - (
        checked.number("The PVI's elevation", pvi_elevation_m) + grade_in * d
    )
    # rise = change (d + L/2)² / 2L, a quadratic in L
    if change == 0.0 or rise / change <= 0.0:
        raise _no_curve_through()
    half = 4 * rise / change - 2 * d
    root = half * half - 4 * d * d
    length = half + np.sqrt(max(root, 0.0))
    if root < -1e-9 * max(d * d, 1.0) or abs(d) > length / 2 + 1e-9:
        raise _no_curve_through()
    return float(length)


def _no_curve_through() -> OutOfRange:
    return OutOfRange(
        "No vertical curve between these grades passes through the point.",
        do="Check the point's elevation, or move the PVI.",
    )
