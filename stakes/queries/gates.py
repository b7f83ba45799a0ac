"""Gates: what should hold before a setup is opened or a stake is driven.

Pure rules on what the record says. A gate stops an act before it is done and never
refuses the record of something done: what passed one is held until the surveyor accepts
it or an independent check passes. `hard` is the one that nobody may go past.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import datetime

from stakes.kinds.setups import SetupCheck
from stakes.models import Direction, Question, Setup, Sheet
from stakes.queries.locates import Ticket, valid_ticket
from stakes.queries.state import MarkView
from stakes.standing.marks import Standing, Trust

INSTRUMENTS = frozenset(
    {"total station on a mark", "free station", "satellite", "level run", "laser"}
)
"""Setups that cannot be opened without a check on a mark they do not lean on."""

LEVELS = frozenset({"level run", "laser"})

NOT_BY_SATELLITE = ("anchor", "finish", "pipe", "sewer", "crane", "machine base")
"""Words of work whose elevations satellites are not for without a levelled check."""


@dataclass(frozen=True, slots=True)
class Gate:
    """What should have held (`name`), what the record says instead, and what would do."""

    name: str
    why: str
    do: str = ""
    hard: bool = False

    @property
    def words(self) -> str:
        """As the entry of an act that passed it keeps it."""
        return f"{self.name}: {self.why}"


@dataclass(frozen=True, slots=True)
class Leaned:
    """A mark a setup leans on, and for which components."""

    view: MarkView
    role: str
    components: str


@dataclass(frozen=True, slots=True)
class SettingAsked:
    """All that the gates of setting one stake look at."""

    view: MarkView
    at: datetime
    setup: Setup | None = None
    setup_doubt: str = ""
    heights: Sequence[MarkView] = ()
    questions: Sequence[Question] = ()
    directions: Sequence[Direction] = ()
    sheets: Sequence[Sheet] = ()
    breaks_ground: bool = True
    tickets: Sequence[Ticket] = ()
    another_way: str = ""


def for_opening(
    sort: str,
    leaned: Sequence[Leaned],
    checks: Iterable[SetupCheck],
    *,
    misfit: str = "",
    closed_run: bool = False,
) -> list[Gate]:
    """What should hold before a setup is opened."""
    made = [c for c in checks if not c.oriented_on]
    gates = [gate for each in leaned for gate in _control(each)]
    if misfit:
        gates.append(Gate("sights disagree", misfit, "Sight the marks again."))
    if sort in INSTRUMENTS and not made:
        gates.append(
            Gate(
                "no opening check",
                "nothing was measured to a mark it does not lean on",
                "Measure to one more mark.",
            )
        )
    if sort in LEVELS and not closed_run:
        gates += _second_benchmark(
            {each.view.key for each in leaned} | {c.mark for c in made}
        )
    return gates


def for_setting(asked: SettingAsked) -> list[Gate]:
    """What should hold before a stake is driven for a mark."""
    return [
        *_locate(asked),
        *_plan(asked),
        *_setup(asked),
        *_heights(asked),
    ]


def _control(each: Leaned) -> list[Gate]:
    view, found = each.view, []
    if view.plan.purpose == "foreign" and view.plan.value is None:
        found.append(_not_verified(f"{view.label} was set by others and not adopted"))
    elif view.standing is not Standing.STANDING:
        found.append(_not_verified(f"{view.label} is {view.standing}"))
    for component in each.components:
        judged = view.position if component == "p" else view.elevation
        if judged.trust is not Trust.CHECKED and not found:
            reason = f", {judged.reason}" if judged.reason else ""
            found.append(_not_verified(f"{view.label} is {judged.trust}{reason}"))
    return found


def _not_verified(why: str) -> Gate:
    return Gate(
        "control not verified", why, "Use verified control, or have this mark checked."
    )


def _second_benchmark(marks: set[object]) -> list[Gate]:
    if len(marks) > 1:
        return []
    return [
        Gate(
            "single benchmark for elevation",
            "heights were taken from one benchmark only",
            "Read a second benchmark, or close the run on the first.",
        )
    ]


def _locate(asked: SettingAsked) -> list[Gate]:
    if not asked.breaks_ground:
        return []
    ticket, why = valid_ticket(asked.tickets, asked.view.plan, asked.at)
    if ticket is not None:
        return []
    return [
        Gate(
            "no valid utility locate",
            why,
            "Record the ticket and the owners' answers, or mark without breaking "
            "the ground.",
            hard=True,
        )
    ]


def _plan(asked: SettingAsked) -> list[Gate]:
    gates = []
    if asked.view.standing is Standing.RETIRED:
        gates.append(
            Gate(
                "mark retired", "its stage is done", "Ask the office to issue it again."
            )
        )
    for question in asked.questions:
        why = f"to {question.to_whom}, not answered yet: {question.words}"
        gates.append(Gate("question open", why, "Wait for the designer's answer."))
    for direction in asked.directions:
        why = f"from {direction.by_whom}, not confirmed in writing: {direction.words}"
        gates.append(Gate("verbal direction", why, "Wait for it in writing."))
    for sheet in asked.sheets:
        why = f"sheet {sheet.sheet_number} revision {sheet.revision}"
        why += " touches it" if not sheet.touches_all else " is not sorted to marks yet"
        gates.append(
            Gate("newer sheet", why, "Ask the office to issue the mark from it.")
        )
    return gates


def _setup(asked: SettingAsked) -> list[Gate]:
    setup = asked.setup
    if setup is None:
        if asked.another_way:
            return []
        why = "nothing says from what it would be set"
        return [Gate("no setup", why, "Open a setup first.")]
    if setup.closed_at is not None and asked.at > setup.closed_at:
        return [Gate("setup closed", "it was closed before", "Open a setup again.")]
    if asked.setup_doubt:
        return [Gate("setup in question", asked.setup_doubt, "Set up and check again.")]
    return []


def _heights(asked: SettingAsked) -> list[Gate]:
    if asked.setup is None or asked.view.plan.carries == "position":
        return []
    if asked.setup.sort == "satellite":
        return _satellite_height(asked.view)
    if asked.setup.sort in LEVELS:
        return []
    return _second_benchmark({view.key for view in asked.heights})


def _satellite_height(view: MarkView) -> list[Gate]:
    work = f"{view.plan.sort} {view.plan.tolerance} {view.plan.refers_to}".lower()
    if not any(word in work for word in NOT_BY_SATELLITE):
        return []
    return [
        Gate(
            "height by satellite",
            "it is not for finish grade, anchor rods or pipe grade",
            "Level it from two benchmarks.",
        )
    ]
