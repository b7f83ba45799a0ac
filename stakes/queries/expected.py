"""What the record expects to be measured between marks, and how sure that is.

Coordinates are planned or adopted ones, in metres, as (E, N). Each answer carries the
variance that comes from the marks themselves; what measuring adds is in `measuring`.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import ParamSpec, TypeVar

import numpy as np

from geometry.checked import Array
from geometry.cogo import angle_at, inverse, offsets_from_line
from geometry.errors import GeometryError
from stakes.models import Mark
from stakes.record import Refused

P = ParamSpec("P")
T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Expected:
    """A value the record computes, metres or radians, and its variance."""

    value: float
    variance: float = 0.0


def place(mark: Mark) -> Array:
    """Where a mark is, (E, N) in metres; Refused when the record does not know."""
    if mark.northing_m is None or mark.easting_m is None:
        raise Refused(
            f"The record holds no position for {mark.label}.",
            do="Choose another mark, or have its value adopted first.",
            field="mark",
            code="no position",
        )
    return np.array([mark.easting_m, mark.northing_m])


def height_nm(mark: Mark) -> int:
    """The elevation of a mark in whole nanometres; Refused when it has none."""
    if not mark.elevation_nm:
        raise Refused(
            f"The record holds no elevation for {mark.label}.",
            do="Choose another mark, or have its value adopted first.",
            field="mark",
            code="no elevation",
        )
    return int(mark.elevation_nm)


def covariance(mark: Mark) -> Array:
    """What is known of the mark's own position, (2, 2) in m², E first; else zero."""
    said = mark.covariance_mm2 or {}
    ee, en, nn = (float(said.get(name, 0)) for name in ("ee", "ne", "nn"))
    return np.array([[ee, en], [en, nn]]) * 1e-6


def height_variance(mark: Mark) -> float:
    """What is known of the mark's own elevation, in m²; else zero."""
    return float((mark.covariance_mm2 or {}).get("zz", 0)) * 1e-6


def distance(one: Mark, other: Mark) -> Expected:
    """The horizontal distance between two marks."""
    return distance_from(place(one), covariance(one), other)


def distance_from(start: Array, start_covariance: Array, mark: Mark) -> Expected:
    """The horizontal distance from a place to a mark."""
    end = place(mark)
    found = _asked(inverse, start, end)
    u = (end - start) / found.distance_m
    return Expected(
        found.distance_m, float(u @ (start_covariance + covariance(mark)) @ u)
    )


def angle(at: Mark, back: Mark, fore: Mark) -> Expected:
    """The angle at a mark, clockwise from one mark to another, in radians."""
    value = _asked(angle_at, place(at), place(back), place(fore))
    return Expected(value, _angle_variance(at, back, fore))


def offset(mark: Mark, start: Mark, end: Mark) -> Expected:
    """How far a mark stands right of the line from one mark to another."""
    a, b = place(start), place(end)
    found = _asked(offsets_from_line, [place(mark)], a, b)
    length = inverse(a, b).distance_m
    share = float(found.along_m[0]) / length
    u = (b - a) / length
    n = np.array([u[1], -u[0]])
    joint = (
        covariance(mark) + (1 - share) ** 2 * covariance(start)
    ) + share**2 * covariance(end)
    return Expected(float(found.right_m[0]), float(n @ joint @ n))


def _angle_variance(at: Mark, back: Mark, fore: Mark) -> float:
    total = 0.0
    pull = np.zeros(2)
    for mark, sign in ((back, -1.0), (fore, 1.0)):
        ray = place(mark) - place(at)
        gradient = sign * np.array([ray[1], -ray[0]]) / float(ray @ ray)
        total += float(gradient @ covariance(mark) @ gradient)
        pull -= gradient
    return total + float(pull @ covariance(at) @ pull)


def _asked(compute: Callable[P, T], *given: P.args, **more: P.kwargs) -> T:
    """Let geometry answer; its refusal becomes ours, with its three sentences."""
    try:
        return compute(*given, **more)
    except GeometryError as error:
        raise refused_by(error) from error


def refused_by(error: GeometryError, field: str = "") -> Refused:
    """A computation's refusal as the record says it."""
    return Refused(
        error.what, where=error.where, do=error.do, field=field, code="geometry"
    )


def nearest_leg(at: Mark, marks: Sequence[Mark]) -> float:
    """The shortest distance from a mark to any of the others, in metres."""
    start = place(at)
    return min(float(np.hypot(*(place(mark) - start))) for mark in marks)
