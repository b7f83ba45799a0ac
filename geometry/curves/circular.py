"""The simple circular curve: its elements, and the numbers that set it out.

Formulas of every route-surveying text (Hickerson; Ghilani & Wolf ch. 24; from
memory). Lengths may be in any one unit, metres by the convention of this package;
only the degree of curve needs its base length told.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange

HUNDRED_FEET_M = 30.48
"""The base of the degree of curve in international feet."""


@dataclass(frozen=True, slots=True)
class CircularCurve:
    """A curve between two tangents. `deflection_rad` is signed, right positive."""

    radius_m: float
    deflection_rad: float
    length_m: float
    tangent_m: float
    external_m: float
    middle_ordinate_m: float
    long_chord_m: float


def circular_curve(radius_m: float, deflection_rad: float) -> CircularCurve:
    """The elements of a curve of a radius that turns through a deflection angle.

    >>> c = circular_curve(2864.79, math.radians(8.4))
    >>> [round(x, 2) for x in (c.length_m, c.tangent_m, c.external_m)]
    [420.0, 210.38, 7.71]

    Raises OutOfRange for no radius, no deflection, or one of half a circle and more
    (its tangents never meet).
    """
    radius = checked.positive("The radius", radius_m)
    turn = abs(checked.number("The deflection", deflection_rad))
    if not 0.0 < turn < math.pi - 1e-9:
        raise OutOfRange(
            "The deflection must lie between nothing and half a circle.",
            where=f"It is {math.degrees(deflection_rad):.6f} degrees.",
            do="Use the two directions at the point of intersection.",
        )
    half = turn / 2
    return CircularCurve(
        radius_m=radius,
        deflection_rad=float(deflection_rad),
        length_m=radius * turn,
        tangent_m=radius * math.tan(half),
        external_m=radius * (1 / math.cos(half) - 1),
        middle_ordinate_m=middle_ordinate(radius, radius * turn),
        long_chord_m=2 * radius * math.sin(half),
    )


def radius_of_degree(
    degree_rad: float, base_m: float = HUNDRED_FEET_M, *, chord: bool = False
) -> float:
    """The radius whose arc (or chord) of `base_m` subtends the degree of curve.

    >>> round(radius_of_degree(math.radians(2), 100.0), 2)
    2864.79
    >>> round(radius_of_degree(math.radians(15), 100.0, chord=True), 3)
    383.065
    """
    degree = checked.positive("The degree of curve", degree_rad)
    base = checked.positive("The base length", base_m)
    if degree >= math.pi:
        raise OutOfRange("The degree of curve must be less than half a circle.")
    return base / (2 * math.sin(degree / 2)) if chord else base / degree


def middle_ordinate(radius_m: float, arc_m: float) -> float:
    """From the middle of a chord to the arc it cuts off, R (1 - cos(L / 2R)).

    >>> round(middle_ordinate(100.0, 10.0), 5)
    0.12497
    """
    radius = checked.positive("The radius", radius_m)
    return 2 * radius * math.sin(checked.number("The arc", arc_m) / (4 * radius)) ** 2


def chord_for_ordinate(radius_m: float, ordinate_m: float) -> float:
    """The longest chord whose middle ordinate stays within `ordinate_m`.

    >>> round(chord_for_ordinate(100.0, 0.125), 3)
    9.997

    Raises OutOfRange when the ordinate reaches the diameter.
    """
    radius = checked.positive("The radius", radius_m)
    ordinate = checked.positive("The ordinate", ordinate_m)
    if ordinate >= 2 * radius:
        raise OutOfRange("The ordinate must be less than the diameter.")
    return math.sqrt(8 * radius * ordinate - 4 * ordinate * ordinate)


@dataclass(frozen=True, slots=True)
class CurveStakes:
    """Setting out from the PC along the tangent: one row per stake, ends included.

    `distance_m` runs along the line, `deflection_rad` is turned from the tangent at
    the PC (signed, right positive), `chord_m` is pulled from the PC, `subchord_m`
    from the stake before.
    """

    distance_m: Array
    deflection_rad: Array
    chord_m: Array
    subchord_m: Array


def curve_stakes(
    curve: CircularCurve, pc_m: float, interval_m: float, *, zero_m: float = 0.0
) -> CurveStakes:
    """Stakes at whole multiples of the interval, with the PC and the PT.

    `zero_m` is the distance at which full stations are counted from.

    >>> s = curve_stakes(circular_curve(100.0, 0.5), 1012.0, 20.0)
    >>> s.distance_m.tolist()
    [1012.0, 1020.0, 1040.0, 1060.0, 1062.0]
    """
    interval = checked.positive("The interval", interval_m)
    pc = checked.number("The PC", pc_m)
    pt = pc + curve.length_m
    if curve.length_m / interval > 1e6:
        raise OutOfRange("The interval is too small for this curve.")
    first = math.floor((pc - zero_m) / interval) + 1
    last = math.ceil((pt - zero_m) / interval) - 1
    full = zero_m + interval * np.arange(first, last + 1)
    whole = full[(full > pc + 1e-9) & (full < pt - 1e-9)]
    distance = np.concatenate([[pc], whole, [pt]])
    half = (distance - pc) / (2 * curve.radius_m)
    steps = np.diff(distance, prepend=pc) / (2 * curve.radius_m)
    return CurveStakes(
        distance_m=distance,
        deflection_rad=math.copysign(1.0, curve.deflection_rad) * half,
        chord_m=2 * curve.radius_m * np.sin(half),
        subchord_m=2 * curve.radius_m * np.sin(steps),
    )
