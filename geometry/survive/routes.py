"""Which pairs of near marks could put each mark back, for a whole job at once.

Around every mark its nearest usable neighbours and the nearest control are looked at,
and every pair of them is tried: taped ties, in line, right-angle offset, and polar with
either of the two occupied. A pair counts when one of these is predicted within the
tolerance and not weak. Correlation between marks is left out here: it is advice.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.spatial import cKDTree

from geometry.checked import Array, Flags, Indices
from geometry.ellipse import FACTOR_95_2D
from geometry.precision import Obstacle, clear_lines
from geometry.survive.stand import Stand
from geometry.ways import Limits, pairs

CHUNK = 256
"""Marks worked at a time, with all their pairs, so that arrays stay in the cache."""


@dataclass(frozen=True, slots=True, eq=False)
class Routes:
    """`targets` (t,) indices of marks looked at. `near` (t, c) their neighbours, -1
    where there are fewer. `first`, `second` (p,) columns of each pair; `works` (t, p)
    whether it is a way; `checks` (t, c) whether the neighbour could check the mark."""

    targets: Indices
    near: Indices
    first: Indices
    second: Indices
    works: Flags
    checks: Flags


def routes(
    marks: Stand,
    *,
    targets: Indices | None = None,
    nearest: int = 12,
    control: int = 3,
    obstacles: tuple[Obstacle, ...] = (),
    limits: Limits | None = None,
) -> Routes:
    """Ways of two marks to put each of `targets` back (default: all but control).

    >>> from geometry.survive.stand import stand
    >>> square = stand([(0, 0), (10, 0), (10, 10), (0, 10)], 1e-6 * np.eye(2), 0.05)
    >>> int(routes(square).works.sum())
    12
    """
    if targets is None:
        targets = np.flatnonzero(~marks.control)
    near = neighbours(marks, targets, nearest, control)
    return routes_among(marks, targets, near, obstacles=obstacles, limits=limits)


def routes_among(
    marks: Stand,
    targets: Indices,
    near: Indices,
    *,
    obstacles: tuple[Obstacle, ...] = (),
    limits: Limits | None = None,
) -> Routes:
    """Ways of two of the given neighbours `near` (t, c), -1 where there is none."""
    limits = limits or Limits()
    first, second = np.triu_indices(near.shape[1], 1)
    works = np.zeros((len(targets), len(first)), dtype=bool)
    seen = _seen(marks, targets, near, obstacles)
    for start in range(0, len(targets), CHUNK):
        part = slice(start, start + CHUNK)
        works[part] = _works(
            marks, targets[part], near[part], seen[part], first, second, limits
        )
    return Routes(
        targets, near, first, second, works, _checks(marks, targets, near, seen)
    )


def neighbours(marks: Stand, targets: Indices, nearest: int, control: int) -> Indices:
    """Usable neighbours of each target, nearest first, then the nearest control."""
    columns = nearest + control
    found = np.full((len(targets), columns), -1)
    for pool, count, at in (
        (np.flatnonzero(marks.usable), nearest, 0),
        (np.flatnonzero(marks.usable & marks.control), control, nearest),
    ):
        if not len(pool) or not count or not len(targets):
            continue
        _, rows = cKDTree(marks.xy[pool]).query(
            marks.xy[targets], k=np.arange(1, count + 2)
        )
        rows = np.where(rows < len(pool), pool[np.minimum(rows, len(pool) - 1)], -1)
        # The target itself stands among its neighbours; move it to the end and drop it.
        itself = (rows == targets[:, None]) | (rows < 0)
        order = np.argsort(itself, axis=1, kind="stable")[:, :count]
        rows = np.where(itself, -1, rows)
        found[:, at : at + count] = np.take_along_axis(rows, order, axis=1)
    twice = (found[:, nearest:, None] == found[:, None, :nearest]).any(axis=2)
    found[:, nearest:][twice] = -1
    return found


def _seen(
    marks: Stand, targets: Indices, near: Indices, obstacles: tuple[Obstacle, ...]
) -> Flags:
    seen = near >= 0
    if obstacles and seen.any():
        rows, columns = np.nonzero(seen)
        seen[rows, columns] = clear_lines(
            marks.xy[targets[rows]], marks.xy[near[rows, columns]], obstacles
        )
    return seen


def _checks(marks: Stand, targets: Indices, near: Indices, seen: Flags) -> Flags:
    gap = marks.xy[near] - marks.xy[targets][:, None]
    away = np.hypot(gap[..., 0], gap[..., 1])
    tape, station = marks.tools.tape, marks.tools.total_station
    able = np.zeros(near.shape, dtype=bool)
    if tape is not None:
        able |= away <= tape.length_m
    if station is not None:
        reach = (away >= 1.5) & (away <= station.distance_m)
        able |= marks.occupiable[near] & reach
    return able & seen & (away > 0.05)


def _works(
    marks: Stand,
    targets: Indices,
    near: Indices,
    seen: Flags,
    first: Indices,
    second: Indices,
    limits: Limits,
) -> Flags:
    # Only pairs of two real neighbours are worked, flattened into one list.
    row, pair = np.nonzero((near[:, first] >= 0) & (near[:, second] >= 0))
    a, b = near[row, first[pair]], near[row, second[pair]]
    clear_a, clear_b = seen[row, first[pair]], seen[row, second[pair]]
    origin = marks.xy[targets[row]]
    gap_a, gap_b = marks.xy[a] - origin, marks.xy[b] - origin
    away_a, away_b = np.hypot(*gap_a.T), np.hypot(*gap_b.T)
    limit = (marks.tolerance[targets[row]] / FACTOR_95_2D) ** 2
    case = _Pairs(
        marks, a, b, gap_a, gap_b, away_a, away_b, clear_a, clear_b, limit, limits
    )
    works = np.zeros(len(row), dtype=bool)
    for way in (_ties, _right_angle, _in_line, _polar):
        left = np.flatnonzero(~works)
        works[left] = way(case.of(left))
    found = np.zeros((len(targets), len(first)), dtype=bool)
    found[row, pair] = works
    return found


@dataclass(frozen=True, slots=True, eq=False)
class _Pairs:
    """Pairs (m,) about their targets, which stand at the origin."""

    marks: Stand
    a: Indices
    b: Indices
    at_a: Array
    at_b: Array
    away_a: Array
    away_b: Array
    clear_a: Flags
    clear_b: Flags
    limit: Array
    limits: Limits

    def of(self, rows: Indices) -> _Pairs:
        """Some of the pairs."""
        return _Pairs(
            self.marks,
            self.a[rows],
            self.b[rows],
            self.at_a[rows],
            self.at_b[rows],
            self.away_a[rows],
            self.away_b[rows],
            self.clear_a[rows],
            self.clear_b[rows],
            self.limit[rows],
            self.limits,
        )

    def nearer_last(self) -> tuple[Array, Array, Array, Array, Flags]:
        """Farther mark, nearer mark, their covariances, and whether the nearer is
        clear."""
        swap = self.away_a < self.away_b
        far = np.where(swap[:, None], self.at_b, self.at_a)
        close = np.where(swap[:, None], self.at_a, self.at_b)
        own_far = self.marks.own[np.where(swap, self.b, self.a)]
        own_close = self.marks.own[np.where(swap, self.a, self.b)]
        return (
            far,
            close,
            own_far,
            own_close,
            np.where(swap, self.clear_a, self.clear_b),
        )


HERE = np.zeros(2)


def _ties(case: _Pairs) -> Flags:
    tape = case.marks.tools.tape
    if tape is None:
        return np.zeros(len(case.a), dtype=bool)
    own = case.marks.own
    square, sine = pairs.ties(
        HERE, case.at_a, case.at_b, own[case.a], own[case.b], tape
    )
    reach = np.maximum(case.away_a, case.away_b) <= tape.length_m
    fine: Flags = reach & case.clear_a & case.clear_b & (square <= case.limit)
    fine &= sine >= case.limits.weak_sine
    return fine


def _right_angle(case: _Pairs) -> Flags:
    tape, tool = case.marks.tools.tape, case.marks.tools.right_angle
    if tape is None or tool is None:
        return np.zeros(len(case.a), dtype=bool)
    far, close, own_far, own_close, clear = case.nearer_last()
    square, foot, offset = pairs.right_angle(
        HERE, close, far, own_close, own_far, tape, tool
    )
    base = np.hypot(*(far - close).T)
    fine: Flags = clear & (square <= case.limit) & (base > 0.3)
    fine &= np.abs(offset) <= case.limits.longest_offset_m
    fine &= (foot >= -case.limits.extension) & (np.abs(foot) * base <= tape.length_m)
    return fine


def _in_line(case: _Pairs) -> Flags:
    tape, string = case.marks.tools.tape, case.marks.tools.string
    if tape is None or string is None:
        return np.zeros(len(case.a), dtype=bool)
    far, close, own_far, own_close, clear = case.nearer_last()
    square, run, beside = pairs.in_line(
        HERE, far, close, own_far, own_close, tape, string
    )
    base = np.hypot(*(far - close).T)
    fine: Flags = clear & (square <= case.limit) & (base > 0.3)
    fine &= (beside <= case.limits.beside_m) & (run <= case.limits.extension)
    fine &= np.abs(run) * base <= tape.length_m
    fine &= np.maximum(1.0, 1.0 + run) * base <= string.length_m
    return fine


def _polar(case: _Pairs) -> Flags:
    station = case.marks.tools.total_station
    found = np.zeros(len(case.a), dtype=bool)
    if station is None:
        return found
    own, able = case.marks.own, case.marks.occupiable
    base = np.hypot(*(case.at_a - case.at_b).T)
    for s, b, at_s, at_b, away, clear in (
        (case.a, case.b, case.at_a, case.at_b, case.away_a, case.clear_a),
        (case.b, case.a, case.at_b, case.at_a, case.away_b, case.clear_b),
    ):
        fit = able[s] & clear & (away >= 1.5) & (away <= station.distance_m)
        # A backsight shorter than the foresight is a weak way, not one to count on.
        fit &= (base >= away) & (base <= station.distance_m) & ~found
        rows = np.flatnonzero(fit)
        square = pairs.polar(
            HERE, at_s[rows], at_b[rows], own[s[rows]], own[b[rows]], station
        )
        found[rows] = square <= case.limit[rows]
    return found
