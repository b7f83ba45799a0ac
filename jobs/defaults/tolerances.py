"""Tolerance classes a job starts with. None of them binds before a contract says so.

Figures are what the named sources state, written in whole hundredths of a foot or
millimetres; "from memory" where the text was not at hand.
"""

from __future__ import annotations

import uuid
from typing import NamedTuple

from geometry.decide import Reach, Rule
from geometry.units import Length, Unit
from jobs.kinds.terms import ToleranceClass
from stakes.record.lengths import Measured

_STATE = "a state highway department's survey specification"
_FEDERAL = "staking table of a federal lands highway specification, from memory"
_PRACTICE = "common practice, from memory"
_RODS = "common tolerance of anchor rods: 1/8 in within a group"

SHAPE_PLACE_FIT = (Reach.SHAPE, Reach.PLACE, Reach.FIT)
PLACE, HEIGHT = (Reach.PLACE,), (Reach.PLACE, Reach.HEIGHT)


class _Usual(NamedTuple):
    name: str
    feet: tuple[str, str]
    metres: tuple[str, str]
    reaches: tuple[Reach, ...]
    source: str
    rule: Rule = Rule.SIMPLE


_USUAL = (
    _Usual("Control", ("0.01", "0.01"), ("0.003", "0.003"), HEIGHT, _STATE),
    _Usual(
        "Building dig and rough",
        ("0.15", "0.10"),
        ("0.045", "0.030"),
        SHAPE_PLACE_FIT,
        _PRACTICE,
    ),
    _Usual(
        "Building corners and gridlines",
        ("0.02", "0.02"),
        ("0.006", "0.006"),
        SHAPE_PLACE_FIT,
        _PRACTICE,
    ),
    _Usual(
        "Anchor rods",
        ("0.01", "0.02"),
        ("0.003", "0.006"),
        SHAPE_PLACE_FIT,
        _RODS,
        Rule.GUARDED,
    ),
    _Usual("Gravity sewer", ("0.10", "0.01"), ("0.030", "0.004"), HEIGHT, _PRACTICE),
    _Usual(
        "Walls, curb and gutter", ("0.07", "0.03"), ("0.020", "0.010"), HEIGHT, _FEDERAL
    ),
    _Usual(
        "Centreline control and bridges",
        ("0.03", "0.03"),
        ("0.010", "0.010"),
        HEIGHT,
        _FEDERAL,
    ),
    _Usual(
        "Culverts, ditches, minor drainage",
        ("0.16", "0.07"),
        ("0.050", "0.020"),
        HEIGHT,
        _FEDERAL,
    ),
    _Usual(
        "Subgrade and finish grade",
        ("0.16", "0.03"),
        ("0.050", "0.010"),
        HEIGHT,
        _FEDERAL,
    ),
    _Usual("Slope stakes", ("0.16", "0.33"), ("0.050", "0.100"), PLACE, _FEDERAL),
    _Usual("Clearing limits", ("1.6", ""), ("0.500", ""), PLACE, _FEDERAL),
)


def default_classes(unit: Unit) -> tuple[ToleranceClass, ...]:
    """The classes in the unit of the job, marked as defaults nobody confirmed yet."""
    return tuple(_class(usual, unit) for usual in _USUAL)


def _class(usual: _Usual, unit: Unit) -> ToleranceClass:
    position, elevation = usual.feet if unit.is_foot else usual.metres
    return ToleranceClass(
        key=uuid.uuid4(),
        name=usual.name,
        position=_measured(position, unit),
        elevation=_measured(elevation, unit),
        rule=usual.rule,
        reaches=usual.reaches,
        grade=1,
        source=usual.source,
        default=True,
    )


def _measured(text: str, unit: Unit) -> Measured | None:
    return Measured.of(Length.parse(text, unit)) if text else None
