"""Wall lines: the edges of an outline that one string would serve, merged.

Two edges are one line only when both tests hold: directions equal and both ends near
the line. Angle alone would merge parallel walls, distance alone short skew ones.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from geometry.checked import Array
from geometry.layout.arcs import Arc
from geometry.layout.outline import Outline

SAME_DIRECTION = 1e-3
SAME_LINE_M = 0.020

Place = tuple[float, float]


class LineKind(StrEnum):
    """What a line is drawn for."""

    WALL = "wall"
    CURVED_WALL = "curved wall"
    GRIDLINE = "gridline"


@dataclass(frozen=True, slots=True)
class WallLine:
    """One line that stakes hold, from its first to its last wall point (E, N).

    `pieces` are the walls on it (a string may pass open ground between them);
    `faces` says on which side the building's outside lies, +1 right, -1 left, 0 both
    or none; `out_of_line_m` is how far the walls merged here lie from the line.
    `also` names gridlines that lie on it. Curved walls carry their arc.
    """

    id: str
    kind: LineKind
    start: Place
    end: Place
    pieces: tuple[tuple[Place, Place], ...]
    faces: int = 1
    out_of_line_m: float = 0.0
    also: tuple[str, ...] = ()
    arc: Arc | None = None

    @property
    def length_m(self) -> float:
        if self.arc is not None:
            return self.arc.length_m
        return math.hypot(self.end[0] - self.start[0], self.end[1] - self.start[1])

    @property
    def azimuth_rad(self) -> float:
        """From start to end, in [0, 2 pi)."""
        de, dn = self.end[0] - self.start[0], self.end[1] - self.start[1]
        return math.atan2(de, dn) % (2 * math.pi)


def wall_lines(outline: Outline) -> tuple[WallLine, ...]:
    """The wall lines of an outline in local metres, W1.. straight and C1.. curved.

    Lines are numbered in the order of their first wall round the outline. They run
    as the outline does, so the outside is to the right.

    >>> from geometry.layout.outline import read_outline
    >>> rows = [(0, 0), (24, 0), (24, 9), (15, 9), (15, 18), (0, 18)]
    >>> [line.id for line in wall_lines(read_outline(rows))]
    ['W1', 'W2', 'W3', 'W4', 'W5', 'W6']
    """
    edges = outline.straight_edges()
    groups = sorted(_groups(edges), key=min)
    straight = [_merged(f"W{i + 1}", edges[g]) for i, g in enumerate(groups)]
    arcs = [a for a in outline.arcs if a is not None]
    curved = [_curved(f"C{i + 1}", a) for i, a in enumerate(arcs)]
    return tuple(straight + curved)


def _groups(edges: Array) -> list[list[int]]:
    """Edges gathered round the longest ones; a chain of short ones cannot drift."""
    if not len(edges):
        return []
    step = edges[:, 1] - edges[:, 0]
    length = np.hypot(step[:, 0], step[:, 1])
    unit = step / length[:, None]
    left = np.ones(len(edges), dtype=bool)
    groups = []
    for seed in np.argsort(-length, kind="stable"):
        if not left[seed]:
            continue
        u = unit[seed]
        along = np.abs(u[0] * unit[:, 1] - u[1] * unit[:, 0]) < SAME_DIRECTION
        arm = edges - edges[seed, 0]
        off = np.abs(u[0] * arm[..., 1] - u[1] * arm[..., 0]).max(axis=1)
        mine = left & along & (off <= SAME_LINE_M)
        mine[seed] = True
        groups.append([int(i) for i in np.flatnonzero(mine)])
        left &= ~mine
    return groups


def _merged(name: str, edges: Array) -> WallLine:
    """One line through its edges: exact for one edge, fitted by length for more."""
    step = edges[:, 1] - edges[:, 0]
    length = np.hypot(step[:, 0], step[:, 1])
    first = step[0] / length[0]
    if len(edges) == 1:
        centre, unit = edges[0, 0], first
    else:
        centre, unit = _fitted(edges, length, first)
    along = (edges - centre) @ unit
    off = (edges - centre) @ np.array([unit[1], -unit[0]])
    low, high = float(along.min()), float(along.max())
    senses = {1 if d > 0 else -1 for d in step @ unit}
    ends = [(_place(a), _place(b)) for a, b in edges]
    single = len(edges) == 1
    return WallLine(
        id=name,
        kind=LineKind.WALL,
        start=ends[0][0] if single else _place(centre + low * unit),
        end=ends[0][1] if single else _place(centre + high * unit),
        pieces=tuple(ends),
        faces=0 if len(senses) > 1 else senses.pop(),
        out_of_line_m=0.0 if single else float(np.abs(off).max()),
    )


def _fitted(edges: Array, length: Array, first: Array) -> tuple[Array, Array]:
    points = edges.reshape(-1, 2)
    weight = np.repeat(length, 2)
    centre = (points * weight[:, None]).sum(axis=0) / weight.sum()
    arm = points - centre
    spread = (arm * weight[:, None]).T @ arm
    unit = np.linalg.eigh(spread)[1][:, 1]
    return centre, unit if float(unit @ first) > 0 else -unit


def _curved(name: str, a: Arc) -> WallLine:
    return WallLine(name, LineKind.CURVED_WALL, a.start, a.end, (), arc=a)


def _place(p: Array) -> Place:
    return float(p[0]), float(p[1])
