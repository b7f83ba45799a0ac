"""Gridlines: lines of a column grid, staked like walls where they leave the building."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import CoincidentPoints, EmptyInput, OutOfRange
from geometry.layout.direction import EnclosingRectangle
from geometry.layout.lines import (
    SAME_DIRECTION,
    SAME_LINE_M,
    LineKind,
    Place,
    WallLine,
)

SHORTEST_M = 0.1
LEAST_CROSSING = 0.17
"""Sine of ten degrees: flatter, a grid's crossings are no places to build from."""


@dataclass(frozen=True, slots=True)
class Gridline:
    """A named line between two points (E, N; metres)."""

    name: str
    start: Place
    end: Place


@dataclass(frozen=True, slots=True)
class GridPoint:
    """Where two gridlines cross, named as on the sheets: A/1."""

    name: str
    e_m: float
    n_m: float


def column_grid(
    origin: ArrayLike,
    azimuth_rad: float,
    letters: Sequence[tuple[str, float]],
    numbers: Sequence[tuple[str, float]],
    *,
    skew_rad: float = 0.0,
) -> tuple[tuple[Gridline, ...], tuple[GridPoint, ...]]:
    """The lines and crossings of a column grid.

    `origin` (E, N; metres) is where both zeros meet. Lettered lines run along
    `azimuth_rad`, each at its distance (metres) to the right of the origin; numbered
    ones run a right angle plus `skew_rad` clockwise of that, each at its distance
    ahead, measured along the lettered lines; the letters' distances are measured along
    the numbered lines.

    Raises EmptyInput without lines, OutOfRange for a skew that leaves no crossing.

    >>> lines, points = column_grid((0, 0), 0.0, [("A", 0), ("B", 6)], [("1", 0)])
    >>> [p.name for p in points], points[1].e_m, len(lines)
    (['A/1', 'B/1'], 6.0, 3)
    """
    at = checked.point("origin", origin)
    a = checked.number("azimuth", azimuth_rad)
    cross = a + math.pi / 2 + checked.number("skew", skew_rad)
    if not letters or not numbers:
        raise EmptyInput("A grid needs at least one lettered and one numbered line.")
    if abs(math.sin(cross - a)) < LEAST_CROSSING:
        raise OutOfRange(
            "The two directions of the grid are nearly the same.", do="Check the skew."
        )
    u = np.array([math.sin(a), math.cos(a)])
    v = np.array([math.sin(cross), math.cos(cross)])
    right = checked.numbers("letters' distances", [d for _, d in letters])
    ahead = checked.numbers("numbers' distances", [d for _, d in numbers])
    lines = [
        _gridline(name, at + d * v, u, ahead)
        for (name, _), d in zip(letters, right, strict=True)
    ] + [
        _gridline(name, at + d * u, v, right)
        for (name, _), d in zip(numbers, ahead, strict=True)
    ]
    points = tuple(
        GridPoint(f"{letter}/{number}", *_place(at + x * v + y * u))
        for (letter, _), x in zip(letters, right, strict=True)
        for (number, _), y in zip(numbers, ahead, strict=True)
    )
    return tuple(lines), points


def _gridline(name: str, foot: Array, along: Array, stations: Array) -> Gridline:
    low, high = float(stations.min()), float(stations.max())
    if high - low < SHORTEST_M:
        low, high = low - 1.0, high + 1.0
    return Gridline(name, _place(foot + low * along), _place(foot + high * along))


def with_gridlines(
    lines: tuple[WallLine, ...],
    gridlines: Sequence[Gridline],
    rectangle: EnclosingRectangle | None,
    origin: Array,
) -> tuple[WallLine, ...]:
    """The lines of a plan (local metres) with its gridlines.

    A gridline that lies on a wall line adds its name there and no stakes. One that
    crosses the building counts from where it leaves the enclosing rectangle.

    Raises CoincidentPoints for a gridline without length.
    """
    result = list(lines)
    for grid in gridlines:
        ends = checked.points(f"gridline {grid.name}", [grid.start, grid.end]) - origin
        if float(np.hypot(*(ends[1] - ends[0]))) < SHORTEST_M:
            raise CoincidentPoints(f"Gridline {grid.name} has no length.")
        on = next((i for i, w in enumerate(result) if _same(w, ends)), None)
        if on is not None:
            also = (*result[on].also, grid.name)
            result[on] = dataclasses.replace(result[on], also=also)
            continue
        if rectangle is not None:
            ends = _clipped(ends, rectangle)
        start, end = _place(ends[0]), _place(ends[1])
        result.append(
            WallLine(grid.name, LineKind.GRIDLINE, start, end, ((start, end),), faces=0)
        )
    return tuple(result)


def _same(line: WallLine, ends: Array) -> bool:
    if line.arc is not None:
        return False
    a, b = np.asarray(line.start), np.asarray(line.end)
    u = (b - a) / line.length_m
    v = (ends[1] - ends[0]) / np.hypot(*(ends[1] - ends[0]))
    off = np.abs((ends - a) @ np.array([u[1], -u[0]]))
    parallel = abs(float(u[0] * v[1] - u[1] * v[0])) < SAME_DIRECTION
    return parallel and float(off.max()) <= SAME_LINE_M


def _clipped(ends: Array, rectangle: EnclosingRectangle) -> Array:
    """The stretch of a gridline's whole line inside the rectangle, if it crosses it."""
    s, c = math.sin(rectangle.azimuth_rad), math.cos(rectangle.azimuth_rad)
    axes = np.array([[c, -s], [s, c]])
    half = np.array([rectangle.across_m, rectangle.along_m]) / 2
    step = ends[1] - ends[0]
    u = step / np.hypot(*step)
    speed, at = axes @ u, axes @ (ends[0] - np.asarray(rectangle.centre))
    low, high = -math.inf, math.inf
    for v, p, h in zip(speed.tolist(), at.tolist(), half.tolist(), strict=True):
        if abs(v) < 1e-9:
            if abs(p) > h:
                return ends
            continue
        t = sorted(((-h - p) / v, (h - p) / v))
        low, high = max(low, t[0]), min(high, t[1])
    if high - low < SHORTEST_M:
        return ends
    return np.stack([ends[0] + low * u, ends[0] + high * u])


def _place(p: Array) -> Place:
    return float(p[0]), float(p[1])
