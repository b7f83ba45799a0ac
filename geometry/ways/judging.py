"""What was actually measured at a way's checks, held against what it should be."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from geometry.decide import Decision, Rule, decide
from geometry.errors import WrongShape
from geometry.verdicts import Verdict
from geometry.ways.way import Way


@dataclass(frozen=True, slots=True)
class Outcome:
    """`decisions` in the order of the way's checks, None where not measured.

    Fail when one fails; undecided when one is; pass when at least one was measured and
    none is worse; not tested when none was. `provisional` repeats that the mark rests
    on stakes and stays not checked until it is tied to control.
    """

    verdict: Verdict
    decisions: tuple[Decision | None, ...]
    provisional: bool
    reason: str


def judged(
    way: Way, measured: Sequence[float | None], *, rule: Rule = Rule.SIMPLE
) -> Outcome:
    """Compare measured check values (metres or radians, as each check's `unit`).

    Raises WrongShape when there are not as many values as checks, NotFinite.
    """
    if len(measured) != len(way.checks):
        raise WrongShape(
            "There must be one value per check, None where not measured.",
            where=f"There are {len(measured)} for {len(way.checks)} checks.",
        )
    decisions = tuple(
        None
        if value is None
        else decide(
            _difference(value, check.expected, check.unit),
            check.tolerance,
            check.sd,
            rule=rule,
        )
        for value, check in zip(measured, way.checks, strict=True)
    )
    verdicts = {d.verdict for d in decisions if d is not None}
    if not verdicts:
        return Outcome(
            Verdict.NOT_TESTED, decisions, way.provisional, "No check was measured."
        )
    for worst, reason in (
        (Verdict.FAIL, "A check disagrees: find out which mark moved before going on."),
        (Verdict.UNDECIDED, "A check is too close to the tolerance to decide."),
    ):
        if worst in verdicts:
            return Outcome(worst, decisions, way.provisional, reason)
    reason = "The checks agree."
    if way.provisional:
        reason += " It rests on stakes: not checked until tied to control."
    return Outcome(Verdict.PASS, decisions, way.provisional, reason)


def _difference(measured: float, expected: float, unit: str) -> float:
    difference = float(measured) - expected
    if unit != "rad":
        return difference
    turn = 6.283185307179586
    return (difference + turn / 2) % turn - turn / 2
