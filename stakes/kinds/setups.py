"""Facts of a setup: opened with a check, re-checked, closed with a check."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Literal
from uuid import UUID

import msgspec

from stakes.kinds.words import Component, Verdict
from stakes.record.kinds import Fact, MarkLink, MatterLink, kind
from stakes.record.lengths import Measured
from stakes.standing import effects

Sort = Literal[
    "total station on a mark",
    "free station",
    "satellite",
    "level run",
    "tape",
    "string",
    "laser",
]


class UsedMark(msgspec.Struct, frozen=True, kw_only=True):
    """A mark a setup leans on, in which role, by which of its values."""

    mark: UUID
    role: Literal["occupied", "oriented on", "known", "benchmark", "held"]
    value: UUID | None = None


class SetupCheck(msgspec.Struct, frozen=True, kw_only=True):
    """One check of a setup: measured against what the record computes.

    `oriented_on` says that the mark is one the setup leans on: such a check cannot
    prove the mark, and alone it cannot open a setup. `northing` and `easting` are the
    place measured in a check of position.
    """

    mark: UUID
    quantity: Literal["distance", "direction", "position", "elevation"]
    measured: Measured | None = None
    computed: Measured | None = None
    difference: Measured | None = None
    tolerance: Measured | None = None
    uncertainty: Measured | None = None
    northing: Measured | None = None
    easting: Measured | None = None
    components: Component = "p"
    reason: str = ""
    oriented_on: bool = False
    verdict: Verdict
    remark: str = ""


def verdict_of(checks: Iterable[SetupCheck]) -> str:
    """One word for several checks: any failure fails; none made is "none"."""
    verdicts = {check.verdict for check in checks if not check.oriented_on}
    for word in ("fail", "undecided", "pass"):
        if word in verdicts:
            return word
    return "none"


def _checked_marks(checks: Iterable[SetupCheck], setup: UUID) -> list[MarkLink]:
    return [
        MarkLink(
            c.mark,
            "check sighted",
            effects.checked(
                c.verdict, c.components, 0 if c.oriented_on else 1, ("place",), setup
            ),
        )
        for c in checks
    ]


@kind("setup opened")
class SetupOpened(Fact, kw_only=True):
    """A means of measuring was made ready from named marks and checked on another.

    `gates` names what should have held and did not (no check, control not verified);
    what is set from it is then held until the surveyor accepts it or a check clears it.
    `northing` and `easting` are the place computed for a free station, `elevation` the
    height of the instrument's line of sight.
    """

    setup: UUID
    sort: Sort
    used: tuple[UsedMark, ...] = ()
    instrument: str = ""
    serial: str = ""
    calibrated_on: str = ""
    instrument_height: Measured | None = None
    target_height: Measured | None = None
    prism_constant: Measured | None = None
    checks: tuple[SetupCheck, ...] = ()
    residuals: tuple[str, ...] = ()
    fix: str = ""
    northing: Measured | None = None
    easting: Measured | None = None
    elevation: Measured | None = None
    weather: str = ""
    gates: tuple[str, ...] = ()
    authorised_by: str = ""
    remark: str = ""
    occasion: UUID | None = None

    def marks(self) -> Iterable[MarkLink]:
        yield from (MarkLink(u.mark, u.role) for u in self.used)
        yield from _checked_marks(self.checks, self.setup)

    def matters(self) -> Iterable[MatterLink]:
        verdict = verdict_of(self.checks)
        yield MatterLink("setup", self.setup, effects.setup_event("open", verdict))
        if self.occasion:
            yield MatterLink("visit", self.occasion)

    def sentence(self) -> str:
        return f"Setup opened: {self.sort}, {_check_words(self.checks)}."


@kind("setup re-checked")
class SetupRechecked(Fact, kw_only=True):
    """A setup was checked again: each hour, after a bump, before moving."""

    setup: UUID
    checks: tuple[SetupCheck, ...]
    remark: str = ""
    occasion: UUID | None = None

    def marks(self) -> Iterable[MarkLink]:
        return _checked_marks(self.checks, self.setup)

    def matters(self) -> Iterable[MatterLink]:
        verdict = verdict_of(self.checks)
        yield MatterLink("setup", self.setup, effects.setup_event("recheck", verdict))
        if self.occasion:
            yield MatterLink("visit", self.occasion)

    def sentence(self) -> str:
        return f"Setup re-checked, {_check_words(self.checks)}."


@kind("setup closed")
class SetupClosed(Fact, kw_only=True):
    """A setup was closed; without a closing check what it set last stays unproved."""

    setup: UUID
    checks: tuple[SetupCheck, ...] = ()
    remark: str = ""
    occasion: UUID | None = None

    def marks(self) -> Iterable[MarkLink]:
        return _checked_marks(self.checks, self.setup)

    def matters(self) -> Iterable[MatterLink]:
        verdict = verdict_of(self.checks)
        yield MatterLink("setup", self.setup, effects.setup_event("close", verdict))
        if self.occasion:
            yield MatterLink("visit", self.occasion)

    def sentence(self) -> str:
        return f"Setup closed, {_check_words(self.checks)}."


def _check_words(checks: Iterable[SetupCheck]) -> str:
    return {
        "pass": "its check passed",
        "fail": "its check failed",
        "undecided": "its check is undecided",
        "none": "no check recorded",
    }[verdict_of(checks)]
