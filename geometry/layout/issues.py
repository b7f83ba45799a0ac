"""What a person must know about a plan before issuing it, in sentences."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from enum import StrEnum

import shapely

from geometry.layout.excavation import Excavation
from geometry.layout.keepouts import Allowed, Barrier
from geometry.layout.lines import WallLine
from geometry.layout.outline import Outline
from geometry.layout.scene import Scene
from geometry.layout.stakes import Stake, Status
from geometry.layout.words import Say, listed

MERGE_WORTH_SAYING_M = 1e-3
LEAST_OVERLAP_M2 = 1e-4


class Matter(StrEnum):
    """What an issue is about."""

    FOOTPRINT = "footprint"
    DIRECTION = "direction"
    EXCAVATION = "excavation"
    PROPERTY = "property"
    KEEP_OUT = "keep-out"
    OFFSETS = "offsets"
    NO_ROOM = "no room"


@dataclass(frozen=True, slots=True)
class Issue:
    """One sentence, what it is about, and the lines it names."""

    matter: Matter
    sentence: str
    lines: tuple[str, ...] = ()


def issues_of(
    scene: Scene,
    offset_m: float,
    stakes: Iterable[Stake],
    without: Iterable[tuple[str, str, str]],
) -> tuple[Issue, ...]:
    """All issues of a plan. `without` are (line, end, reason) of ends with no room."""
    say = scene.rules.say
    found = [Issue(Matter.FOOTPRINT, note) for note in scene.outline.notes]
    found += _direction(scene)
    found += _merged(scene.lines, say)
    found += _excavation(scene.excavation)
    found += _limits(scene.outline, scene.excavation, scene.allowed, say)
    found += _offsets(scene, offset_m, stakes)
    found += [Issue(Matter.NO_ROOM, reason, (line,)) for line, _, reason in without]
    return tuple(found)


def _direction(scene: Scene) -> list[Issue]:
    d = scene.direction
    if scene.rectangle is not None or not d.families:
        return []
    ways = [f"{math.degrees(f.azimuth_rad):.1f}°" for f in d.families[:3]]
    return [
        Issue(
            Matter.DIRECTION,
            f"The walls agree on no one direction (coherence {d.coherence:.2f}; they "
            f"run {listed(ways)}): offsets count from the last wall on each line.",
        )
    ]


def _merged(lines: Iterable[WallLine], say: Say) -> list[Issue]:
    return [
        Issue(
            Matter.FOOTPRINT,
            f"{w.id} serves walls that lie up to {say(w.out_of_line_m)} out of one "
            "line: check whether the sheet means one line or two.",
            (w.id,),
        )
        for w in lines
        if w.out_of_line_m > MERGE_WORTH_SAYING_M
    ]


def _excavation(dig: Excavation) -> list[Issue]:
    if dig.depth_m <= 0:
        return []
    return [Issue(Matter.EXCAVATION, dig.caution)]


def _limits(
    outline: Outline, dig: Excavation, allowed: Allowed, say: Say
) -> list[Issue]:
    found = []
    yard = allowed.property_line
    if yard is not None:
        if (over := _beyond(outline.polygon, yard)) > 0:
            text = f"The footprint crosses the property line by {say(over)}."
            found.append(Issue(Matter.PROPERTY, text))
        elif dig.depth_m > 0 and (over := _beyond(dig.polygon, yard)) > 0:
            text = f"The excavation limit crosses the property line by {say(over)}."
            found.append(Issue(Matter.PROPERTY, text))
    found += [_met(b) for b in allowed.barriers[1:] if _overlap(b, dig) > 0]
    return found


def _met(b: Barrier) -> Issue:
    text = f"The excavation limit or the footprint reaches into {b.name}."
    return Issue(Matter.KEEP_OUT, text)


def _overlap(b: Barrier, dig: Excavation) -> float:
    if not b.shape.intersects(dig.polygon):
        return 0.0
    shared = shapely.intersection(b.shape, dig.polygon)
    return max(float(shared.area) - LEAST_OVERLAP_M2, float(shared.length), 0.0)


def _beyond(inner: object, yard: object) -> float:
    """How far a shape reaches over the property line: the farthest point outside."""
    outside = shapely.difference(inner, yard)
    if outside.is_empty or outside.area < LEAST_OVERLAP_M2:
        return 0.0
    spots = shapely.points(shapely.get_coordinates(outside))
    return float(shapely.distance(spots, yard).max())


def _offsets(scene: Scene, offset_m: float, stakes: Iterable[Stake]) -> list[Issue]:
    say = scene.rules.say
    odd = [s for s in stakes if s.differs]
    found = []
    if odd:
        named = [f"{s.number} ({s.line_id} {s.end}, {say(s.offset_m)})" for s in odd]
        one = len(odd) == 1
        text = (
            f"{'Stake' if one else 'Stakes'} {listed(named)} "
            f"{'differs' if one else 'differ'} from the building's offset of "
            f"{say(offset_m)}: flag {'it' if one else 'them'} on plan, label and sheet."
        )
        found.append(Issue(Matter.OFFSETS, text, tuple(s.line_id for s in odd)))
    far = [s for s in stakes if s.status is Status.FAR_SIDE]
    if far:
        text = (
            f"{listed([f'{s.line_id} {s.end}' for s in far])} stand"
            f"{'s' if len(far) == 1 else ''} beyond the far side of the building."
        )
        found.append(Issue(Matter.OFFSETS, text, tuple(s.line_id for s in far)))
    return found
