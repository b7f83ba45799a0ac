"""The offset plan of a building: one call, one result with all a page shows.

From footprint, offset and step, excavation, property and keep-outs to a stake at both
ends of every wall line. Rays leave each line end; the nominal place is a whole number
of steps beyond the enclosing rectangle, the same for the whole building.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from geometry.checked import Array
from geometry.layout import moving
from geometry.layout.curved import radial_rays
from geometry.layout.direction import EnclosingRectangle, PrincipalDirection
from geometry.layout.excavation import EDGE_M, Excavation, Ground, Soil
from geometry.layout.fallbacks import Fallback, fallbacks_of
from geometry.layout.gridlines import Gridline
from geometry.layout.issues import Issue, issues_of
from geometry.layout.keepouts import KeepOut, read_keep_outs
from geometry.layout.lines import Place, WallLine
from geometry.layout.outline import read_outline
from geometry.layout.placing import (
    building_offset,
    obstacle,
    spot,
    stake_at,
    steps_at,
)
from geometry.layout.rays import Ray, all_rays
from geometry.layout.reading import (
    footprint_ring,
    read_excavation,
    read_rules,
    read_scene,
)
from geometry.layout.scene import Scene
from geometry.layout.stakes import Role, Stake, Status, moved, numbered
from geometry.layout.words import Say, metres


@dataclass(frozen=True, slots=True)
class LineEnd:
    """One end of a line: its last wall point, the stake that holds it, or why none.

    `stake` is the number of the stake, None with status `no room`; `fallbacks` are
    then what can be done instead, best first.
    """

    line_id: str
    end: str
    side: str
    wall: Place
    status: Status
    stake: int | None
    reason: str
    fallbacks: tuple[Fallback, ...] = ()


@dataclass(frozen=True, slots=True)
class OffsetPlan:
    """A building's stakes and everything they were worked out from.

    Coordinates are (E, N) metres in the plane of the footprint given. `footprint` is
    the outer ring with curves as chords; `offset_m` the building's one offset.
    `scene` is the working in local metres, for the functions that make further sets.
    """

    footprint: Array
    courtyards: tuple[Array, ...]
    area_m2: float
    direction: PrincipalDirection
    rectangle: EnclosingRectangle | None
    lines: tuple[WallLine, ...]
    excavation: Excavation
    offset_m: float
    offset_reason: str
    ends: tuple[LineEnd, ...]
    stakes: tuple[Stake, ...]
    issues: tuple[Issue, ...]
    scene: Scene

    def line(self, line_id: str) -> WallLine:
        """The line of that id; KeyError when the plan has none."""
        return {w.id: w for w in self.lines}[line_id]

    def stake(self, number: int) -> Stake:
        """The stake of that number; KeyError when the plan has none."""
        return {s.number: s for s in self.stakes}[number]

    @property
    def no_room(self) -> tuple[LineEnd, ...]:
        return tuple(e for e in self.ends if e.status is Status.NO_ROOM)


def plan_offsets(
    footprint: ArrayLike,
    *,
    offset_m: float,
    step_m: float,
    bulges: ArrayLike | None = None,
    courtyards: Sequence[ArrayLike] = (),
    depth_m: float = 0.0,
    workspace_m: float = 0.6,
    soil: Soil | None = None,
    conditions: Iterable[Ground] = (),
    clearance_m: float = EDGE_M,
    property_line: ArrayLike | None = None,
    keep_outs: Sequence[KeepOut] = (),
    gridlines: Sequence[Gridline] = (),
    one_value: bool = True,
    reach_m: float = 30.0,
    chord_tolerance_m: float = 0.02,
    stake_sd_m: float = 0.004,
    say: Say = metres,
) -> OffsetPlan:
    """The offset stakes of a building from its footprint (n, 2; E, N metres).

    `offset_m` is the least offset wanted and `step_m` the step it is rounded outward
    to (5 ft is 1.524). `bulges` (n,) bend walls, `courtyards` are inner rings.
    `depth_m`, `workspace_m`, `soil` (None until classified) and `conditions` give the
    excavation limit, from which stakes stay `clearance_m`. With `one_value` all stakes
    get one offset where room allows. A stake is moved out by at most `reach_m`.
    `stake_sd_m` is the standard deviation of a stake coordinate, for predictions.
    `say` writes lengths in the job's unit.

    Raises BadOutline for a footprint, property line or keep-out that crosses itself or
    has no area; WrongShape, NotFinite or OutOfRange for bad numbers; EmptyInput for a
    keep-out without points; CoincidentPoints for a gridline without length. A line end
    without room is no error: its status says so.

    >>> rows = [(0, 0), (24, 0), (24, 18), (0, 18)]
    >>> plan = plan_offsets(rows, offset_m=2, step_m=1, depth_m=1.5, soil=Soil.B)
    >>> plan.offset_m, len(plan.stakes), plan.stakes[0].end
    (3.0, 8, 'north')
    """
    outline = read_outline(
        footprint,
        bulges=bulges,
        courtyards=courtyards,
        chord_tolerance_m=chord_tolerance_m,
    )
    rules = read_rules(
        least_offset_m=offset_m,
        step_m=step_m,
        one_value=one_value,
        clearance_m=clearance_m,
        reach_m=reach_m,
        chord_tolerance_m=chord_tolerance_m,
        stake_sd_m=stake_sd_m,
        say=say,
    )
    barriers = read_keep_outs(keep_outs, np.asarray(outline.origin))
    dig = read_excavation(
        outline, barriers, rules, depth_m, workspace_m, soil, conditions
    )
    return _planned(read_scene(outline, rules, dig, barriers, property_line, gridlines))


def _planned(scene: Scene) -> OffsetPlan:
    straight, radial = all_rays(scene), radial_rays(scene)
    offset = building_offset(scene, straight + radial)
    placed = [(ray, Role.LINE_END) for ray in straight]
    placed += [(ray, Role.RADIAL) for ray in radial]
    made: list[Stake] = []
    ends: list[LineEnd] = []
    for ray, role in placed:
        found = spot(scene, ray, offset)
        if found is None:
            ends.append(_without(scene, ray, straight, offset))
            continue
        made.append(stake_at(scene, ray, found, offset, role))
        ends.append(_end(ray, found.status, made[-1].reason))
    made += [s for e in ends for f in e.fallbacks[:1] for s in f.stakes]
    stakes = numbered(made, scene.middle)
    return _in_plane(scene, offset, ends, stakes)


def _end(ray: Ray, status: Status, reason: str) -> LineEnd:
    return LineEnd(ray.line_id, ray.end, ray.side, ray.start, status, None, reason)


def _without(scene: Scene, ray: Ray, rays: list[Ray], offset_m: float) -> LineEnd:
    wanted = steps_at(scene, ray, offset_m) * scene.rules.step_m
    reason = (
        f"No room for a stake at the {ray.end} end of {ray.line_id}: "
        f"{obstacle(scene, ray, wanted)} takes all the ground on its line."
    )
    ways = fallbacks_of(scene, ray, rays, offset_m)
    return LineEnd(
        ray.line_id, ray.end, ray.side, ray.start, Status.NO_ROOM, None, reason, ways
    )


def _in_plane(
    scene: Scene, offset: float, ends: list[LineEnd], stakes: tuple[Stake, ...]
) -> OffsetPlan:
    origin = scene.outline.origin
    numbers = {_key(s): s.number for s in stakes}
    held = {
        (s.line_id, s.end): s.number
        for s in stakes
        if s.role in (Role.LINE_END, Role.RADIAL)
    }
    without = [(e.line_id, e.end, e.reason) for e in ends if e.status is Status.NO_ROOM]
    return OffsetPlan(
        footprint=moving.ring(footprint_ring(scene.outline), origin),
        courtyards=tuple(moving.ring(y, origin) for y in scene.outline.courtyards),
        area_m2=scene.outline.area_m2,
        direction=scene.direction,
        rectangle=None
        if scene.rectangle is None
        else moving.rectangle(scene.rectangle, origin),
        lines=tuple(moving.line(w, origin) for w in scene.lines),
        excavation=moving.excavation(scene.excavation, origin),
        offset_m=offset,
        offset_reason=_why_offset(scene, offset),
        ends=tuple(_end_in_plane(e, origin, held, numbers) for e in ends),
        stakes=moved(stakes, origin),
        issues=issues_of(scene, offset, stakes, without),
        scene=scene,
    )


def _key(s: Stake) -> tuple[str, Role, float, float]:
    return s.line_id, s.role, s.e_m, s.n_m


def _end_in_plane(
    e: LineEnd,
    origin: Place,
    held: dict[tuple[str, str], int],
    numbers: dict[tuple[str, Role, float, float], int],
) -> LineEnd:
    ways = tuple(
        dataclasses.replace(
            f,
            stakes=moved(
                [
                    dataclasses.replace(s, number=numbers.get(_key(s), 0))
                    for s in f.stakes
                ],
                origin,
            ),
            place=None if f.place is None else moving.place(f.place, origin),
        )
        for f in e.fallbacks
    )
    number = None if e.status is Status.NO_ROOM else held[e.line_id, e.end]
    return dataclasses.replace(
        e, wall=moving.place(e.wall, origin), stake=number, fallbacks=ways
    )


def _why_offset(scene: Scene, offset_m: float) -> str:
    say, rules = scene.rules.say, scene.rules
    text = f"Offsets are {say(offset_m)}, in whole steps of {say(rules.step_m)}"
    if offset_m <= rules.least_offset_m + rules.step_m - 1e-9:
        return f"{text}, as asked."
    return (
        f"{text}: {say(rules.least_offset_m)} was asked, but the excavation limit lies "
        f"{say(scene.excavation.reach_m)} outside the walls and stakes stay "
        f"{say(rules.clearance_m)} from it."
    )
