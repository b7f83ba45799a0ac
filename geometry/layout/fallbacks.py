"""What to do for a line end that has no room, best first.

In order: a second stake on the other side, far enough from the first to carry the line
across; a string beside the line; a target on a fence or wall; polar from control only.
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum
from typing import Any

import shapely

from geometry.layout.lines import LineKind, Place, WallLine
from geometry.layout.placing import Spot, spot, stake_at
from geometry.layout.rays import Ray, cast, line_starts
from geometry.layout.scene import Scene
from geometry.layout.stakes import Role, Stake, Status

STEPS_BESIDE = 6
LONGEST_STRING_M = 60.0


class FallbackKind(StrEnum):
    """What stands in for the missing stake."""

    SECOND_STAKE = "second stake on the far side"
    BESIDE = "string beside the line"
    TARGET = "target on a fence or wall"
    POLAR = "polar only"


@dataclass(frozen=True, slots=True)
class Fallback:
    """One way to do without the stake.

    `stakes` are what it would set (E, N; metres), `place` where a target would be
    fixed, `sd_m` the predicted standard deviation across the line at this end.
    """

    kind: FallbackKind
    sentence: str
    stakes: tuple[Stake, ...] = ()
    place: Place | None = None
    sd_m: float | None = None


def fallbacks_of(
    scene: Scene, ray: Ray, rays: Sequence[Ray], offset_m: float
) -> tuple[Fallback, ...]:
    """The ways that exist for a ray without room. Polar is always the last."""
    line = next(w for w in scene.lines if w.id == ray.line_id)
    found: list[Fallback | None] = []
    if line.kind is not LineKind.CURVED_WALL:
        other = next(r for r in rays if r.line_id == line.id and r.end != ray.end)
        found.append(_second(scene, line, ray, other, offset_m))
        found.append(_beside(scene, line, offset_m))
    found.append(_target(scene, ray))
    found.append(
        Fallback(
            FallbackKind.POLAR,
            f"Set the {ray.end} end of {line.id} by polar from control each time: "
            "nothing on the ground will hold it.",
        )
    )
    return tuple(f for f in found if f is not None)


def carried_sd(stake_sd_m: float, beyond_m: float, apart_m: float) -> float:
    """Standard deviation across a line carried past two stakes `apart_m` apart.

    `beyond_m` is the distance from the nearer stake to the place carried to. With
    k = beyond / apart the standard deviation is s sqrt((1 + k)² + k²) (plane error
    propagation; common practice keeps k to one half).

    >>> round(carried_sd(1.0, 5.0, 5.0), 3)
    2.236
    """
    k = beyond_m / apart_m
    return stake_sd_m * math.hypot(1 + k, k)


def _second(
    scene: Scene, line: WallLine, ray: Ray, other: Ray, offset_m: float
) -> Fallback | None:
    """Near stake and a second one at least half the wall's length behind it."""
    near = spot(scene, other, offset_m)
    if near is None:
        return None
    step, say = scene.rules.step_m, scene.rules.say
    beyond = near.along_m + line.length_m
    steps = max(1, math.ceil(line.length_m / 2 / step - 1e-9))
    while beyond + steps * step <= LONGEST_STRING_M:
        if other.is_free(near.along_m + steps * step):
            break
        steps += 1
    else:
        return None
    apart = steps * step
    sd = carried_sd(scene.rules.stake_sd_m, beyond, apart)
    far = Spot(near.along_m + apart, near.offset_m + apart, Status.EXTENDED)
    sentence = (
        f"Carry {line.id} across from its {other.end} side: a second stake "
        f"{say(apart)} behind the first. Predicted at the {ray.end} end of the wall: "
        f"{say(sd)} standard deviation across the line."
    )
    stake = dataclasses.replace(
        stake_at(scene, other, far, offset_m, Role.SECOND),
        reason=f"Holds {line.id} with the stake before it, as its {ray.end} end has "
        "no room.",
        sd_m=sd,
    )
    return Fallback(FallbackKind.SECOND_STAKE, sentence, (stake,), sd_m=sd)


def _beside(scene: Scene, line: WallLine, offset_m: float) -> Fallback | None:
    """A string a whole number of steps beside the line, outside first."""
    step, say = scene.rules.step_m, scene.rules.say
    outside = 1.0 if line.faces >= 0 else -1.0
    shifts = [
        sign * outside * k * step
        for k in range(1, STEPS_BESIDE + 1)
        for sign in (1, -1)
    ]
    rays = cast(scene, [s for d in shifts for s in line_starts(line, d)])
    for i, shift in enumerate(shifts):
        pair = rays[2 * i : 2 * i + 2]
        spots = [spot(scene, r, offset_m) for r in pair]
        placed = [(r, s) for r, s in zip(pair, spots, strict=True) if s is not None]
        if len(placed) < 2:
            continue
        side = "right" if shift > 0 else "left"
        print_it = f"string = {line.id} + {say(abs(shift))} {side}, seen from its start"
        stakes = tuple(
            dataclasses.replace(
                stake_at(scene, r, s, offset_m, Role.BESIDE),
                reason=f"Holds a string beside the wall: {print_it}.",
                differs=True,
            )
            for r, s in placed
        )
        return Fallback(
            FallbackKind.BESIDE,
            f"Stretch the string beside the wall: {print_it}. Print it at both stakes.",
            stakes,
            sd_m=scene.rules.stake_sd_m,
        )
    return None


def _target(scene: Scene, ray: Ray) -> Fallback | None:
    """Where the line meets the property line or a structure, outside the excavation."""
    reach = scene.rules.reach_m + scene.rules.step_m + ray.counted_from_m
    segment = shapely.linestrings([ray.at(max(ray.through_m, 1e-6)), ray.at(reach)])
    walls: list[tuple[str, Any]] = [
        (b.name, b.bare.boundary) for b in scene.allowed.barriers if b.is_structure
    ]
    if scene.allowed.property_line is not None:
        walls.append(
            ("the fence on the property line", scene.allowed.property_line.boundary)
        )
    best: tuple[float, str, Place] | None = None
    for name, wall in walls:
        for e, n in shapely.get_coordinates(segment.intersection(wall)).tolist():
            t = math.hypot(e - ray.start[0], n - ray.start[1])
            clear = not scene.excavation.polygon.contains(shapely.points(e, n))
            if clear and (best is None or t < best[0]):
                best = (t, name, (e, n))
    if best is None:
        return None
    t, name, where = best
    return Fallback(
        FallbackKind.TARGET,
        f"Fix a target for {ray.line_id} on {name}, {scene.rules.say(t)} from the "
        "corner, if there is one that will stay and its owner agrees.",
        place=where,
        sd_m=scene.rules.stake_sd_m,
    )
