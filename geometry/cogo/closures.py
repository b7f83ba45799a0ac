"""Closure classes: how far a traverse or a level line may miss, and by whose rule.

The classes carry their source in words, because many are quoted from memory and a
firm will put its own contract's figures beside them. They are values, not law.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry import checked
from geometry.errors import EmptyInput
from geometry.verdicts import Verdict

_MM_PER_FT_ROOT_MILE = 304.8 / math.sqrt(1.609344)


@dataclass(frozen=True, slots=True)
class TraverseClass:
    """Linear closure at least 1:`ratio`; angles within `angle_seconds` times the
    square root of their number (None: no rule for angles)."""

    name: str
    source: str
    ratio: float
    angle_seconds: float | None


@dataclass(frozen=True, slots=True)
class LevelClass:
    """Misclosure within `mm_per_root_km` times the square root of the kilometres."""

    name: str
    source: str
    mm_per_root_km: float


@dataclass(frozen=True, slots=True)
class Closure:
    """A misclosure against what its class allows; `reason` is a sentence."""

    verdict: Verdict
    reason: str
    class_name: str
    source: str
    misclosure: float
    allowed: float


_WAC = "Washington WAC 332-130-090"
_FGCS = "FGCS 1984, quoted from memory"
_EM = "USACE EM 1110-1-1005, quoted from memory"

TRAVERSE_CLASSES = (
    TraverseClass("1:10,000, angles 10 seconds", _WAC, 10_000, 10.0),
    TraverseClass("1:5,000, angles 30 seconds", _WAC, 5_000, 30.0),
    TraverseClass("first order", _FGCS, 100_000, None),
    TraverseClass("second order, class I", _FGCS, 50_000, None),
    TraverseClass("second order, class II", _FGCS, 20_000, None),
    TraverseClass("third order, class I", _FGCS, 10_000, None),
    TraverseClass("third order, class II", _FGCS, 5_000, None),
    TraverseClass("second order, class I (engineering)", _EM, 50_000, 3.0),
    TraverseClass("second order, class II (engineering)", _EM, 20_000, 5.0),
    TraverseClass("third order, class I (engineering)", _EM, 10_000, 10.0),
    TraverseClass("third order, class II (engineering)", _EM, 5_000, 20.0),
    TraverseClass("construction", _EM, 2_500, 60.0),
)

LEVEL_LOOP_CLASSES = (
    LevelClass("first order, class I", _FGCS, 4.0),
    LevelClass("first order, class II", _FGCS, 5.0),
    LevelClass("second order, class I", _FGCS, 6.0),
    LevelClass("second order, class II", _FGCS, 8.0),
    LevelClass("third order", _FGCS, 12.0),
    LevelClass("second order, class I (feet)", _EM, 0.025 * _MM_PER_FT_ROOT_MILE),
    LevelClass("second order, class II (feet)", _EM, 0.035 * _MM_PER_FT_ROOT_MILE),
    LevelClass("third order (feet)", _EM, 0.050 * _MM_PER_FT_ROOT_MILE),
    LevelClass("construction (feet)", _EM, 0.100 * _MM_PER_FT_ROOT_MILE),
)

LEVEL_SECTION_CLASSES = (
    LevelClass("first order, class I", _FGCS, 3.0),
    LevelClass("first order, class II", _FGCS, 4.0),
    LevelClass("second order, class I", _FGCS, 6.0),
    LevelClass("second order, class II", _FGCS, 8.0),
    LevelClass("third order", _FGCS, 12.0),
)


def linear_closure(misclosure_m: float, length_m: float, by: TraverseClass) -> Closure:
    """A traverse's linear misclosure against its class. Raises OutOfRange, NotFinite.

    >>> linear_closure(0.182, 939.46, TRAVERSE_CLASSES[1]).verdict
    <Verdict.PASS: 'pass'>
    """
    missed = abs(checked.number("misclosure", misclosure_m))
    allowed = checked.positive("traverse length", length_m) / by.ratio
    return _judged(by.name, by.source, missed, allowed, "m")


def angular_closure(misclosure_rad: float, angles: int, by: TraverseClass) -> Closure:
    """An angular misclosure, radians, against its class; allowed is in radians.

    Not tested where the class has no rule for angles. Raises EmptyInput.
    """
    if angles < 1:
        raise EmptyInput("An angular closure needs at least one angle.")
    missed = abs(math.degrees(checked.number("misclosure", misclosure_rad))) * 3600
    if by.angle_seconds is None:
        reason = "The class has no rule for angles."
        return Closure(
            Verdict.NOT_TESTED,
            reason,
            by.name,
            by.source,
            abs(misclosure_rad),
            math.inf,
        )
    allowed = by.angle_seconds * math.sqrt(angles)
    judged = _judged(by.name, by.source, missed, allowed, "seconds")
    radians = math.radians(allowed / 3600)
    return Closure(
        judged.verdict, judged.reason, by.name, by.source, abs(misclosure_rad), radians
    )


def level_closure(misclosure_m: float, length_m: float, by: LevelClass) -> Closure:
    """A level misclosure over `length_m` of line against its class.

    >>> third = LEVEL_LOOP_CLASSES[4]
    >>> round(level_closure(0.020, 4000.0, third).allowed, 6)
    0.024
    """
    missed = abs(checked.number("misclosure", misclosure_m))
    kilometres = checked.positive("length of the line", length_m) / 1000
    allowed = by.mm_per_root_km * math.sqrt(kilometres) / 1000
    return _judged(by.name, by.source, missed, allowed, "m")


def _judged(
    name: str, source: str, missed: float, allowed: float, unit: str
) -> Closure:
    within = missed <= allowed * (1 + 1e-12)
    word = "within" if within else "more than"
    digits = 1 if unit == "seconds" else 4
    reason = (
        f"It misses by {missed:.{digits}f} {unit}, {word} the "
        f"{allowed:.{digits}f} {unit} allowed by {name}."
    )
    verdict = Verdict.PASS if within else Verdict.FAIL
    return Closure(verdict, reason, name, source, missed, allowed)
