"""Curves that a drawing gave as many short straight pieces, read as curved walls.

Twenty short walls would otherwise be twenty wall lines with two stakes each.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from geometry.checked import Array
from geometry.layout.arcs import Arc, arc

FEWEST_CHORDS = 4
LARGEST_TURN_RAD = math.radians(30.0)
SMALLEST_TURN_RAD = 1e-4
LARGEST_SAGITTA_M = 0.05
"""A piece that bows farther than this from the circle is a wall of its own."""
ON_CIRCLE_M = 0.005

Arcs = tuple[Arc | None, ...]
Flags = NDArray[np.bool_]


def curves_in(ring: Array, arcs: Arcs) -> tuple[Array, Arcs, tuple[str, ...]]:
    """The outline with every drawn curve replaced by one arc, and a note for each.

    `ring` is (n, 2) local metres, counter-clockwise; `arcs` has one entry per edge.
    A run that goes all the way round is split in two, as no arc ends where it starts.
    """
    runs = dict(_runs(ring, arcs))
    if not runs:
        return ring, arcs, ()
    count = len(ring)
    inside = {(i + k) % count for i, n in runs.items() for k in range(1, n)}
    kept = [i for i in range(count) if i not in inside]
    new_arcs: list[Arc | None] = []
    notes = []
    for i in kept:
        if i not in runs:
            new_arcs.append(arcs[i])
            continue
        read = _arc_through(_run(ring, i, runs[i]))
        new_arcs.append(read)
        notes.append(
            f"{runs[i]} short walls from corner {i + 1} on were read as one curved "
            f"wall that turns {math.degrees(abs(read.turn_rad)):.1f}°."
        )
    return ring[kept].copy(), tuple(new_arcs), tuple(notes)


def _runs(ring: Array, arcs: Arcs) -> list[tuple[int, int]]:
    """(first edge, number of edges) of each run of chords on one circle."""
    count = len(ring)
    if count <= FEWEST_CHORDS:
        return []
    turn = _turns(ring)
    soft = np.abs(turn) <= LARGEST_TURN_RAD
    soft &= np.abs(turn) >= SMALLEST_TURN_RAD
    if int(soft.sum()) < FEWEST_CHORDS - 1:
        return []
    straight = np.array([a is None for a in arcs])
    # begin at a real corner, so that the numbering cuts no run in two
    first = int(np.flatnonzero(~soft)[0]) if not soft.all() else 0
    runs, at = [], 0
    while at < count:
        i = (first + at) % count
        n = _longest(ring, turn, soft & straight, i, count - at)
        if n >= FEWEST_CHORDS and straight[i]:
            half = n // 2
            split = [(i, half), ((i + half) % count, n - half)]
            runs += split if n == count else [(i, n)]
        at += n
    return runs


def _turns(ring: Array) -> Array:
    """Turn at the corner where each edge begins, radians, left positive."""
    step = np.roll(ring, -1, axis=0) - ring
    prev = np.roll(step, 1, axis=0)
    cross = prev[:, 0] * step[:, 1] - prev[:, 1] * step[:, 0]
    return np.asarray(np.arctan2(cross, (prev * step).sum(axis=1)), dtype=np.float64)


def _longest(ring: Array, turn: Array, joins: Flags, first: int, most: int) -> int:
    """How many edges from `first` on lie on one circle; 1 when fewer than four do."""
    count = len(ring)
    sign = turn[(first + 1) % count]

    def follows(n: int) -> bool:
        i = (first + n) % count
        return bool(joins[i]) and turn[i] * sign > 0

    n = 1
    while n < min(most, FEWEST_CHORDS) and follows(n):
        n += 1
    if n < FEWEST_CHORDS or not _on_circle(_run(ring, first, n)):
        return 1
    while n < most and follows(n) and _on_circle(_run(ring, first, n + 1)):
        n += 1
    return n


def _run(ring: Array, first: int, n: int) -> Array:
    return ring[np.arange(first, first + n + 1) % len(ring)]


def _on_circle(p: Array) -> bool:
    centre, radius = _circle(p)
    if not math.isfinite(radius):
        return False
    off = np.abs(np.hypot(*(p - centre).T) - radius)
    sagitta = (np.hypot(*np.diff(p, axis=0).T) / 2) ** 2 / (2 * radius)
    return float(off.max()) <= ON_CIRCLE_M and float(sagitta.max()) <= LARGEST_SAGITTA_M


def _circle(p: Array) -> tuple[Array, float]:
    """Centre and radius of the circle through first, third-way and two-thirds points.

    Those three stay apart even when the run closes on itself.
    """
    a, b, c = p[0], p[(len(p) - 1) // 3], p[2 * (len(p) - 1) // 3]
    b, c = b - a, c - a
    det = 2 * float(b[0] * c[1] - b[1] * c[0])
    bb, cc = float(b @ b), float(c @ c)
    if abs(det) < 1e-9 * max(bb, cc):
        return a, math.inf
    u = np.array([c[1] * bb - b[1] * cc, b[0] * cc - c[0] * bb]) / det
    return a + u, float(np.hypot(*u))


def _arc_through(p: Array) -> Arc:
    """The arc from the first to the last point that turns as far as the run does."""
    arms = p - _circle(p)[0]
    cross = arms[:-1, 0] * arms[1:, 1] - arms[:-1, 1] * arms[1:, 0]
    dots = (arms[:-1] * arms[1:]).sum(axis=1)
    turn = float(np.arctan2(cross, dots).sum())
    start, end = (float(p[0, 0]), float(p[0, 1])), (float(p[-1, 0]), float(p[-1, 1]))
    return arc(start, end, math.tan(turn / 4))
