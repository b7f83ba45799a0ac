"""An adjustment in sentences a party chief understands, built from its result."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

from geometry.adjust.measurements import MeasurementReport
from geometry.adjust.report import LevelAdjustment, NetworkAdjustment
from geometry.verdicts import Verdict

Say = Callable[[float], str]

COMPASS = (
    *("north", "north-east", "east", "south-east"),
    *("south", "south-west", "west", "north-west"),
)


def millimetres(length_m: float) -> str:
    """A small length in whole millimetres.

    >>> millimetres(0.0314)
    '31 mm'
    """
    return f"{1000 * length_m:.0f} mm"


def metres(length_m: float) -> str:
    """A length in metres to the millimetre.

    >>> metres(84.1234)
    '84.123 m'
    """
    return f"{length_m:.3f} m"


def listed(words: Sequence[str], last: str = "and") -> str:
    """Words in a row, at most six of them.

    >>> listed(["A", "B", "C"]), listed(["A", "B"], "or")
    ('A, B and C', 'A or B')
    """
    shown = list(words[:6])
    if len(words) > 6:
        shown.append(f"{len(words) - 6} more")
    if len(shown) < 2:
        return "".join(shown)
    return ", ".join(shown[:-1]) + f" {last} " + shown[-1]


def compass(east_m: float, north_m: float) -> str:
    """The way of a small move, by eight points of the compass.

    >>> compass(0.02, 0.001), compass(-1, -1)
    ('east', 'south-west')
    """
    return COMPASS[round(math.atan2(east_m, north_m) / (math.pi / 4)) % 8]


def say_adjustment(
    adjusted: NetworkAdjustment | LevelAdjustment, *, small: Say = millimetres
) -> str:
    """What the adjustment found, in a few sentences; `small` words a small length.

    >>> from geometry.adjust import HeightDifference, adjust_levels
    >>> runs = [HeightDifference("A", "B", 1.0, 0.001)]
    >>> say_adjustment(adjust_levels(runs, fixed={"A": 100.0}))
    'There is no measurement to spare: nothing checks. Nothing checks B.'
    """
    parts = [_opening(adjusted)]
    for number in adjusted.set_aside[:6]:
        parts.append(say_measurement(adjusted.measurements[number], small=small))
    for group in adjusted.ambiguous:
        words = [adjusted.measurements[i].words for i in group]
        parts.append(
            f"One of these is wrong, and nothing tells which: {listed(words, 'or')}."
            " Measure one of them again."
        )
    for known in adjusted.known:
        if known.verdict == Verdict.FAIL:
            off = math.hypot(*known.difference_m)
            parts.append(f"There it is {small(off)} off.")
    if adjusted.unchecked:
        parts.append(f"Nothing checks {listed(adjusted.unchecked)}.")
    return " ".join(parts)


def _opening(adjusted: NetworkAdjustment | LevelAdjustment) -> str:
    if not adjusted.dof:
        return adjusted.reason
    spare = f"{len(adjusted.measurements)} measurements, {adjusted.dof} to spare."
    return f"{spare} {adjusted.reason}"


def say_measurement(report: MeasurementReport, *, small: Say = millimetres) -> str:
    """One measurement: whether it fits, what it is off by, what it could hide.

    >>> from geometry.adjust import HeightDifference, adjust_levels
    >>> runs = [HeightDifference("A", "B", 1.0, 0.001)] * 2
    >>> net = adjust_levels(runs, fixed={"A": 100.0})
    >>> say_measurement(net.measurements[0])
    'Levels A to B fits; an error of 6 mm would have been seen.'
    """
    name = report.words[0].upper() + report.words[1:]
    if report.verdict == Verdict.NOT_TESTED:
        return f"{name}: nothing checks it."
    if report.verdict == Verdict.AMBIGUOUS:
        return f"{name}: it or another is wrong."
    off = abs(report.error_m or 0.0)
    if report.verdict == Verdict.FAIL:
        aside = " and was set aside" if report.set_aside else ""
        return f"{name} is off by about {small(off)}{aside}."
    scale = report.sight_m if report.unit == "rad" else 1.0
    seen = small((report.detectable or 0.0) * scale)
    return f"{name} fits; an error of {seen} would have been seen."
