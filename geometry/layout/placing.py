"""Choosing the place of a stake on its ray: whole steps, rounded outward."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from geometry.layout.rays import SLIVER_M, Ray, leaving
from geometry.layout.scene import Scene
from geometry.layout.stakes import Role, Stake, Status
from geometry.layout.words import listed

WINDOW = 3
"""One value is looked for at what the excavation needs and up to two steps more."""

PARTS_OF_STEP = 10


@dataclass(frozen=True, slots=True)
class Spot:
    """A place on a ray: distance from its start, offset, and how it came about."""

    along_m: float
    offset_m: float
    status: Status


def steps_at(scene: Scene, ray: Ray, offset_m: float) -> int:
    """Whole steps, counted on the ray, that reach the building's offset."""
    step = scene.rules.step_m
    if ray.in_frame and scene.rectangle is not None:
        leaves, _, square = leaving(scene.rectangle, ray.start, ray.unit, offset_m)
        need = offset_m if square else leaves - ray.counted_from_m
    else:
        need = offset_m
    return max(1, math.ceil(need / step - 1e-9))


def building_offset(scene: Scene, rays: Sequence[Ray]) -> float:
    """The one offset of the building: whole steps, outside the excavation.

    The smallest whole step serving most line ends, looked for from what the excavation
    needs up to two steps beyond it, so that one bad end does not push all others out.
    """
    rules = scene.rules
    least = max(1, math.ceil(rules.least_offset_m / rules.step_m - 1e-9))
    if not rules.one_value:
        return least * rules.step_m
    need = scene.excavation.reach_m + rules.clearance_m
    first = max(least, math.ceil(need / rules.step_m - 1e-6))
    served = [_served(scene, rays, first + i) for i in range(WINDOW)]
    return (first + served.index(max(served))) * rules.step_m


def _served(scene: Scene, rays: Sequence[Ray], steps: int) -> int:
    offset = steps * scene.rules.step_m
    return sum(
        r.is_free(r.counted_from_m + steps_at(scene, r, offset) * scene.rules.step_m)
        for r in rays
    )


def spot(scene: Scene, ray: Ray, offset_m: float) -> Spot | None:
    """Where the stake goes: at the offset, else the next whole step out, else in.

    When no whole step is free, tenths of one are tried. None when there is no room.
    """
    step = scene.rules.step_m
    wanted = steps_at(scene, ray, offset_m)
    at = ray.counted_from_m + wanted * step
    if ray.is_free(at):
        far = ray.through_m > SLIVER_M
        return Spot(at, wanted * step, Status.FAR_SIDE if far else Status.NOMINAL)
    for part in (1, PARTS_OF_STEP):
        fine, count = step / part, wanted * part
        if (k := _first_out(scene, ray, fine, count)) is not None:
            return Spot(ray.counted_from_m + k * fine, k * fine, Status.EXTENDED)
        if (k := _last_in(ray, fine, count)) is not None:
            return Spot(ray.counted_from_m + k * fine, k * fine, Status.PULLED_IN)
    return None


def _first_out(scene: Scene, ray: Ray, step: float, wanted: int) -> int | None:
    base = ray.counted_from_m
    limit = base + wanted * step + scene.rules.reach_m
    for low, high in ray.free:
        k = max(wanted, math.ceil((low - base) / step - 1e-7))
        t = base + k * step
        if t <= high + 1e-7 and t <= limit:
            return k
    return None


def _last_in(ray: Ray, step: float, wanted: int) -> int | None:
    base = ray.counted_from_m
    for low, high in reversed(ray.free):
        k = min(wanted - 1, math.floor((high - base) / step + 1e-7))
        if k >= 1 and base + k * step >= low - 1e-7:
            return k
    return None


def stake_at(
    scene: Scene, ray: Ray, found: Spot, offset_m: float, role: Role = Role.LINE_END
) -> Stake:
    """The stake of a spot, with the reason a person can read; number to be given."""
    e, n = ray.at(found.along_m)
    return Stake(
        number=0,
        e_m=e,
        n_m=n,
        line_id=ray.line_id,
        end=ray.end,
        side=ray.side,
        offset_m=found.offset_m,
        measured_from=ray.measured_from,
        to_wall_m=found.along_m,
        status=found.status,
        differs=abs(found.offset_m - offset_m) > 1e-6,
        reason=why(scene, ray, found, offset_m),
        role=role,
        beside_m=ray.beside_m,
    )


def why(scene: Scene, ray: Ray, found: Spot, offset_m: float) -> str:
    """One sentence for the place of a stake."""
    say, step = scene.rules.say, scene.rules.step_m
    wanted = steps_at(scene, ray, offset_m) * step
    there = f"{say(found.offset_m)} beyond {ray.measured_from}"
    whole = abs(found.offset_m / step - round(found.offset_m / step)) < 1e-6
    part = "" if whole else " No whole step fits."
    if found.status is Status.FAR_SIDE:
        return (
            "An inside corner's stake would fall in the building or its excavation; "
            f"this one stands {there} on the same line."
        )
    if found.status is Status.NOMINAL:
        skew = wanted > offset_m + 1e-6 and ray.in_frame
        return f"Stands {there}." + (
            f" The line leaves the building at a skew, so {say(offset_m)} square to "
            "the side is more along it, rounded outward."
            if skew
            else ""
        )
    blocked = f"at {say(wanted)} it would stand in {obstacle(scene, ray, wanted)}"
    if found.status is Status.EXTENDED:
        return f"Moved out to {there}: {blocked}.{part}"
    return f"Pulled in to {there}: {blocked}, and nothing farther out is free.{part}"


def obstacle(scene: Scene, ray: Ray, offset_m: float) -> str:
    """What is in the way at an offset on a ray."""
    names = scene.allowed.in_the_way(*ray.at(ray.counted_from_m + offset_m))
    return listed(names) or "ground that is not free"
