"""A check in sentences: what was measured, what was expected, what decides, what it is
worth and what it cannot see."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from geometry.units import Length, Unit
from stakes.kinds.checking import Judgement, StakeChecked
from stakes.kinds.setups import SetupCheck
from stakes.queries.setups import SetupStory
from stakes.queries.state import JobState
from stakes.record import Counted
from stakes.record.lengths import Measured

FACTOR_95 = 1.96
FACTOR_95_PLACE = 2.45
"""From the standard uncertainty to its 95 % half-width, of a number and of a place."""

GRADES = {
    0: "It was made in the same setup, so it repeats that setup's errors.",
    1: "It is a new setup on the same control.",
    2: "It rests on other control, or was made by another method.",
    3: "It rests on other control and another person measured.",
}
REACHES = {
    "shape": "how the stakes lie to each other",
    "place": "whether they stand in the right place",
    "fit": "whether they fit what is built or bounded",
    "height": "whether their height is right",
}


@dataclass(frozen=True, slots=True)
class Numbers:
    """The numbers of one verdict as they are shown, each with its unit."""

    rows: tuple[tuple[str, str], ...]
    verdict: str
    reason: str


@dataclass(frozen=True, slots=True)
class CheckShown:
    """One check of a setup, as its page shows it."""

    when: Counted
    event: str
    label: str
    quantity: str
    numbers: Numbers
    remark: str
    leans: bool


def numbers_of(judged: Judgement | SetupCheck, unit: Unit, *, place: bool) -> Numbers:
    """What a verdict rests on, in the unit of the job."""
    factor = FACTOR_95_PLACE if place else FACTOR_95
    rows = [
        ("Measured", _shown(judged.measured, unit)),
        ("Expected", _shown(judged.computed, unit)),
        ("Difference", _shown(judged.difference, unit, sign=not place)),
        ("Tolerance", _within(judged.tolerance)),
        ("Uncertainty, 95 %", _wide(judged.uncertainty, unit, factor)),
    ]
    return Numbers(
        rows=tuple((name, text) for name, text in rows if text),
        verdict=judged.verdict,
        reason=judged.reason,
    )


def setup_checks(story: SetupStory, state: JobState) -> list[CheckShown]:
    """Every check of a setup, in order."""
    names = {"setup opened": "opening", "setup re-checked": "re-check"}
    unit = state.record.length_unit
    return [
        CheckShown(
            when=counted,
            event=names.get(counted.kind, "closing"),
            label=state.marks[check.mark].label if check.mark in state.marks else "?",
            quantity=check.quantity,
            numbers=numbers_of(check, unit, place=check.quantity == "position"),
            remark=check.remark,
            leans=check.oriented_on,
        )
        for counted, check in story.checks
    ]


def worth_of(fact: StakeChecked) -> dict[str, Any]:
    """What a check of stakes is worth and what it can see, in sentences."""
    seen = [REACHES[str(r)] for r in fact.reaches]
    blind = [words for name, words in REACHES.items() if name not in fact.reaches]
    return {
        "grade": fact.grade,
        "grade_words": GRADES[fact.grade],
        "shared": ", ".join(fact.shared),
        "sees": "; ".join(seen),
        "blind": "; ".join(blind),
    }


def _shown(length: Measured | None, unit: Unit, *, sign: bool = False) -> str:
    if length is None:
        return ""
    text = length.length.shown(unit, 3 if unit.is_foot else 4)
    plus = "+" if sign and not text.startswith("-") and float(text) else ""
    return f"{plus}{text} {unit}"


def _within(tolerance: Measured | None) -> str:
    return f"± {tolerance.text} {tolerance.unit}" if tolerance else ""


def _wide(uncertainty: Measured | None, unit: Unit, factor: float) -> str:
    if uncertainty is None:
        return ""
    wide = Length.from_metres(
        uncertainty.metres * factor, unit, 3 if unit.is_foot else 4
    )
    return f"± {wide.text} {unit}"
