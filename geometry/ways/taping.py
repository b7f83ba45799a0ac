"""Ways with a tape: ties, in line and distance, right-angle offset."""

from __future__ import annotations

import math

import numpy as np

from geometry.checked import Array, Flags, Indices
from geometry.ways import pairs
from geometry.ways.draft import Draft, singular
from geometry.ways.scene import SHORTEST_BASE_M, Scene
from geometry.ways.way import Caution, Kind, Number

MOST = 5
"""Pairs per way that are worked out in full: the best by precision."""


def taped_ties(scene: Scene) -> list[Draft]:
    """Distances from two marks; the third tie, which picks the side, is the check."""
    tape = scene.tools.tape
    near = scene.tapeable()
    if tape is None or len(near) < 2:
        return []
    i, j = np.triu_indices(len(near), 1)
    i, j = near[i], near[j]
    own = scene.own()
    square, sine = pairs.ties(
        scene.place, scene.xy[i], scene.xy[j], own[i], own[j], tape
    )
    fit = sine >= scene.limits.flat_sine
    if not fit.any():
        return [singular(Kind.TIES, "All marks near it lie in one line with it.")]
    best = _best(scene, np.column_stack([i, j]), np.where(fit, square, np.inf))
    return [_tie(scene, a, b) for a, b in best]


def in_line(scene: Scene) -> list[Draft]:
    """Lined up on two marks and taped from the nearer one."""
    tape, string = scene.tools.tape, scene.tools.string
    near = scene.tapeable()
    if tape is None or string is None or len(near) < 2:
        return []
    a, b = _ordered(scene, near)
    own = scene.own()
    square, run, beside = pairs.in_line(
        scene.place, scene.xy[a], scene.xy[b], own[a], own[b], tape, string
    )
    fit = (beside <= scene.limits.beside_m) & (scene.away[b] <= scene.away[a])
    fit &= (run > -1) & (run < 5)
    if not fit.any():
        return [singular(Kind.IN_LINE, "No two marks stand in line with it.")]
    best = _best(scene, np.column_stack([a, b]), np.where(fit, square, np.inf))
    return [_line(scene, a, b) for a, b in best]


def right_angle(scene: Scene) -> list[Draft]:
    """A foot taped along two marks, and an offset square to them."""
    tape, tool = scene.tools.tape, scene.tools.right_angle
    near = scene.tapeable()
    if tape is None or tool is None or len(near) < 2:
        return []
    a, b = _ordered(scene, near)
    own = scene.own()
    square, foot, offset = pairs.right_angle(
        scene.place, scene.xy[a], scene.xy[b], own[a], own[b], tape, tool
    )
    fit = (np.abs(offset) > scene.limits.beside_m) & (foot > -1) & (foot < 1)
    if not fit.any():
        return [singular(Kind.RIGHT_ANGLE, "No two marks give a base line beside it.")]
    best = _best(scene, np.column_stack([a, b]), np.where(fit, square, np.inf))
    return [_offset(scene, a, b) for a, b in best]


def _tie(scene: Scene, a: int, b: int) -> Draft:
    tape = scene.tools.tape
    assert tape is not None
    ua, da = _ray(scene, a)
    ub, db = _ray(scene, b)
    back = np.linalg.inv(np.array([ua, ub]))
    noise = back @ np.diag([tape.variance(da), tape.variance(db)]) @ back.T
    base = scene.xy[b] - scene.xy[a]
    side = base[1] * ua[0] - base[0] * ua[1]
    note = f"{'right' if side > 0 else 'left'} of the line {_id(scene, a)}"
    note += f" to {_id(scene, b)}"
    cautions = _tape_cautions(scene, (a, b), max(da, db))
    if abs(ua[0] * ub[1] - ua[1] * ub[0]) < scene.limits.weak_sine:
        cautions.append(Caution.WEAK_ANGLE)
    return Draft(
        Kind.TIES,
        (a, b),
        (np.outer(back[:, 0], ua), np.outer(back[:, 1], ub)),
        noise,
        (
            Number("distance", da, "m", _id(scene, a), scene.target.id, note),
            Number("distance", db, "m", _id(scene, b), scene.target.id, note),
        ),
        tuple(cautions),
        6.0,
    )


def _line(scene: Scene, a: int, b: int) -> Draft:
    tape, string = scene.tools.tape, scene.tools.string
    assert tape is not None and string is not None
    u, length = _between(scene, a, b)
    n = np.array([u[1], -u[0]])
    gap = scene.place - scene.xy[b]
    along, beside = float(gap @ u), float(gap @ n)
    across = along / length * np.outer(n, n)
    noise = tape.variance(along) * np.outer(u, u) + string.sd_m**2 * np.outer(n, n)
    cautions = _tape_cautions(scene, (b,), abs(along))
    if along / length > scene.limits.extension:
        cautions.append(Caution.EXTENSION)
    if max(length, length + along) > string.length_m:
        cautions.append(Caution.LONG_STRING)
    note = f"{'beyond' if along > 0 else 'back from'} {_id(scene, b)}"
    numbers = [
        Number("line", length, "m", _id(scene, a), _id(scene, b), note),
        Number("distance", abs(along), "m", _id(scene, b), scene.target.id, note),
    ]
    numbers += _beside(scene, b, beside)
    return Draft(
        Kind.IN_LINE,
        (a, b),
        (-across, np.eye(2) + across),
        noise,
        tuple(numbers),
        tuple(cautions),
        5.0,
    )


def _offset(scene: Scene, a: int, b: int) -> Draft:
    tape, tool = scene.tools.tape, scene.tools.right_angle
    assert tape is not None and tool is not None
    u, length = _between(scene, a, b)
    n = np.array([u[1], -u[0]])
    gap = scene.place - scene.xy[a]
    s, o = float(gap @ u), float(gap @ n)
    # The base line turns with its ends: foot and offset swing about mark a.
    swing = np.outer(s * n - o * u, n) / length
    noise = (tape.variance(s) + (o * tool.sd_rad) ** 2) * np.outer(
        u, u
    ) + tape.variance(o) * np.outer(n, n)
    cautions = _tape_cautions(scene, (a,), max(abs(s), abs(o)))
    if abs(o) > scene.limits.longest_offset_m:
        cautions.append(Caution.LONG_OFFSET)
    if s < 0 and -s > scene.limits.extension * length:
        cautions.append(Caution.EXTENSION)
    where = "toward" if s >= 0 else "away from"
    return Draft(
        Kind.RIGHT_ANGLE,
        (a, b),
        (np.eye(2) - swing, swing),
        noise,
        (
            Number(
                "foot",
                abs(s),
                "m",
                _id(scene, a),
                _id(scene, b),
                f"{where} {_id(scene, b)}",
            ),
            Number(
                "offset",
                abs(o),
                "m",
                "foot",
                scene.target.id,
                f"{'right' if o > 0 else 'left'} looking to {_id(scene, b)}",
            ),
        ),
        tuple(cautions),
        8.0,
    )


def _beside(scene: Scene, mark: int, beside: float) -> list[Number]:
    """Where the line of the marks as set misses the point, what to step aside."""
    if abs(beside) < 0.0005:
        return []
    side = "right" if beside > 0 else "left"
    return [Number("aside", abs(beside), "m", _id(scene, mark), scene.target.id, side)]


def _best(scene: Scene, rows: Indices, square: Array) -> list[tuple[int, int]]:
    """The best few pairs of usable marks, and the best one that is not usable."""
    order = np.argsort(square, kind="stable")
    order = order[np.isfinite(square[order])]
    good = _all(scene.usable[rows])
    open_ = _all(scene.clear[rows]) & _all(scene.trusted[rows])
    most = max(MOST, scene.limits.per_kind)
    picked = order[good[order] & open_[order]][:most].tolist()
    picked += order[good[order] & ~open_[order]][:2].tolist()
    picked += order[~good[order]][:1].tolist()
    return [(int(rows[i][0]), int(rows[i][1])) for i in picked]


def _ordered(scene: Scene, near: Indices) -> tuple[Indices, Indices]:
    a, b = np.meshgrid(near, near, indexing="ij")
    gap = scene.xy[a] - scene.xy[b]
    apart = np.hypot(gap[..., 0], gap[..., 1]) > SHORTEST_BASE_M
    return a[apart], b[apart]


def _ray(scene: Scene, mark: int) -> tuple[Array, float]:
    vector, d = scene.place - scene.xy[mark], float(scene.away[mark])
    return vector / d, d


def _between(scene: Scene, a: int, b: int) -> tuple[Array, float]:
    vector = scene.xy[b] - scene.xy[a]
    length = math.hypot(*vector)
    return vector / length, length


def _tape_cautions(
    scene: Scene, marks: tuple[int, ...], longest: float
) -> list[Caution]:
    tape = scene.tools.tape
    found = []
    if tape is not None and longest > tape.length_m:
        found.append(Caution.LONG_TAPE)
    if not all(scene.clear[i] for i in marks):
        found.append(Caution.BLOCKED)
    return found


def _all(flags: Flags) -> Flags:
    return flags[:, 0] & flags[:, 1]


def _id(scene: Scene, mark: int) -> str:
    return scene.marks[mark].id
