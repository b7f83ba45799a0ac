"""The survivors worth considering around one lost mark, as arrays.

A job may have a thousand marks; a mark is put back from the nearest ones it can be
taped from, and from control it can be seen from. Everything later works on these few.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from geometry import checked
from geometry.checked import Array, Flags, Indices
from geometry.errors import GeometryError, OutOfRange
from geometry.precision import Obstacle, clear_lines
from geometry.ways.lineage import Lineage
from geometry.ways.survivors import Limits, Sort, Survivor, Target, Tools

NEAREST_M = 0.05
"""A mark nearer than this stands at the same place and holds nothing for it."""

SHORTEST_BASE_M = 0.3
"""Two marks nearer than this to each other give no direction."""


@dataclass(frozen=True, slots=True, eq=False)
class Scene:
    """`marks` (m) by distance from the target; `place` (2,) of the target; `xy` (m, 2);
    `away` (m,) distances; `joint` (2m, 2m) m²; flags (m,); `clear` (m,) whether nothing
    stands between mark and target. `usable_total` counts usable survivors of the job.
    """

    target: Target
    place: Array
    marks: tuple[Survivor, ...]
    xy: Array
    away: Array
    joint: Array
    usable: Flags
    trusted: Flags
    control: Flags
    occupiable: Flags
    clear: Flags
    usable_total: int
    tools: Tools
    limits: Limits
    obstacles: tuple[Obstacle, ...]

    def block(self, i: int, j: int) -> Array:
        """Covariance (2, 2) between marks `i` and `j`."""
        return self.joint[2 * i : 2 * i + 2, 2 * j : 2 * j + 2]

    def own(self) -> Array:
        """EE, EN, NN of every mark; (m, 3)."""
        d = np.arange(0, len(self.joint), 2)
        return np.column_stack(
            [self.joint[d, d], self.joint[d, d + 1], self.joint[d + 1, d + 1]]
        )

    def tapeable(self) -> Indices:
        """Marks within twice the tape, nearest first, at most `limits.nearest` usable
        ones and a few of the others."""
        if self.tools.tape is None:
            return np.empty(0, dtype=np.intp)
        near = np.flatnonzero(self.away <= 2 * self.tools.tape.length_m)
        good = near[self.usable[near]][: self.limits.nearest]
        return np.sort(np.concatenate([good, near[~self.usable[near]][:3]]))


def look(
    target: Target,
    candidates: Sequence[Survivor],
    *,
    lineage: Lineage | None,
    obstacles: Sequence[Obstacle],
    tools: Tools,
    limits: Limits,
) -> Scene:
    """Shortlist of `candidates` around `target`, the target itself left out.

    Raises NotFinite, OutOfRange, WrongShape that name the mark, and OutOfRange for a
    number used twice.
    """
    place = checked.point(f"position of {target.id}", target.position)
    checked.positive(f"tolerance of {target.id}", target.tolerance_m)
    others = [c for c in candidates if c.id != target.id]
    _unique(others)
    xy = _positions(others)
    away = np.hypot(*(xy - place).T) if len(others) else np.empty(0)
    usable = np.array([c.usable for c in others], dtype=bool)
    chosen = _shortlist(others, away, usable, tools, limits)
    marks = tuple(others[i] for i in chosen)
    points = xy[chosen].reshape(-1, 2)
    return Scene(
        target=target,
        place=place,
        marks=marks,
        xy=points,
        away=away[chosen],
        joint=_joint(marks, lineage),
        usable=usable[chosen],
        trusted=np.array([m.trusted for m in marks], dtype=bool),
        control=np.array([m.sort is Sort.CONTROL for m in marks], dtype=bool),
        occupiable=np.array([m.occupiable for m in marks], dtype=bool),
        clear=clear_lines(points, np.tile(place, (len(points), 1)), obstacles),
        usable_total=int(np.sum(usable & (away >= NEAREST_M))),
        tools=tools,
        limits=limits,
        obstacles=tuple(obstacles),
    )


def _shortlist(
    marks: Sequence[Survivor],
    away: Array,
    usable: Flags,
    tools: Tools,
    limits: Limits,
) -> Indices:
    order = np.argsort(away, kind="stable")
    order = order[away[order] >= NEAREST_M]
    bench = np.array([m.sort is Sort.BENCHMARK for m in marks], dtype=bool)
    order = order[~bench[order]] if len(order) else order
    control = np.array([m.sort is Sort.CONTROL for m in marks], dtype=bool)
    good, bad = order[usable[order]], order[~usable[order]]
    chosen = set(good[: limits.nearest].tolist()) | set(bad[:4].tolist())
    if tools.total_station is not None:
        reach = tools.total_station.distance_m
        known = good[control[good]]
        within = known[away[known] <= reach] if len(known) else known
        chosen |= set(known[:8].tolist()) | set(within[-4:].tolist())
    return np.array([i for i in order.tolist() if i in chosen], dtype=np.intp)


def _unique(marks: Sequence[Survivor]) -> None:
    seen: set[str] = set()
    for mark in marks:
        if mark.id in seen:
            raise OutOfRange("Two survivors have the same number.", where=mark.id)
        seen.add(mark.id)


def _positions(marks: Sequence[Survivor]) -> Array:
    try:
        return checked.points("positions", [m.position for m in marks])
    except (GeometryError, ValueError):
        for mark in marks:
            checked.point(f"position of {mark.id}", mark.position)
        raise


def _joint(marks: Sequence[Survivor], lineage: Lineage | None) -> Array:
    joint = np.zeros((2 * len(marks), 2 * len(marks)))
    known = []
    for i, mark in enumerate(marks):
        if lineage is not None and mark.id in lineage:
            known.append(i)
        else:
            part = slice(2 * i, 2 * i + 2)
            joint[part, part] = checked.covariance(
                f"covariance of {mark.id}", mark.covariance_m2
            )
    if lineage is not None and known:
        rows = np.ravel([(2 * i, 2 * i + 1) for i in known])
        joint[np.ix_(rows, rows)] = lineage.covariance([marks[i].id for i in known])
    return joint
