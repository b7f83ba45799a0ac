"""The designed surface across a line: profile, lanes, shoulders, superelevation.

Each side is a row of strips going outward; a strip has a width and a slope that run
evenly between the distances where the plan gives them. Slopes are rise over run,
**positive up going outward** on either side, so a plain crown is negative on both
and superelevation to the right is positive left and negative right.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from geometry import checked
from geometry.alignment import Profile, grade_at
from geometry.checked import Array
from geometry.errors import EmptyInput, OutOfRange, WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class Strip:
    """Widths (n,) in metres and outward slopes (n,) at distances (n,) along."""

    distances_m: Array
    widths_m: Array
    slopes: Array


def strip(width_m: float, slope: float) -> Strip:
    """A strip of one width and one slope throughout.

    >>> strip(3.6, -0.02).slopes.tolist()
    [-0.02]
    """
    return strip_table([(0.0, width_m, slope)])


def strip_table(rows: ArrayLike) -> Strip:
    """A strip from rows of distance along, width, outward slope; shape (n, 3).

    Between rows both run evenly; before the first and after the last they are held.

    Raises EmptyInput, WrongShape, NotFinite, or OutOfRange for distances out of
    order, a negative width, or a slope steeper than one to one.
    """
    table = np.atleast_2d(np.asarray(rows, dtype=np.float64))
    if not table.size:
        raise EmptyInput("A strip needs at least one row.")
    if table.ndim != 2 or table.shape[1] != 3:
        raise WrongShape("A strip's rows are distance, width and slope.")
    distances = checked.numbers("strip distances", table[:, 0])
    widths = checked.numbers("strip widths", table[:, 1])
    slopes = checked.numbers("strip slopes", table[:, 2])
    if (np.diff(distances) <= 0).any():
        raise OutOfRange("A strip's distances are not in order along the line.")
    if (widths < 0).any():
        raise OutOfRange("A strip has a negative width.")
    if (np.abs(slopes) > 1).any():
        raise OutOfRange(
            "A strip's slope is steeper than one to one.",
            do="Give rise over run: 0.02 for 2 %.",
        )
    return Strip(distances, widths, slopes)


@dataclass(frozen=True, slots=True)
class Roadway:
    """A profile with strips going outward from the line on the left and right."""

    profile: Profile
    left: tuple[Strip, ...]
    right: tuple[Strip, ...]


def roadway(profile: Profile, left: Sequence[Strip], right: Sequence[Strip]) -> Roadway:
    """The designed surface; a side without strips has no surface off the line."""
    return Roadway(profile, tuple(left), tuple(right))


@dataclass(frozen=True, slots=True, eq=False)
class Surface:
    """Design elevations (n,) in metres with what they come from.

    `cross_slope` (n,) is outward; `strip` (n,) counts from 0 at the line.
    `beyond_edge_m` (n,) is how far outside the last strip the point lies, 0 within:
    there the last slope was carried on and the surface is only an extension.
    `beyond_profile_m` (n,) is the same along the line, with its sign.
    """

    elevation_m: Array
    cross_slope: Array
    strip: NDArray[np.int64]
    beyond_edge_m: Array
    beyond_profile_m: Array


def surface_at(
    road: Roadway, distance_m: ArrayLike, offset_m: ArrayLike, *, below_m: float = 0.0
) -> Surface:
    """Design elevation at distances (n,) along and offsets (n,), right positive.

    `below_m` goes down to a lower layer (subgrade under a thickness).

    >>> from geometry.alignment import profile, pvi
    >>> grade = profile([pvi(0, 100.0), pvi(100, 102.0)])
    >>> road = roadway(grade, [strip(3.5, -0.02)], [strip(3.5, -0.02)])
    >>> surface_at(road, [50.0], [3.0]).elevation_m.round(3).tolist()
    [100.94]

    Raises WrongShape when there is not one offset per distance, or NotFinite.
    """
    distance = checked.numbers("distances", distance_m)
    offset = checked.numbers("offsets", offset_m)
    if distance.shape != offset.shape:
        raise WrongShape(
            "There must be one offset for each distance.",
            where=f"{distance.size} distances, {offset.size} offsets.",
        )
    grade = grade_at(road.profile, distance)
    rise, slope, number, beyond = (np.zeros(distance.size) for _ in range(4))
    for strips, here in ((road.left, offset < 0), (road.right, offset >= 0)):
        side = _side(strips, distance[here], np.abs(offset[here]))
        rise[here], slope[here], number[here], beyond[here] = side
    z = grade.elevation_m + rise - checked.number("below_m", below_m)
    return Surface(z, slope, number.astype(np.int64), beyond, grade.beyond_m)


def _side(strips: tuple[Strip, ...], distance: Array, out: Array) -> Array:
    """Rise, slope, strip number and distance beyond the edge; shape (4, n)."""
    rise, slope, number = np.zeros_like(out), np.zeros_like(out), np.zeros_like(out)
    left = out.copy()
    for i, one in enumerate(strips):
        width = np.interp(distance, one.distances_m, one.widths_m)
        fall = np.interp(distance, one.distances_m, one.slopes)
        last = i == len(strips) - 1
        run = np.where(left > 0, left if last else np.minimum(left, width), 0.0)
        here = (run > 0) | (i == 0)
        rise += run * fall
        slope, number = np.where(here, fall, slope), np.where(here, i, number)
        left = left - (width if last else run)
    return np.stack([rise, slope, number, np.maximum(left, 0.0)])


@dataclass(frozen=True, slots=True, eq=False)
class Breaks:
    """Points across the line where the slope changes: offsets, elevations (n,)."""

    offset_m: Array
    elevation_m: Array


def breaks_at(road: Roadway, distance_m: float, *, right: bool) -> Breaks:
    """The line and every strip's outer edge on one side, going outward; metres.

    >>> from geometry.alignment import profile, pvi
    >>> grade = profile([pvi(0, 100.0), pvi(100, 102.0)])
    >>> road = roadway(grade, [], [strip(3.5, -0.02), strip(1.5, -0.04)])
    >>> breaks_at(road, 50.0, right=True).elevation_m.round(3).tolist()
    [101.0, 100.93, 100.87]
    """
    at = checked.number("The distance", distance_m)
    strips = road.right if right else road.left
    widths = [float(np.interp(at, s.distances_m, s.widths_m)) for s in strips]
    slopes = [float(np.interp(at, s.distances_m, s.slopes)) for s in strips]
    out = np.concatenate([[0.0], np.cumsum(widths)])
    falls = np.cumsum([w * s for w, s in zip(widths, slopes, strict=True)])
    z = float(grade_at(road.profile, [at]).elevation_m[0])
    return Breaks(out if right else -out, z + np.concatenate([[0.0], falls]))
