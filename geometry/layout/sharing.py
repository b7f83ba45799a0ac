"""Fewer stakes and safer stakes: one stake for two lines, and spares on each line.

The least number of stakes is the number of line ends less a maximum matching of ends
whose stakes may be one (the edge-cover identity of Gallai 1959, from memory).
"""

from __future__ import annotations

import dataclasses
import itertools
import math
from collections.abc import Iterable

import networkx

from geometry.layout.plan import OffsetPlan
from geometry.layout.rays import Ray, all_rays
from geometry.layout.scene import Scene
from geometry.layout.stakes import (
    Hold,
    Role,
    Stake,
    StakeSet,
    Status,
    moved,
    numbered,
)

LEAST_SINE = 0.3
"""Lines that cross flatter than this are not held by one stake."""

FARTHEST_BEYOND_M = 15.0
"""How far beyond its nominal place a shared stake may stand."""


def plain_set(plan: OffsetPlan) -> StakeSet:
    """The plan's own stakes: one at each end of every line."""
    return StakeSet("plain", plan.stakes, _unserved(plan), ())


def minimal_set(plan: OffsetPlan) -> StakeSet:
    """As few stakes as hold every line end: where two lines cross on free ground
    beyond their ends, one stake serves both.

    >>> from geometry.layout.plan import plan_offsets
    >>> house = [(0, 0), (24, 0), (24, 10), (12, 10), (12, 18), (0, 18)]
    >>> plan = plan_offsets(house, offset_m=1.524, step_m=1.524)
    >>> len(plan.stakes) - len(minimal_set(plan).stakes)
    1
    """
    scene = plan.scene
    own = {(s.line_id, s.end): s for s in plan.stakes if s.role is Role.LINE_END}
    rays = {(r.line_id, r.end): r for r in all_rays(scene) if (r.line_id, r.end) in own}
    graph = networkx.Graph()
    graph.add_nodes_from(rays)
    for one, other in itertools.combinations(rays, 2):
        meeting = _meeting(scene, rays[one], rays[other])
        if meeting is not None:
            extra = sum(meeting) - own[one].to_wall_m - own[other].to_wall_m
            graph.add_edge(one, other, weight=1000 - extra, meeting=meeting)
    pairs = networkx.max_weight_matching(graph, maxcardinality=True)
    shared, served = [], set()
    for one, other in pairs:
        along = _meeting(scene, rays[one], rays[other])
        assert along is not None
        shared.append(_shared(rays[one], rays[other], along))
        served |= {one, other}
    rest = [s for s in plan.stakes if (s.line_id, s.end) not in served]
    local = [*_locally(rest, scene), *shared]
    stakes = moved(numbered(local, scene.middle), scene.outline.origin)
    words = tuple(f"One stake serves {a[0]} and {b[0]}." for a, b in pairs)
    return StakeSet("fewest", stakes, _unserved(plan), words)


def robust_set(plan: OffsetPlan) -> StakeSet:
    """One spare farther out on every line, so that no single loss takes a line away."""
    scene = plan.scene
    step = scene.rules.step_m
    spares: list[Stake] = []
    lacking: list[str] = []
    by_line: dict[str, list[Stake]] = {}
    for stake in plan.stakes:
        if stake.role is Role.LINE_END:
            by_line.setdefault(stake.line_id, []).append(stake)
    rays = {(r.line_id, r.end): r for r in all_rays(scene)}
    for line_id, own in by_line.items():
        spare = next(
            (s for stake in own if (s := _spare(scene, rays, stake, step))), None
        )
        if spare is None:
            lacking.append(f"No free ground for a spare on {line_id}.")
        else:
            spares.append(spare)
    local = [*_locally(plan.stakes, scene), *spares]
    stakes = moved(numbered(local, scene.middle), scene.outline.origin)
    return StakeSet("with spares", stakes, _unserved(plan), tuple(lacking))


def near_and_far(plan: OffsetPlan, line_id: str, apart_m: float) -> tuple[Stake, ...]:
    """A second stake `apart_m` beyond the stake at each end of a line, where free."""
    scene = plan.scene
    rays = {(r.line_id, r.end): r for r in all_rays(scene)}
    own = [s for s in plan.stakes if s.line_id == line_id and s.role is Role.LINE_END]
    made = [s for stake in own if (s := _spare(scene, rays, stake, apart_m))]
    far = [dataclasses.replace(s, role=Role.FAR) for s in made]
    return moved(far, scene.outline.origin)


def _meeting(scene: Scene, one: Ray, other: Ray) -> tuple[float, float] | None:
    """Distances along both rays to where they cross on ground free for both."""
    sine = one.unit[0] * other.unit[1] - one.unit[1] * other.unit[0]
    if one.line_id == other.line_id or abs(sine) < LEAST_SINE:
        return None
    de, dn = other.start[0] - one.start[0], other.start[1] - one.start[1]
    t = (de * other.unit[1] - dn * other.unit[0]) / sine
    u = (de * one.unit[1] - dn * one.unit[0]) / sine
    for ray, along in ((one, t), (other, u)):
        least = scene.rules.least_offset_m
        if not least - 1e-9 <= along <= ray.counted_from_m + least + FARTHEST_BEYOND_M:
            return None
        if not ray.is_free(along):
            return None
    return t, u


def _shared(one: Ray, other: Ray, along: tuple[float, float]) -> Stake:
    e, n = one.at(along[0])
    hold = Hold(
        other.line_id,
        other.end,
        along[1] - other.counted_from_m,
        along[1],
        other.beside_m,
    )
    return Stake(
        number=0,
        e_m=e,
        n_m=n,
        line_id=one.line_id,
        end=one.end,
        side=one.side,
        offset_m=along[0] - one.counted_from_m,
        measured_from=one.measured_from,
        to_wall_m=along[0],
        status=Status.EXTENDED,
        differs=True,
        reason=f"It stands where {one.line_id} and {other.line_id} cross and holds both.",
        also=(hold,),
        beside_m=one.beside_m,
    )


def _spare(
    scene: Scene, rays: dict[tuple[str, str], Ray], stake: Stake, apart_m: float
) -> Stake | None:
    ray = rays.get((stake.line_id, stake.end))
    if ray is None:
        return None
    limit = stake.to_wall_m + max(scene.rules.reach_m, apart_m)
    along = stake.to_wall_m + apart_m
    while along <= limit:
        if ray.is_free(along):
            e, n = ray.at(along)
            return dataclasses.replace(
                stake,
                number=0,
                e_m=e,
                n_m=n,
                offset_m=stake.offset_m + along - stake.to_wall_m,
                to_wall_m=along,
                differs=True,
                role=Role.SPARE,
                reason=f"A spare on {stake.line_id}, should the nearer stake be lost.",
            )
        along += scene.rules.step_m
    return None


def _locally(stakes: Iterable[Stake], scene: Scene) -> tuple[Stake, ...]:
    e, n = scene.outline.origin
    return moved(tuple(stakes), (-e, -n))


def _unserved(plan: OffsetPlan) -> tuple[tuple[str, str], ...]:
    return tuple((end.line_id, end.end) for end in plan.no_room)


def frame_set(plan: OffsetPlan) -> StakeSet:
    """The smallest enclosing rectangle as four stakes, an offset outside the walls."""
    scene, box = plan.scene, plan.scene.rectangle
    if box is None:
        words = ("The walls agree on no direction, so there is no frame.",)
        return StakeSet("frame", (), (), words)
    made, lacking = [], []
    for e, n in _outset(box.corners, plan.offset_m):
        if not scene.allowed.holds(e, n):
            taken = " and ".join(scene.allowed.in_the_way(e, n)) or "the excavation"
            lacking.append(f"A corner of the frame falls on {taken}.")
            continue
        made.append(_corner(scene, plan.offset_m, e, n))
    stakes = moved(numbered(made, scene.middle), scene.outline.origin)
    return StakeSet("frame", stakes, (), tuple(lacking))


def _outset(
    corners: tuple[tuple[float, float], ...], by_m: float
) -> list[tuple[float, float]]:
    """Each corner moved outward along both sides that meet in it."""
    found = []
    for i, (e, n) in enumerate(corners):
        out_e = out_n = 0.0
        for j in (i - 1, (i + 1) % len(corners)):
            de, dn = e - corners[j][0], n - corners[j][1]
            length = math.hypot(de, dn)
            out_e, out_n = out_e + de / length * by_m, out_n + dn / length * by_m
        found.append((e + out_e, n + out_n))
    return found


def _corner(scene: Scene, offset_m: float, e: float, n: float) -> Stake:
    return Stake(
        number=0,
        e_m=e,
        n_m=n,
        line_id="frame",
        end="corner",
        side="",
        offset_m=offset_m,
        measured_from="enclosing rectangle",
        to_wall_m=offset_m,
        status=Status.NOMINAL,
        differs=False,
        reason=f"A corner of the frame, {scene.rules.say(offset_m)} outside both sides.",
        role=Role.FRAME,
    )
