"""Honest failure: which points nothing holds, and which measurement would hold them.

When the normal matrix is singular its null space is a set of motions that no
measurement notices. The points that move are named; then measurements are tried one
after another, and the one that resists the remaining motions most is proposed, until
none is left.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import scipy.sparse
from scipy.sparse import csgraph

from geometry.adjust.height import HeightModel
from geometry.adjust.nullspace import free_motions
from geometry.adjust.plane import PlaneModel
from geometry.adjust.rows import Ints, normal
from geometry.checked import Array
from geometry.errors import Singular

MOVES = 1e-5
"""Of the largest movement; smaller is rounding."""

TRIED_NEIGHBOURS = 8


@dataclass(frozen=True, slots=True)
class Loose:
    """A point that can move: along one azimuth (radians), or any way when None."""

    point: str
    azimuth_rad: float | None


@dataclass(frozen=True, slots=True)
class Missing:
    """A measurement that would help: kind and the points it needs.

    `kind` is distance (from, to), angle (station, backsight, foresight), azimuth
    (from, to), position (point) or levels (from, to).
    """

    kind: str
    points: tuple[str, ...]

    def __str__(self) -> str:
        p = self.points
        if self.kind == "angle":
            return f"an angle at {p[0]} from {p[1]} to {p[2]}"
        if self.kind == "position":
            return f"a known position of {p[0]}"
        if self.kind == "height":
            return f"a known height of {p[0]}"
        words = {"distance": "a distance", "azimuth": "an azimuth"}
        return f"{words.get(self.kind, self.kind)} from {p[0]} to {p[1]}"


class Undetermined(Singular):
    """The measurements leave points free; `loose` and `missing` say which and what."""

    def __init__(self, loose: tuple[Loose, ...], missing: tuple[Missing, ...]) -> None:
        self.loose, self.missing = loose, missing
        super().__init__(
            "The measurements do not determine the network.",
            where=_where(loose),
            do=_do(missing),
        )


def undetermined_levels(model: HeightModel) -> Undetermined:
    """Which benchmarks hang together without any known height, and the run to add."""
    count = len(model.names)
    links = scipy.sparse.coo_matrix(
        (np.ones(len(model.first)), (model.first, model.second)), shape=(count, count)
    )
    parts, label = csgraph.connected_components(links, directed=False)
    known = np.zeros(parts, dtype=np.bool_)
    known[label[model.columns < 0]] = True
    for group in model.known:
        known[label[group.at]] = True
    anchor = np.flatnonzero(known[label])
    missing = []
    for part in np.flatnonzero(~known):
        first = model.names[int(np.argmax(label == part))]
        if len(anchor):
            missing.append(Missing("levels", (model.names[int(anchor[0])], first)))
        else:
            missing.append(Missing("height", (first,)))
            anchor = np.flatnonzero(label == part)
    loose = np.flatnonzero(~known[label])
    return Undetermined(
        tuple(Loose(model.names[i], None) for i in loose), tuple(missing)
    )


def undetermined_plane(
    model: PlaneModel, unknowns: Array, *, free: bool = False
) -> Undetermined:
    """Which points can move, which way, and the measurements that would stop them.

    In a `free` network points are loose against the others, so that no azimuth of
    their movement and no position can be given, only distances and angles.
    """
    rows = model.rows(unknowns)
    matrix, _ = normal(rows, model.count, np.ones(len(rows.misclosure)))
    basis = free_motions(matrix, model.nodes)
    positions = model.positions(unknowns)
    motion = np.zeros((*positions.shape, basis.shape[1]))
    used = model.columns >= 0
    motion[used] = basis[model.columns[used]]
    motion = _orthonormal(motion)
    loose = _loose(model.names, motion)
    if free:
        loose = tuple(Loose(one.point, None) for one in loose)
    return Undetermined(loose, _missing(model.names, positions, motion, free))


def _orthonormal(motion: Array) -> Array:
    flat = motion.reshape(-1, motion.shape[2])
    u, s, _ = np.linalg.svd(flat, full_matrices=False)
    kept = u[:, s > 1e-9 * max(float(s.max(initial=0.0)), 1e-300)]
    result: Array = kept.reshape(*motion.shape[:2], -1)
    return result


def _loose(names: tuple[str, ...], motion: Array) -> tuple[Loose, ...]:
    u, s, _ = np.linalg.svd(motion, full_matrices=False)
    largest = float(s.max(initial=0.0))
    found = []
    for i in np.flatnonzero(s[:, 0] > MOVES * largest):
        one_way = len(s[i]) < 2 or s[i, 1] <= MOVES * s[i, 0]
        azimuth = math.atan2(u[i, 0, 0], u[i, 1, 0]) % math.pi if one_way else None
        found.append(Loose(names[i], azimuth))
    return tuple(found)


def _missing(
    names: tuple[str, ...], positions: Array, motion: Array, free: bool
) -> tuple[Missing, ...]:
    size = np.sqrt((motion**2).sum(axis=(1, 2)))
    loose = np.flatnonzero(size > MOVES * size.max(initial=0.0))
    fixed = np.flatnonzero(size <= MOVES * size.max(initial=0.0))
    tried = _candidates(positions, loose, fixed)
    tried = [one for one in tried if not (free and one[0] in ("position", "azimuth"))]
    kinds = [Missing(kind, tuple(names[i] for i in at)) for kind, at, _ in tried]
    effect = np.zeros((len(tried), motion.shape[2]))
    for k, (_, at, row) in enumerate(tried):
        effect[k] = np.einsum("pa,pad->d", row, motion[list(at)])
    picked: list[Missing] = []
    while effect.size and len(picked) < 6:
        strength = np.sqrt((effect**2).sum(axis=1))
        best = int(np.argmax(strength))
        if strength[best] < 1e-9:
            break
        away = effect[best] / strength[best]
        effect = effect - np.outer(effect @ away, away)
        if kinds[best] not in picked:
            picked.append(kinds[best])
        if float(np.abs(effect).max()) < 1e-7 * strength[best]:
            break
    return tuple(picked)


Candidate = tuple[str, tuple[int, ...], Array]


def _candidates(positions: Array, loose: Ints, fixed: Ints) -> list[Candidate]:
    """Measurements to try: to near fixed points, or between loose ones, or a position.

    Each with its row over its own points, weighted so that a distance is preferred
    to an angle, and both to a position where some point is fixed.
    """
    tried: list[Candidate] = []
    for p in (int(i) for i in loose[:60]):
        for q in _nearest(positions, p, fixed):
            tried.extend(_sights(positions, q, p, fixed, 1.0))
        for q in _nearest(positions, p, loose[:60]):
            tried.extend(_sights(positions, q, p, fixed, 0.3))
        share = 0.05 if len(fixed) else 0.5
        axes = (share * np.eye(2)[axis : axis + 1] for axis in (0, 1))
        tried.extend(("position", (p,), axis) for axis in axes)
    return tried


def _sights(
    positions: Array, q: int, p: int, fixed: Ints, share: float
) -> list[Candidate]:
    """What could be measured at q to p; an angle needs a backsight that stands."""
    tried: list[Candidate] = [("distance", (q, p), share * _distance(positions, q, p))]
    turn = 0.9 * share * _turn(positions, q, p)
    backsights = [b for b in _nearest(positions, q, fixed) if b not in (p, q)]
    if backsights:
        b = backsights[0]
        back = 0.9 * share * _turn(positions, q, b)
        row = np.vstack([turn[0] - back[0], -back[1], turn[1]])
        tried.append(("angle", (q, b, p), row))
        return tried
    tried.append(("azimuth", (q, p), turn))
    others = [b for b in _nearest(positions, q, np.arange(len(positions))) if b != p]
    for b in others[:3]:
        back = 0.2 * share * _turn(positions, q, b)
        row = np.vstack([turn[0] * 0.2 / 0.9 - back[0], -back[1], turn[1] * 0.2 / 0.9])
        tried.append(("angle", (q, b, p), row))
    return tried


def _nearest(positions: Array, p: int, among: Ints) -> list[int]:
    away = np.hypot(*(positions[among] - positions[p]).T)
    by_distance = np.argsort(away, kind="stable")
    near = [int(among[k]) for k in by_distance if away[k] > 1e-6]
    return near[:TRIED_NEIGHBOURS]


def _distance(positions: Array, q: int, p: int) -> Array:
    delta = positions[p] - positions[q]
    unit = delta / np.hypot(*delta)
    return np.vstack([-unit, unit])


def _turn(positions: Array, q: int, p: int) -> Array:
    """The same for the azimuth, as movement across the sight."""
    unit = _distance(positions, q, p)[1]
    right = np.array([unit[1], -unit[0]])
    return np.vstack([-right, right])


def _where(loose: tuple[Loose, ...]) -> str:
    if not loose:
        return "Some orientation is not determined."
    shown = [
        one.point
        if one.azimuth_rad is None
        else f"{one.point} (along azimuth {math.degrees(one.azimuth_rad):.0f}°)"
        for one in loose[:6]
    ]
    more = f" and {len(loose) - 6} more" if len(loose) > 6 else ""
    return "Free to move: " + ", ".join(shown) + more + "."


def _do(missing: tuple[Missing, ...]) -> str:
    if not missing:
        return "Add measurements to these points."
    return "Add " + ", and ".join(str(one) for one in missing) + "."
