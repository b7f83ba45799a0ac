"""The catalogue of gross blunders, each predicted exactly where its inputs are known.

A wrong backsight turns everything about the station by the difference of two known
azimuths, a wrong station carries the station onto another mark; so the marks of the
job name the mark that was mistaken, with nothing left to fit. For the setup that
staked the points the prediction is where the stakes went; for the setup that shot
them it is the inverse, where good stakes seem to be.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

import numpy as np

from geometry.checked import Array
from geometry.signature.hypotheses import Field, Hypothesis, rotation_field
from geometry.signature.kinds import Kind
from geometry.signature.setups import Role, Setup
from geometry.signature.small import ANY_SIZE, SMALL, swapped

FOOT_M = 0.3048
_SAME_M = 0.01


def gross_hypotheses(
    setups: Sequence[Setup], marks: Array, design: Array, shots: Array
) -> Iterator[Hypothesis]:
    """Every blunder of the catalogue for these setups and control marks (m, 2).

    `shots` (n, 2) are only used to start the one blunder that has a free size, a
    rotation about the station.
    """
    zero = np.zeros(2)
    yield Hypothesis(Kind.SWAPPED, fixed=swapped)
    yield Hypothesis(
        Kind.FEET_AS_METRES, fixed=_stretched(zero, 1 / FOOT_M), about="Coordinates"
    )
    yield Hypothesis(
        Kind.METRES_AS_FEET, fixed=_stretched(zero, FOOT_M), about="Coordinates"
    )
    yield from _renumbered(design)
    for number, one in enumerate(setups):
        yield from _of_setup(number, one, marks)
        yield from _turned_about(number, one, design, shots)
        for kind, factor in (
            (Kind.FEET_AS_METRES, 1 / FOOT_M),
            (Kind.METRES_AS_FEET, FOOT_M),
        ):
            field = _stretched(one.at, factor)
            yield Hypothesis(kind, fixed=field, setup=number, about="Distances")


def _turned_about(
    number: int, one: Setup, design: Array, shots: Array
) -> Iterator[Hypothesis]:
    """The orientation wrong by any angle: the median of what single shots turned."""
    a, b = design - one.at, shots - one.at
    turns = np.arctan2(b[:, 0], b[:, 1]) - np.arctan2(a[:, 0], a[:, 1])
    mean = math.atan2(np.sin(turns).sum(), np.cos(turns).sum())
    away = (turns - mean + math.pi) % (2 * math.pi) - math.pi
    turn = mean + float(np.median(away))
    if abs(turn) <= SMALL:
        return
    yield Hypothesis(
        Kind.ROTATION,
        fixed=lambda p: one.at - p + _turned(p - one.at, turn),
        free=lambda p: rotation_field(one)(one.at + _turned(p - one.at, turn)),
        base=(turn,),
        rarity=ANY_SIZE,
        setup=number,
    )


def _stretched(at: Array, factor: float) -> Field:
    return lambda p: (factor - 1) * (p - at)


def _of_setup(number: int, one: Setup, marks: Array) -> Iterator[Hypothesis]:
    for mark, place in enumerate(marks):
        if _apart(place, one.at):
            yield from _wrong_mark(number, one, mark, place)
    if one.backsight is None:
        return
    for kind, field in (
        (Kind.REVERSED, _carried(one.role, one.at, one.at, math.pi)),
        (Kind.EXCHANGED, _carried(one.role, one.at, one.backsight, math.pi)),
        (Kind.ANGLE_SENSE, _mirrored(one.at, _azimuth(one.at, one.backsight))),
    ):
        yield Hypothesis(kind, fixed=field, setup=number)


def _wrong_mark(
    number: int, one: Setup, mark: int, place: Array
) -> Iterator[Hypothesis]:
    """Another mark occupied, another mark's coordinates keyed, another one sighted."""
    station, value = 0.0, 0.0
    if one.backsight is not None:
        if not _apart(place, one.backsight):
            return
        back = _azimuth(one.at, one.backsight)
        station = _azimuth(place, one.backsight) - back
        value = -station
        sighted = _carried(one.role, one.at, one.at, _azimuth(one.at, place) - back)
        yield Hypothesis(Kind.WRONG_BACKSIGHT, fixed=sighted, setup=number, mark=mark)
    occupied = _carried(one.role, one.at, place, station)
    yield Hypothesis(Kind.WRONG_STATION, fixed=occupied, setup=number, mark=mark)
    keyed = _carried(one.role, place, one.at, value)
    yield Hypothesis(Kind.WRONG_VALUE, fixed=keyed, setup=number, mark=mark)


def _apart(a: Array, b: Array) -> bool:
    return float(np.hypot(*(a - b))) > _SAME_M


def _renumbered(design: Array) -> Iterator[Hypothesis]:
    """Each shot at the design place of a neighbour in the list, up to two along."""
    for step in (1, -1, 2, -2):
        if len(design) > 4:
            image = np.roll(design, step, axis=0)
            # the end of the list has no neighbour; it stays as a wild shot
            yield Hypothesis(
                Kind.NUMBERING, fixed=_only_at(design, image - design), about=str(step)
            )


def _only_at(design: Array, displacement: Array) -> Field:
    """A field that belongs to the list, not to the plane: zero anywhere else."""

    def field(points: Array) -> Array:
        same = points.shape == design.shape and bool((points == design).all())
        return displacement if same else np.zeros_like(points)

    return field


def _carried(role: Role, believed: Array, occupied: Array, turn: float) -> Field:
    """Turned about the believed station and carried to the occupied one, or back."""
    if role is Role.STAKED:
        return lambda p: occupied - p + _turned(p - believed, turn)
    return lambda p: believed - p + _turned(p - occupied, -turn)


def _mirrored(at: Array, azimuth: float) -> Field:
    """Left turned for right: mirrored at the line of the backsight."""
    u = np.array([math.sin(azimuth), math.cos(azimuth)])
    mirror = 2 * np.outer(u, u) - np.eye(2)
    return lambda p: at - p + (p - at) @ mirror


def _turned(local: Array, angle: float) -> Array:
    cosine, sine = math.cos(angle), math.sin(angle)
    turned: Array = local @ np.array([[cosine, -sine], [sine, cosine]])
    return turned


def _azimuth(a: Array, b: Array) -> float:
    return math.atan2(b[0] - a[0], b[1] - a[1])
