"""An alignment from its points of intersection, as plans give it.

Each inner PI has a radius, with spirals before and after where wanted; radius None
is an angle point, as at a manhole or a fence corner.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.alignment.elements import Element
from geometry.alignment.line import Alignment, alignment
from geometry.checked import Array
from geometry.curves.spiral import SpiraledCurve, spiraled_curve
from geometry.errors import CoincidentPoints, EmptyInput, OutOfRange, WrongShape

_SAME_PLACE_M = 1e-6
_NO_LENGTH_M = 1e-9


@dataclass(frozen=True, slots=True)
class Bend:
    """How the line rounds a PI: radius in metres (None: not at all), and spirals."""

    radius_m: float | None = None
    entry_spiral_m: float = 0.0
    exit_spiral_m: float = 0.0


def alignment_through(
    intersections: ArrayLike, bends: Sequence[Bend], *, start_m: float = 0.0
) -> Alignment:
    """The line through points (n, 2), E, N in metres, rounded at the inner ones.

    >>> line = alignment_through([(0, 0), (0, 200), (200, 200)], [Bend(100.0)])
    >>> round(line.end_m, 4)
    357.0796

    Raises EmptyInput for fewer than two points, WrongShape when the bends do not
    match, CoincidentPoints for a repeated point, OutOfRange when the line turns back
    on itself or two curves overlap (which PI, and by how much).
    """
    points = checked.points("intersections", intersections)
    if len(points) < 2:
        raise EmptyInput("A line needs at least two points.")
    if len(bends) != len(points) - 2:
        raise WrongShape(
            "Every point between the ends needs one bend.",
            where=f"{len(points) - 2} inner points, {len(bends)} bends.",
        )
    legs, azimuths = _legs(points)
    turns = (np.diff(azimuths) + math.pi) % (2 * math.pi) - math.pi
    curves = [
        _curve(bend, float(turn), number)
        for number, (bend, turn) in enumerate(zip(bends, turns, strict=True), start=2)
    ]
    elements = _strung(legs, curves, [float(t) for t in turns])
    return alignment(points[0], float(azimuths[0]), elements, start_m=start_m)


def _legs(points: Array) -> tuple[Array, Array]:
    steps = np.diff(points, axis=0)
    legs = np.hypot(steps[:, 0], steps[:, 1])
    if (legs < _SAME_PLACE_M).any():
        at = int(np.argmax(legs < _SAME_PLACE_M)) + 1
        raise CoincidentPoints(
            "Two points of intersection are the same point.",
            where=f"They are points {at} and {at + 1}.",
            do="Leave one of them out.",
        )
    return legs, np.arctan2(steps[:, 0], steps[:, 1])


def _curve(bend: Bend, turn: float, number: int) -> SpiraledCurve | None:
    if math.pi - abs(turn) < 1e-6:
        raise OutOfRange(
            "The line turns back on itself.", where=f"It does so at point {number}."
        )
    # a curve too short to be seen is left as the angle it turns
    if bend.radius_m is None or abs(turn * bend.radius_m) < _SAME_PLACE_M:
        return None
    try:
        return spiraled_curve(
            bend.radius_m, turn, bend.entry_spiral_m, bend.exit_spiral_m
        )
    except OutOfRange as error:
        where = f"It is the curve at point {number}. {error.where}".strip()
        raise OutOfRange(error.what, where=where, do=error.do) from error


def _strung(
    legs: Array, curves: Sequence[SpiraledCurve | None], turns: Sequence[float]
) -> list[Element]:
    elements: list[Element] = []
    used, bend = 0.0, 0.0
    for number, leg in enumerate(legs.tolist(), start=1):
        ahead = curves[number - 1] if number <= len(curves) else None
        free = leg - used - (ahead.tangent_in_m if ahead else 0.0)
        if free < -_SAME_PLACE_M:
            raise OutOfRange(
                "The curves on a leg overlap.",
                where=f"Between points {number} and {number + 1}, by {-free:.3f} m.",
                do="Use smaller radii or shorter spirals.",
            )
        if free > _NO_LENGTH_M:
            elements.append(Element(free, 0.0, 0.0, bend))
        used, bend = 0.0, 0.0
        if number > len(turns):
            break
        if ahead is None:
            bend = turns[number - 1]
            continue
        elements += _pieces(ahead, turns[number - 1])
        used = ahead.tangent_out_m
    return elements


def _pieces(curve: SpiraledCurve, turn: float) -> list[Element]:
    bend = math.copysign(1.0 / curve.entry.radius_m, turn)
    pieces = [
        Element(curve.entry.length_m, 0.0, bend),
        Element(curve.arc_m, bend, bend),
        Element(curve.exit.length_m, bend, 0.0),
    ]
    return [piece for piece in pieces if piece.length_m > _NO_LENGTH_M]
