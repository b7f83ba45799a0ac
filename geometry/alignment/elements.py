"""What an alignment is strung from: straights, arcs, spirals and angle points.

Every one is a length with a curvature at its start and at its end (1/m, right
positive, as azimuths grow clockwise); radii follow the same sign.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry import checked
from geometry.errors import OutOfRange


@dataclass(frozen=True, slots=True)
class Element:
    """A length in metres whose curvature runs evenly between two values (1/m).

    `bend_rad` is an angle point at its start, right positive: pipes and fences turn
    without a curve.
    """

    length_m: float
    curvature_start: float
    curvature_end: float
    bend_rad: float = 0.0

    @property
    def kind(self) -> str:
        """straight, arc or spiral."""
        if self.curvature_start != self.curvature_end:
            return "spiral"
        return "arc" if self.curvature_start else "straight"


def straight(length_m: float, *, bend_rad: float = 0.0) -> Element:
    """A straight of a length, after an angle point if `bend_rad` is given.

    >>> straight(120.0).kind
    'straight'

    Raises OutOfRange for no length or a bend of half a circle and more.
    """
    bend = checked.number("The bend", bend_rad)
    if abs(bend) >= math.pi - 1e-9:
        raise OutOfRange("The line turns back on itself.", do="Check the angle point.")
    length = checked.positive("The straight's length", length_m)
    return Element(length, 0.0, 0.0, bend)


def arc(length_m: float, radius_m: float) -> Element:
    """An arc of a length; the radius is positive to the right, negative to the left.

    >>> arc(80.0, -200.0).curvature_start
    -0.005

    Raises OutOfRange for no length or no radius.
    """
    bend = _curvature("The radius", radius_m)
    return Element(checked.positive("The arc's length", length_m), bend, bend)


def spiral_element(
    length_m: float, from_radius_m: float | None, to_radius_m: float | None
) -> Element:
    """A spiral between two radii, None being straight; two radii make a compound one.

    >>> spiral_element(60.0, None, 150.0).curvature_start
    0.0

    Raises OutOfRange for no length, no radius, or two equal radii (an arc).
    """
    k0 = 0.0 if from_radius_m is None else _curvature("The radius", from_radius_m)
    k1 = 0.0 if to_radius_m is None else _curvature("The radius", to_radius_m)
    if k0 == k1:
        raise OutOfRange(
            "A spiral must end in another curvature than it starts with.",
            do="Use an arc or a straight.",
        )
    return Element(checked.positive("The spiral's length", length_m), k0, k1)


def _curvature(name: str, radius_m: float) -> float:
    radius = checked.number(name, radius_m)
    if abs(radius) < 1e-3:
        raise OutOfRange(
            f"{name} is too small to be a curve.", where=f"It is {radius:g} m."
        )
    return 1.0 / radius
