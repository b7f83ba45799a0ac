"""What a check can see: shape, place, fit, height. No number of one replaces another.

Every diagonal closes on a building set 30 ft off; only a check against control that
was not used to set it shows its place, and only one against what is already built or
bounded shows that it fits.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping
from dataclasses import dataclass
from enum import StrEnum


class Reach(StrEnum):
    """What kind of error a check can find."""

    SHAPE = "shape"
    PLACE = "place"
    FIT = "fit"
    HEIGHT = "height"


class Against(StrEnum):
    """What was measured against."""

    STAKE = "stake"
    CONTROL = "control"
    BENCHMARK = "benchmark"
    BOUNDARY = "boundary"
    EXISTING_WORK = "existing work"


class Component(StrEnum):
    """Position and elevation are trusted apart."""

    POSITION = "position"
    ELEVATION = "elevation"


@dataclass(frozen=True, slots=True)
class Seen:
    """What one check reaches; `reason` says why it reaches no farther."""

    reaches: frozenset[Reach]
    reason: str


def reach(
    component: Component,
    against: Iterable[Against],
    *,
    check_control: Collection[str] = (),
    setting_control: Collection[str] = (),
) -> Seen:
    """What a check of `component` measured `against` these things can see.

    `check_control` are the control marks or benchmarks the check rests on,
    `setting_control` those the stake was set from. Place and height need at least one
    that was not used for setting: the same benchmark read twice shows the reading, not
    the value that was wrong.

    >>> seen = reach(Component.POSITION, [Against.CONTROL],
    ...              check_control={"CP3"}, setting_control={"CP1", "CP2"})
    >>> [r.value for r in seen.reaches]
    ['place']
    """
    things = set(against)
    fresh = set(check_control) - set(setting_control)
    if component is Component.ELEVATION:
        return _height(things, fresh)
    found: set[Reach] = set()
    if Against.STAKE in things:
        found.add(Reach.SHAPE)
    if things & {Against.BOUNDARY, Against.EXISTING_WORK}:
        found.add(Reach.FIT)
    if Against.CONTROL in things and fresh:
        found.add(Reach.PLACE)
    if found:
        return Seen(frozenset(found), "It sees " + ", ".join(sorted(found)) + ".")
    if Against.CONTROL in things:
        return Seen(frozenset(), "It rests only on the control used for setting.")
    return Seen(frozenset(), "Nothing was named that it was measured against.")


def _height(things: set[Against], fresh: set[str]) -> Seen:
    fixed = {Against.BENCHMARK, Against.CONTROL}
    built = {Against.EXISTING_WORK, Against.BOUNDARY}
    if (things & fixed and fresh) or things & built:
        return Seen(frozenset({Reach.HEIGHT}), "It sees height.")
    if things & fixed:
        return Seen(frozenset(), "It rests only on the benchmark used for setting.")
    return Seen(frozenset(), "Heights between stakes show no common error.")


def missing(
    needs: Mapping[Reach, int], passed: Iterable[tuple[Reach, int]]
) -> dict[Reach, int]:
    """Reaches a tolerance class needs that no passed check has, with the grade needed.

    `needs`: grade of independence wanted per reach; `passed`: reach and grade of every
    check that passed. An empty answer means ready.

    >>> missing({Reach.SHAPE: 1, Reach.PLACE: 2}, [(Reach.SHAPE, 2), (Reach.PLACE, 1)])
    {<Reach.PLACE: 'place'>: 2}
    """
    best: dict[Reach, int] = {}
    for kind, grade in passed:
        best[kind] = max(grade, best.get(kind, -1))
    return {kind: grade for kind, grade in needs.items() if best.get(kind, -1) < grade}
