"""Areas of figures by coordinates, straight-sided or with circular arcs."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from shapely import Polygon
from shapely.validation import explain_validity

from geometry import checked
from geometry.checked import Array
from geometry.cogo.polar import SAME_PLACE_M, reach
from geometry.errors import BadOutline, CoincidentPoints, OutOfRange, WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class Area:
    """A figure's area in m² (never negative), its perimeter in metres, which way its
    corners run, and the centroid (2,) of its straight-sided outline."""

    area_m2: float
    perimeter_m: float
    clockwise: bool
    centroid_m: Array


def area(outline: ArrayLike, arc_radii_m: ArrayLike | None = None) -> Area:
    """The area of a figure with corners (n, 2), closed by itself.

    `arc_radii_m` (n,) tells of the side after each corner: 0 straight, positive an arc
    bulging out, negative an arc bulging in; arcs are at most half circles. Raises
    BadOutline for fewer than three corners, no area or sides that cross,
    CoincidentPoints for a zero-length side, OutOfRange for an arc too tight for its
    chord, NotFinite, WrongShape.

    >>> area([(1, 6), (3, 1), (7, 2), (4, 4), (8, 5)]).area_m2
    16.5
    >>> round(area([(0, 0), (0, 2), (2, 2), (2, 0)], [1.0, 0, 0, 0]).area_m2, 6)
    5.570796
    """
    corners = _corners(outline)
    origin = corners.mean(axis=0)
    local = corners - origin
    after = np.roll(local, -1, axis=0)
    crossed = local[:, 0] * after[:, 1] - after[:, 0] * local[:, 1]
    doubled = float(crossed.sum())
    centroid = origin + ((local + after) * crossed[:, None]).sum(axis=0) / (3 * doubled)
    sides = np.hypot(*(after - local).T)
    segments, perimeter = _arcs(sides, arc_radii_m)
    return Area(abs(doubled) / 2 + segments, perimeter, doubled < 0, centroid)


def segment_area(chord_m: float, radius_m: float) -> float:
    """The area in m² between a chord and its minor arc.

    >>> round(segment_area(2.0, 1.0), 6)
    1.570796
    """
    half = _half_angle(reach("chord", chord_m), reach("radius", radius_m))
    return radius_m**2 * (half - math.sin(half) * math.cos(half))


def _half_angle(chord: float, radius: float) -> float:
    ratio = chord / (2 * radius)
    if ratio > 1 + 1e-9:
        raise OutOfRange(
            "An arc's radius is shorter than half its chord.",
            where=f"Radius {radius:g}, chord {chord:g}.",
        )
    return math.asin(min(ratio, 1.0))


def _arcs(sides: Array, arc_radii_m: ArrayLike | None) -> tuple[float, float]:
    """The area the arcs add and the perimeter, from chords and signed radii."""
    if arc_radii_m is None:
        return 0.0, float(sides.sum())
    radii = checked.numbers("arc radii", arc_radii_m)
    if radii.shape != sides.shape:
        raise WrongShape(
            "There must be one arc radius (or 0) for every side.",
            where=f"There are {len(radii)} for {len(sides)} sides.",
        )
    added, perimeter = 0.0, 0.0
    for chord, radius in zip(sides.tolist(), radii.tolist(), strict=True):
        if radius == 0:
            perimeter += chord
            continue
        added += math.copysign(segment_area(chord, abs(radius)), radius)
        perimeter += 2 * abs(radius) * _half_angle(chord, abs(radius))
    return added, perimeter


def _corners(outline: ArrayLike) -> Array:
    corners = checked.points("outline", outline)
    if len(corners) > 1 and np.hypot(*(corners[0] - corners[-1])) < SAME_PLACE_M:
        corners = corners[:-1]
    if len(corners) < 3:
        raise BadOutline(
            "A figure needs at least three corners.", where=f"It has {len(corners)}."
        )
    sides = np.hypot(*(np.roll(corners, -1, axis=0) - corners).T)
    if float(sides.min()) < SAME_PLACE_M:
        raise CoincidentPoints(
            "Two corners that follow each other are the same point.",
            where=f"They are rows {int(np.argmin(sides)) + 1} and the next.",
            do="Leave one of them out.",
        )
    shape = Polygon(corners - corners.mean(axis=0))
    if not shape.is_valid or shape.area < 1e-12 * float((sides**2).sum()):
        raise BadOutline(
            "The sides cross each other, or enclose nothing.",
            where=f"{explain_validity(shape)}, from the middle of the corners.",
            do="Give the corners in order around the figure.",
        )
    return corners
