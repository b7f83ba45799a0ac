"""An alignment: elements strung together from a start point and an azimuth.

Distances run along it from the start ("true distance"); what the stationing calls
them is another question (see equations). Coordinates are kept about a local origin
so that state-plane sizes cost no digits.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.alignment.elements import Element
from geometry.checked import Array
from geometry.curves.clothoid import path
from geometry.errors import EmptyInput, OutOfRange

MOST_TURN_RAD = 400.0
"""More turning than any line on the ground has; beyond it the input is wrong."""


@dataclass(frozen=True, slots=True, eq=False)
class Alignment:
    """Elements with where each begins. Arrays have one row per element.

    `starts` (n, 2) are E, N in metres about `origin` (2,); `azimuths_rad` (n,) are
    the directions there; `distances_m` (n + 1,) run along the line and end with its
    end. `end` (2,) is about the origin too.
    """

    elements: tuple[Element, ...]
    origin: Array
    distances_m: Array
    starts: Array
    azimuths_rad: Array
    end: Array
    end_azimuth_rad: float

    @property
    def start_m(self) -> float:
        """Distance along at the start."""
        return float(self.distances_m[0])

    @property
    def end_m(self) -> float:
        """Distance along at the end."""
        return float(self.distances_m[-1])


def alignment(
    start: ArrayLike,
    azimuth_rad: float,
    elements: Sequence[Element],
    *,
    start_m: float = 0.0,
) -> Alignment:
    """The alignment that leaves `start` (E, N; metres) in a direction.

    `start_m` is the true distance given to the start.

    >>> from geometry.alignment.elements import arc, straight
    >>> line = alignment((0.0, 0.0), 0.0, [straight(100.0), arc(math.pi * 50, 100.0)])
    >>> (line.origin + line.end).round(6).tolist()
    [100.0, 200.0]

    Raises EmptyInput without elements, OutOfRange when one turns without end.
    """
    if not elements:
        raise EmptyInput("An alignment needs at least one element.")
    origin = checked.point("The start", start)
    azimuth = checked.number("The azimuth", azimuth_rad)
    place, places, azimuths = np.zeros(2), [], []
    distances = [checked.number("The start distance", start_m)]
    for number, element in enumerate(elements, start=1):
        azimuth += element.bend_rad
        places.append(place)
        azimuths.append(azimuth)
        step, turn = _step(element, azimuth, number)
        place, azimuth = place + step, azimuth + turn
        distances.append(distances[-1] + element.length_m)
    return Alignment(
        elements=tuple(elements),
        origin=origin,
        distances_m=np.array(distances),
        starts=np.array(places),
        azimuths_rad=np.array(azimuths),
        end=place,
        end_azimuth_rad=azimuth,
    )


def _step(element: Element, azimuth: float, number: int) -> tuple[Array, float]:
    length = checked.positive(f"The length of element {number}", element.length_m)
    sharpest = max(abs(element.curvature_start), abs(element.curvature_end))
    if sharpest * length > MOST_TURN_RAD:
        raise OutOfRange(
            "An element turns round and round without end.",
            where=f"It is element {number}.",
            do="Check its radius and length, and their unit.",
        )
    p = path(element.curvature_start, element.curvature_end, length, length)
    return turned(azimuth, p.along_m, p.right_m), float(p.turn_rad)


def turned(azimuth_rad: ArrayLike, along_m: ArrayLike, right_m: ArrayLike) -> Array:
    """Along and right of a direction, as E, N (..., 2)."""
    sine, cosine = np.sin(azimuth_rad), np.cos(azimuth_rad)
    along, right = np.asarray(along_m), np.asarray(right_m)
    return np.stack(
        [sine * along + cosine * right, cosine * along - sine * right], axis=-1
    )


def total_turn_rad(line: Alignment) -> float:
    """How far the alignment turns from start to end, signed, right positive."""
    return float(line.end_azimuth_rad - line.azimuths_rad[0])


def sharpest_radius_m(line: Alignment) -> float:
    """The smallest radius anywhere on the line; infinite for straights alone."""
    bends = [max(abs(e.curvature_start), abs(e.curvature_end)) for e in line.elements]
    return 1.0 / max(bends) if max(bends) else math.inf
