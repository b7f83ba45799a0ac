"""The crossing of two strings, each pulled between two marks."""

from __future__ import annotations

import math
from itertools import combinations

import numpy as np

from geometry.checked import Array
from geometry.ways.draft import Draft, singular
from geometry.ways.scene import SHORTEST_BASE_M, Scene
from geometry.ways.way import Caution, Kind, Number

LINES = 8
"""Lines through the point that are combined: the surest across."""

MOST = 6


def string_crossings(scene: Scene) -> list[Draft]:
    """Two lines of two marks that pass through the point and cross there."""
    string = scene.tools.string
    near = _reachable(scene)
    if string is None or len(near) < 4:
        return []
    lines = _lines(scene, near)
    rows = [
        (one, two)
        for one, two in combinations(lines, 2)
        if not set(one[:2]) & set(two[:2])
    ]
    crossings = [
        (one, two, sine)
        for one, two in rows
        if (sine := _sine(scene, one, two)) >= scene.limits.flat_sine
    ]
    if not crossings:
        return [singular(Kind.STRINGS, "No two strings through it cross.")]
    crossings.sort(key=lambda x: (x[0][2] + x[1][2]) / x[2] ** 2)
    good = [c for c in crossings if _usable(scene, c)]
    bad = [c for c in crossings if not _usable(scene, c)]
    most = max(MOST, scene.limits.per_kind)
    return [_crossing(scene, one[:2], two[:2]) for one, two, _ in good[:most] + bad[:1]]


def _reachable(scene: Scene) -> list[int]:
    if scene.tools.string is None:
        return []
    near = np.flatnonzero(scene.away <= scene.tools.string.length_m)
    good = near[scene.usable[near]][: scene.limits.nearest]
    return sorted([*good.tolist(), *near[~scene.usable[near]][:3].tolist()])


def _lines(scene: Scene, near: list[int]) -> list[tuple[int, int, float]]:
    """(from, to, variance across) of lines that pass beside the point, surest first."""
    a, b = (np.array(x) for x in zip(*combinations(near, 2), strict=True))
    base = scene.xy[b] - scene.xy[a]
    length = np.maximum(np.hypot(*base.T), 1e-9)
    u = base / length[:, None]
    n = np.column_stack([u[:, 1], -u[:, 0]])
    gap = scene.place - scene.xy[a]
    share = np.sum(gap * u, axis=1) / length
    beside = np.abs(np.sum(gap * n, axis=1))
    own = scene.own()
    low, high = scene.limits.between
    fit = (beside <= scene.limits.beside_m) & (share >= low) & (share <= high)
    fit &= length > SHORTEST_BASE_M
    across = (1 - share) ** 2 * _across(own[a], n) + share**2 * _across(own[b], n)
    order = np.argsort(across, kind="stable")
    rows = [(int(a[i]), int(b[i]), float(across[i])) for i in order if fit[i]]
    # Lines with a mark that may not be used come after, so that they cannot crowd
    # out the others; they are kept to be named.
    rows.sort(key=lambda r: not (scene.usable[r[0]] and scene.usable[r[1]]))
    return rows[: LINES + 3]


def _crossing(scene: Scene, one: tuple[int, int], two: tuple[int, int]) -> Draft:
    string = scene.tools.string
    assert string is not None
    rows, parts = [], []
    numbers: list[Number] = []
    cautions: list[Caution] = []
    for a, b in (one, two):
        base = scene.xy[b] - scene.xy[a]
        length = math.hypot(*base)
        u = base / length
        n = np.array([u[1], -u[0]])
        gap = scene.place - scene.xy[a]
        share = float(gap @ u) / length
        rows.append(n)
        parts += [(a, (1 - share) * n), (b, share * n)]
        numbers += _numbers(scene, a, b, float(gap @ u), float(gap @ n), length)
        cautions += _cautions(scene, (a, b), share, length)
    back = np.linalg.inv(np.array(rows))
    jacobians = tuple(
        np.outer(back[:, i // 2], row) for i, (_, row) in enumerate(parts)
    )
    if abs(rows[0] @ np.array([rows[1][1], -rows[1][0]])) < scene.limits.weak_sine:
        cautions.append(Caution.WEAK_ANGLE)
    return Draft(
        Kind.STRINGS,
        tuple(mark for mark, _ in parts),
        jacobians,
        string.sd_m**2 * back @ back.T,
        tuple(numbers),
        tuple(dict.fromkeys(cautions)),
        8.0,
    )


def _numbers(
    scene: Scene, a: int, b: int, along: float, beside: float, length: float
) -> list[Number]:
    start, end = scene.marks[a].id, scene.marks[b].id
    found = [
        Number("string", length, "m", start, end),
        Number("along the string", along, "m", start, scene.target.id),
    ]
    if abs(beside) >= 0.0005:
        side = "right" if beside > 0 else "left"
        found.append(
            Number("aside", abs(beside), "m", start, end, f"{side} looking to {end}")
        )
    return found


def _cautions(
    scene: Scene, marks: tuple[int, int], share: float, length: float
) -> list[Caution]:
    string = scene.tools.string
    found = []
    reach = length * max(1.0, share, 1.0 - share)
    if string is not None and reach > string.length_m:
        found.append(Caution.LONG_STRING)
    if not all(scene.clear[i] for i in marks):
        found.append(Caution.BLOCKED)
    return found


def _usable(
    scene: Scene, c: tuple[tuple[int, int, float], tuple[int, int, float], float]
) -> bool:
    return all(scene.usable[i] for line in c[:2] for i in line[:2])


def _sine(
    scene: Scene, one: tuple[int, int, float], two: tuple[int, int, float]
) -> float:
    a = scene.xy[one[1]] - scene.xy[one[0]]
    b = scene.xy[two[1]] - scene.xy[two[0]]
    return float(abs(a[0] * b[1] - a[1] * b[0]) / (math.hypot(*a) * math.hypot(*b)))


def _across(own: Array, n: Array) -> Array:
    return np.asarray(
        own[:, 0] * n[:, 0] ** 2
        + 2 * own[:, 1] * n[:, 0] * n[:, 1]
        + own[:, 2] * n[:, 1] ** 2
    )
