"""Reading a footprint: a sound, counter-clockwise outline, or an error that says where.

What is harmless (a repeated closing corner, a doubled corner, clockwise order) is put
right and noted; what would plan stakes for a building that is not there is refused.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import shapely
from numpy.typing import ArrayLike
from shapely.geometry import Polygon

from geometry import checked
from geometry.checked import Array
from geometry.errors import BadOutline, WrongShape
from geometry.layout.arcs import Arc, arc, chords_needed
from geometry.layout.drawn_curves import curves_in

SHORTEST_EDGE_M = 1e-3
"""A millimetre: shorter is a doubled corner of a drawing, not a wall."""

LARGEST_EXTENT_M = 1e5
SMALLEST_AREA_M2 = 1e-2


@dataclass(frozen=True, slots=True)
class Outline:
    """A footprint in local metres: add `origin` for the plane coordinates.

    `corners` run counter-clockwise (building on the left), without the closing one;
    `arcs[i]` is the curved wall that leaves corner i, or None for a straight one.
    `courtyards` run clockwise, so the building is on their left too.
    `polygon` is the shapely polygon with arcs as chords. `notes` are sentences.
    """

    origin: tuple[float, float]
    corners: Array
    arcs: tuple[Arc | None, ...]
    courtyards: tuple[Array, ...]
    polygon: Any
    area_m2: float
    perimeter_m: float
    notes: tuple[str, ...]

    @property
    def is_curved(self) -> bool:
        return any(a is not None for a in self.arcs)

    def straight_edges(self) -> Array:
        """Straight walls, courtyards' after the outer ones: (n, 2, 2) local metres."""
        ring = np.stack([self.corners, np.roll(self.corners, -1, axis=0)], axis=1)
        kept = [ring[[a is None for a in self.arcs]]]
        for yard in self.courtyards:
            kept.append(np.stack([yard, np.roll(yard, -1, axis=0)], axis=1))
        return np.concatenate(kept)


def read_outline(
    footprint: ArrayLike,
    *,
    bulges: ArrayLike | None = None,
    courtyards: Sequence[ArrayLike] = (),
    chord_tolerance_m: float = 0.02,
) -> Outline:
    """A footprint (n, 2; E, N metres) as a sound outline.

    `bulges` (n,) makes edge i curved where it is not zero. Runs of short chords that
    lie on one circle, as a drawing exports a curve, are read as one curved wall.

    Raises WrongShape, NotFinite, OutOfRange for bad numbers, BadOutline for fewer than
    three corners, no area, an outline that crosses or touches itself, or a courtyard
    that is not inside.

    >>> o = read_outline([(0, 0), (0, 18), (24, 18), (24, 0), (0, 0)])
    >>> o.area_m2, len(o.corners), o.notes
    (432.0, 4, ('The footprint repeats its first corner at the end; read once.',))
    """
    tolerance = checked.positive("chord tolerance", chord_tolerance_m)
    raw = checked.points("footprint", footprint)
    if len(raw) == 0:
        raise BadOutline("The footprint has no corners.", do="Give at least three.")
    bend = _bulges(raw, bulges)
    origin = np.round(raw.mean(axis=0))
    ring, bend, notes = _tidy("footprint", raw - origin, bend)
    ring, bend = _counter_clockwise(ring, bend)
    ring, arcs, read = curves_in(ring, _arcs(ring, bend))
    yards = []
    for i, yard in enumerate(courtyards):
        name = f"courtyard {i + 1}"
        cleaned, _, more = _tidy(name, checked.points(name, yard) - origin, None)
        yards.append(_counter_clockwise(cleaned, None)[0][::-1].copy())
        notes += more
    polygon = _polygon(ring, arcs, yards, tolerance, origin)
    return Outline(
        origin=(float(origin[0]), float(origin[1])),
        corners=ring,
        arcs=arcs,
        courtyards=tuple(yards),
        polygon=polygon,
        area_m2=float(polygon.area),
        perimeter_m=float(polygon.length),
        notes=tuple(notes) + read,
    )


def _bulges(raw: Array, bulges: ArrayLike | None) -> Array | None:
    if bulges is None:
        return None
    bend = checked.numbers("bulges", bulges)
    if len(bend) != len(raw):
        raise WrongShape(
            "There must be one bulge per corner of the footprint.",
            where=f"There are {len(raw)} corners and {len(bend)} bulges.",
            do="Give 0 for each straight wall.",
        )
    return bend


def _tidy(
    name: str, ring: Array, bend: Array | None
) -> tuple[Array, Array | None, list[str]]:
    """Drop the closing corner and doubled ones; say what was dropped."""
    notes = []
    doubled = np.hypot(*(np.roll(ring, -1, axis=0) - ring).T) < SHORTEST_EDGE_M
    if len(ring) > 1 and doubled[-1]:
        notes.append(f"The {name} repeats its first corner at the end; read once.")
    count = int(doubled[:-1].sum())
    if count:
        where = ", ".join(str(i + 2) for i in np.flatnonzero(doubled[:-1]))
        notes.append(
            f"The {name} has {count} doubled corner{'s' * (count > 1)} "
            f"(number {where}); read once."
        )
    keep = ~doubled
    ring = ring[keep]
    if len(ring) < 2 or (len(ring) < 3 and bend is None):
        raise BadOutline(
            f"The {name} needs at least three different corners.",
            where=f"It has {len(ring)}.",
            do="Give the corners in order round the building.",
        )
    if float(np.ptp(ring, axis=0).max()) > LARGEST_EXTENT_M:
        raise BadOutline(
            f"The {name} is more than {LARGEST_EXTENT_M / 1000:g} km across.",
            do="Check for a corner with swapped or missing coordinates.",
        )
    return ring, None if bend is None else bend[keep], notes


def _counter_clockwise(ring: Array, bend: Array | None) -> tuple[Array, Array | None]:
    x, y = ring.T
    area = float(np.dot(x, np.roll(y, -1)) - np.dot(np.roll(x, -1), y)) / 2
    if bend is not None:
        lens = np.hypot(*(np.roll(ring, -1, axis=0) - ring).T)
        half = 2 * np.arctan(bend)
        radius = lens * (1 + bend**2) / (4 * np.where(bend == 0, 1.0, bend))
        area += float(
            np.where(bend == 0, 0.0, radius**2 * (half - np.sin(2 * half) / 2)).sum()
        )
    if area > 0:
        return ring, bend
    back = ring[::-1].copy()
    return back, None if bend is None else -np.roll(bend[::-1], -1)


def _arcs(ring: Array, bend: Array | None) -> tuple[Arc | None, ...]:
    if bend is None:
        return (None,) * len(ring)
    nexts = np.roll(ring, -1, axis=0)
    return tuple(
        arc((p[0], p[1]), (q[0], q[1]), float(b)) if b else None
        for p, q, b in zip(ring, nexts, bend, strict=True)
    )


def _polygon(
    ring: Array,
    arcs: tuple[Arc | None, ...],
    yards: list[Array],
    tolerance: float,
    origin: Array,
) -> Any:
    pieces = [
        p[None, :] if a is None else a.points(chords_needed(a, tolerance))[:-1]
        for p, a in zip(ring, arcs, strict=True)
    ]
    outer = np.concatenate(pieces)
    polygon = Polygon(outer)
    if not polygon.is_valid or polygon.area < SMALLEST_AREA_M2:
        raise _crossed(outer, origin)
    for i, yard in enumerate(yards):
        _check_yard(polygon, yards, i, Polygon(yard))
    return Polygon(outer, yards) if yards else polygon


def _check_yard(outer: Any, yards: list[Array], i: int, yard: Any) -> None:
    if not yard.is_valid or not outer.contains(yard):
        raise BadOutline(
            f"Courtyard {i + 1} crosses itself or is not inside the footprint.",
            do="Check its corners and their order.",
        )
    if any(Polygon(other).intersects(yard) for other in yards[:i]):
        raise BadOutline(f"Courtyard {i + 1} overlaps another courtyard.")


def _crossed(ring: Array, origin: Array) -> BadOutline:
    """The error for an outline that is none, saying where its walls meet."""
    order = "Check the order of the corners and look for a mistyped coordinate."
    if shapely.MultiPoint(ring).convex_hull.area < SMALLEST_AREA_M2:
        return BadOutline("The footprint has no area.", do=order)
    walls = shapely.linestrings(np.stack([ring, np.roll(ring, -1, axis=0)], axis=1))
    first, second = shapely.STRtree(walls).query(walls, predicate="intersects")
    count = len(ring)
    for i, j in zip(first.tolist(), second.tolist(), strict=True):
        if i >= j:
            continue
        common = shapely.intersection(walls[i], walls[j])
        neighbours = j == i + 1 or (i == 0 and j == count - 1)
        if neighbours and common.length == 0:
            continue
        e, n = shapely.get_coordinates(common)[0] + origin
        return BadOutline(
            "The footprint crosses or touches itself.",
            where=f"Two walls meet near E {e:.3f}, N {n:.3f} where they should not.",
            do=order,
        )
    return BadOutline("The footprint has no area.", do=order)
