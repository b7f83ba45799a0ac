"""From local metres back to plane coordinates, for what a plan shows."""

from __future__ import annotations

import dataclasses

import numpy as np
import shapely

from geometry.checked import Array
from geometry.layout.arcs import Arc
from geometry.layout.direction import EnclosingRectangle
from geometry.layout.excavation import Excavation
from geometry.layout.lines import Place, WallLine

Origin = tuple[float, float]


def place(p: Place, origin: Origin) -> Place:
    """One point in plane coordinates."""
    return p[0] + origin[0], p[1] + origin[1]


def rectangle(r: EnclosingRectangle, origin: Origin) -> EnclosingRectangle:
    """An enclosing rectangle in plane coordinates."""
    return dataclasses.replace(r, corners=tuple(place(p, origin) for p in r.corners))


def line(w: WallLine, origin: Origin) -> WallLine:
    """A wall line in plane coordinates, arc and pieces with it."""
    return dataclasses.replace(
        w,
        start=place(w.start, origin),
        end=place(w.end, origin),
        pieces=tuple((place(a, origin), place(b, origin)) for a, b in w.pieces),
        arc=None if w.arc is None else _arc(w.arc, origin),
    )


def _arc(a: Arc, origin: Origin) -> Arc:
    return dataclasses.replace(
        a,
        start=place(a.start, origin),
        end=place(a.end, origin),
        centre=place(a.centre, origin),
    )


def excavation(x: Excavation, origin: Origin) -> Excavation:
    """An excavation limit in plane coordinates."""
    by = np.asarray(origin)
    return dataclasses.replace(
        x,
        limit=x.limit + by,
        polygon=shapely.transform(x.polygon, lambda xy: xy + by),
    )


def ring(points: Array, origin: Origin) -> Array:
    """A ring in plane coordinates."""
    moved: Array = points + np.asarray(origin)
    return moved
