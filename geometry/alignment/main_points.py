"""The points a line is known by: where tangent, curve and spiral change.

PC and PT (tangent to curve and back), TS, SC, CS, ST with spirals, PCC and PRC
where curves join, AP at an angle point: the trade's own letters.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry.alignment.elements import Element
from geometry.alignment.line import Alignment
from geometry.checked import Array

_LETTER = {"straight": "T", "arc": "C", "spiral": "S"}


@dataclass(frozen=True, slots=True, eq=False)
class MainPoint:
    """A named point: distance along in metres, E, N, and the azimuth leaving it."""

    name: str
    distance_m: float
    point: Array
    azimuth_rad: float


def main_points(line: Alignment) -> tuple[MainPoint, ...]:
    """Start, every change of element, and end, in order.

    >>> from geometry.alignment import alignment, arc, straight
    >>> line = alignment((0, 0), 0.0, [straight(10), arc(10, 50), straight(10)])
    >>> [p.name for p in main_points(line)]
    ['start', 'PC', 'PT', 'end']
    """
    pairs = zip(line.elements[:-1], line.elements[1:], strict=True)
    names = ["start", *(_name(a, b) for a, b in pairs), "end"]
    places = np.vstack([line.starts, line.end]) + line.origin
    azimuths = [*line.azimuths_rad.tolist(), line.end_azimuth_rad]
    rows = zip(names, line.distances_m.tolist(), places, azimuths, strict=True)
    return tuple(MainPoint(*row) for row in rows)


def _name(before: Element, after: Element) -> str:
    if after.bend_rad:
        return "AP"
    letters = _LETTER[before.kind] + _LETTER[after.kind]
    if letters == "CC":
        same = before.curvature_end * after.curvature_start > 0
        return "PCC" if same else "PRC"
    return {"TC": "PC", "CT": "PT", "TT": "POT"}.get(letters, letters)
