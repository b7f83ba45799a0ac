"""Why a single stake lies where it does: the slips that leave a stake by itself.

Offset on the wrong side, another offset, a station ten or a hundred out, exchanged
digits, another mark's place. Each foretells one displacement. What counts is not
only how well it fits, but how many such foretellings would have fitted by chance at
that distance; that number stands with the answer.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.signature.digits import slips
from geometry.signature.words import METRES, Words
from geometry.verdicts import Verdict

CHANCE = 0.05
"""A hint that chance would offer more often than this is not an answer."""

_CLEARLY = 20.0
_MULTIPLES = 9


class Slip(StrEnum):
    """What may have happened to one stake."""

    WRONG_SIDE = "offset on the wrong side"
    OTHER_OFFSET = "another offset"
    STATION = "station out by a round step"
    EXCHANGED = "digits exchanged"
    DIGIT = "one digit wrong"
    OTHER_MARK = "another mark's place"
    ROUND_STEP = "round step"
    REFERENCE = "another reference surface"
    SIGN = "cut and fill exchanged"


@dataclass(frozen=True, slots=True)
class Line:
    """A line a stake refers to: azimuth in radians, offset right positive, metres."""

    azimuth_rad: float
    offset_m: float
    name: str = "the line"


@dataclass(frozen=True, slots=True)
class Hint:
    """One explanation: what is left after it, and how many would fit by chance."""

    slip: Slip
    left_m: float
    by_chance: float
    sentence: str


@dataclass(frozen=True, slots=True)
class StakeReading:
    """`verdict`: pass (within tolerance), fail (one explanation), ambiguous
    (several), undecided (none better than chance). `hints` come best first."""

    verdict: Verdict
    away_m: float
    hints: tuple[Hint, ...]
    reason: str


def explain_stake(
    design: ArrayLike,
    shot: ArrayLike,
    *,
    lines: Sequence[Line] = (),
    typed: tuple[str, str] | None = None,
    typed_unit_m: float = 1.0,
    others: ArrayLike = (),
    other_names: Sequence[str] = (),
    step_m: float = 1.0,
    tolerance_m: float = 0.015,
    within_m: float = 0.02,
    words: Words = METRES,
) -> StakeReading:
    """Explain where a stake was found (E, N) against its design; metres.

    `typed` are easting and northing as they were entered, in units of
    `typed_unit_m`. `others` (n, 2) are places of other marks. `step_m` is the whole
    step of offsets (0.3048 for feet), of which stations count by ten. `within_m` is
    how well a foretold place must be met.

    >>> line = Line(azimuth_rad=0.0, offset_m=3.0)
    >>> found = explain_stake((3.0, 50.0), (-3.004, 50.006), lines=[line])
    >>> found.hints[0].slip.value, found.verdict.value
    ('offset on the wrong side', 'fail')

    Raises NotFinite, OutOfRange, WrongShape, or NotReadable for typed numbers.
    """
    d = checked.point("The shot", shot) - checked.point("The design", design)
    away = float(np.hypot(*d))
    within = checked.positive("within_m", within_m)
    if away <= checked.positive("tolerance_m", tolerance_m):
        return StakeReading(Verdict.PASS, away, (), "Within tolerance of its design.")
    step = checked.positive("step_m", step_m)
    unit = checked.positive("typed_unit_m", typed_unit_m)
    places = checked.points("others", others) - checked.point("The design", design)
    groups = [
        *(group for line in lines for group in _of_line(line, step, words)),
        *_of_digits(typed, unit),
        (Slip.OTHER_MARK, _of_marks(places, other_names)),
    ]
    hints = [hint for slip, told in groups for hint in fitting(slip, told, d, within)]
    hints.sort(key=lambda hint: (hint.by_chance, hint.left_m))
    return judged(hints, away, words)


Told = list[tuple[Array, str]]
"""Foretold displacements (2,), or heights (1,), with the sentence for each."""


def _of_line(line: Line, step: float, words: Words) -> Iterator[tuple[Slip, Told]]:
    a = checked.number("A line's azimuth", line.azimuth_rad)
    offset = checked.number("A line's offset", line.offset_m)
    along = np.array([math.sin(a), math.cos(a)])
    right = np.array([along[1], -along[0]])
    if offset:
        side = f"It stands on the other side of {line.name}, twice the offset away."
        yield Slip.WRONG_SIDE, [(-2 * offset * right, side)]
        yield Slip.OTHER_OFFSET, _offsets(line, offset, right, step, words)
    stations = []
    for multiple in (1, 2, 3, 4, 5, 10):
        for sign in (-1, 1):
            run = 10 * multiple * step * sign
            said = f"It stands {words.length(run)} along {line.name} from its station."
            stations.append((run * along, said))
    yield Slip.STATION, stations


def _offsets(
    line: Line, offset: float, right: Array, step: float, words: Words
) -> Told:
    side = math.copysign(1.0, offset)
    told = []
    for multiple in range(0, _MULTIPLES + 1):
        set_at = side * multiple * step
        if abs(set_at - offset) > 1e-9:
            size = words.length(set_at)
            said = (
                f"It stands {size} off {line.name} instead of {words.length(offset)}."
            )
            told.append(((set_at - offset) * right, said))
    return told


def _of_digits(
    typed: tuple[str, str] | None, unit: float
) -> Iterator[tuple[Slip, Told]]:
    if typed is None:
        return
    for slip, exchanged in ((Slip.EXCHANGED, True), (Slip.DIGIT, False)):
        east = miscopied("easting", typed[0], unit, np.array([1.0, 0.0]), exchanged)
        north = miscopied("northing", typed[1], unit, np.array([0.0, 1.0]), exchanged)
        yield slip, east + north


def miscopied(
    name: str, text: str, unit: float, direction: Array, exchanged: bool
) -> Told:
    """What a slip in copying one number foretells, along the direction it counts."""
    return [
        (
            copy.difference * unit * direction,
            f"Its {name} {text} may have been taken as {copy.text}.",
        )
        for copy in slips(text)
        if copy.exchanged is exchanged
    ]


def _of_marks(places: Array, names: Sequence[str]) -> Told:
    return [
        (place, f"It stands where {_name(names, i)} is planned.")
        for i, place in enumerate(places)
    ]


def _name(names: Sequence[str], i: int) -> str:
    return names[i] if i < len(names) and names[i] else f"mark {i + 1}"


def fitting(slip: Slip, told: Told, d: Array, within: float) -> Iterator[Hint]:
    """Foretold places that are met, each with how many would be met by chance.

    A shot that lies about as far off by pure chance lies anywhere within twice that
    distance; every foretold place in there is met with the ratio of the areas (of
    the lengths, for heights).
    """
    reach = 2 * float(np.linalg.norm(d))
    near = [move for move, _ in told if float(np.linalg.norm(move)) <= reach]
    chance = len(near) * min(1.0, (within / reach) ** d.size)
    for move, sentence in told:
        left = float(np.linalg.norm(d - move))
        if left <= within:
            yield Hint(slip, left, chance, sentence)


def judged(hints: Sequence[Hint], away: float, words: Words) -> StakeReading:
    told = [hint for hint in hints if hint.by_chance <= CHANCE]
    off = f"{words.length(away)} from its design."
    if not told:
        return StakeReading(
            Verdict.UNDECIDED,
            away,
            tuple(hints),
            f"{off} No usual slip explains it better than chance would.",
        )
    alone = len(told) == 1 or told[1].by_chance > _CLEARLY * told[0].by_chance
    verdict = Verdict.FAIL if alone else Verdict.AMBIGUOUS
    shown = told[:1] if alone else told
    said = " Or: ".join(hint.sentence for hint in shown)
    return StakeReading(verdict, away, tuple(hints), f"{off} {said}")
