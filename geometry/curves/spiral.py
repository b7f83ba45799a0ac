"""The spiral between tangent and arc: curvature grows evenly with length.

Elements as in route-surveying texts (Hickerson; from memory): X and Y at the end,
the throw p by which the arc is moved in, k by which its centre is moved along.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry import checked
from geometry.curves.clothoid import path
from geometry.errors import OutOfRange

_NO_LENGTH_M = 1e-9


@dataclass(frozen=True, slots=True)
class Spiral:
    """A spiral from a tangent to a radius; lengths in metres, angle in radians."""

    length_m: float
    radius_m: float
    angle_rad: float
    along_m: float
    across_m: float
    throw_m: float
    shift_along_m: float
    long_tangent_m: float
    short_tangent_m: float


@dataclass(frozen=True, slots=True)
class SpiraledCurve:
    """Spiral, arc, spiral between two tangents that meet at the PI."""

    entry: Spiral
    exit: Spiral
    arc_m: float
    arc_rad: float
    tangent_in_m: float
    tangent_out_m: float
    length_m: float


def spiral(radius_m: float, length_m: float) -> Spiral:
    """The elements of a spiral of a length that ends in a radius; length 0 is none.

    >>> s = spiral(150.0, 60.0)
    >>> [round(x, 4) for x in (s.angle_rad, s.along_m, s.across_m, s.throw_m)]
    [0.2, 59.7604, 3.9886, 0.9986]

    Raises OutOfRange when the spiral would turn through a right angle or more.
    """
    radius = checked.positive("The radius", radius_m)
    length = checked.number("The spiral's length", length_m)
    if length < 0:
        raise OutOfRange("The spiral's length must not be negative.")
    length = length if length > _NO_LENGTH_M else 0.0
    angle = length / (2 * radius)
    if angle >= math.pi / 2:
        raise OutOfRange(
            "The spiral turns through a right angle or more.",
            where=f"Length {length:g} m to radius {radius:g} m.",
            do="Use a shorter spiral or a larger radius.",
        )
    end = path(0.0, 1 / radius, length, length) if length else path(0.0, 0.0, 1.0, 0.0)
    x, y = float(end.along_m), float(end.right_m)
    short = y / math.sin(angle) if length else 0.0
    return Spiral(
        length_m=length,
        radius_m=radius,
        angle_rad=angle,
        along_m=x,
        across_m=y,
        throw_m=y - 2 * radius * math.sin(angle / 2) ** 2,
        shift_along_m=x - radius * math.sin(angle),
        long_tangent_m=x - short * math.cos(angle),
        short_tangent_m=short,
    )


def spiraled_curve(
    radius_m: float, deflection_rad: float, entry_m: float, exit_m: float
) -> SpiraledCurve:
    """Spiral of `entry_m`, arc, spiral of `exit_m`, turning by the deflection.

    Unequal spirals are allowed; a length of zero leaves that spiral out.

    >>> c = spiraled_curve(150.0, math.radians(40), 60.0, 60.0)
    >>> round(c.arc_m, 4), round(c.tangent_in_m, 4)
    (44.7198, 84.919)

    Raises OutOfRange when the spirals alone turn more than the deflection.
    """
    turn = abs(checked.number("The deflection", deflection_rad))
    if not 0.0 < turn < math.pi - 1e-9:
        raise OutOfRange(
            "The deflection must lie between nothing and half a circle.",
            where=f"It is {math.degrees(deflection_rad):.6f} degrees.",
        )
    before, after = spiral(radius_m, entry_m), spiral(radius_m, exit_m)
    left = turn - before.angle_rad - after.angle_rad
    if left < -1e-12:
        raise OutOfRange(
            "The spirals turn more than the tangents do.",
            where=f"They turn {math.degrees(turn - left):.4f} degrees of "
            f"{math.degrees(turn):.4f}.",
            do="Use shorter spirals or a larger radius.",
        )
    inner, outer = radius_m + before.throw_m, radius_m + after.throw_m
    # written so that a turn near zero keeps its digits
    uneven, half = (outer - inner) / math.sin(turn), math.tan(turn / 2)
    arc = max(left, 0.0)
    return SpiraledCurve(
        entry=before,
        exit=after,
        arc_m=radius_m * arc,
        arc_rad=arc,
        tangent_in_m=before.shift_along_m + uneven + inner * half,
        tangent_out_m=after.shift_along_m - uneven + outer * half,
        length_m=before.length_m + radius_m * arc + after.length_m,
    )
