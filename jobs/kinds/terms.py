"""Terms of a job. Each change names the day it takes effect; the old stay readable.

What counts on a day is the setting with the latest such day that is not after it.
"""

from __future__ import annotations

from collections.abc import Iterable
from datetime import date, time
from typing import Annotated, ClassVar, Literal
from uuid import UUID

import msgspec

from geometry.decide import Reach, Rule
from geometry.units import Unit
from stakes.record import Fact, MatterLink, kind
from stakes.record.lengths import Measured


class Term(Fact, frozen=True, kw_only=True):
    """One setting of one subject; `effective` is a day of the job."""

    SUBJECT: ClassVar[str] = ""

    term: UUID
    effective: date

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("term", self.term),)


@kind("unit and zone set")
class UnitAndZoneSet(Term, frozen=True, kw_only=True):
    """Unit and time zone of the job; possible only while it has no marks."""

    SUBJECT = "unit and zone"

    unit: Unit
    zone: str

    def sentence(self) -> str:
        return f"Measured in {self.unit.plural}, in the time of {self.zone}."


@kind("frame set")
class FrameSet(Term, frozen=True, kw_only=True):
    """The coordinate frame as the sheets name it. `combined_factor`: grid over ground,
    as printed; empty when coordinates are ground distances."""

    SUBJECT = "frame"

    frame: str
    combined_factor: str = ""

    def sentence(self) -> str:
        factor = f", combined factor {self.combined_factor}"
        return f"Frame: {self.frame}{factor if self.combined_factor else ''}."


class NoticeRule(msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """How much notice a request gives before the crew can be expected.

    What comes in after `cut_off` or on a day that is no working day counts as received
    when the next working day begins, at `day_begins`. `weekdays`: Monday is 0.
    """

    count: Annotated[int, msgspec.Meta(ge=0, le=1000)]
    of: Literal["business days", "hours"]
    cut_off: time = time(15)
    day_begins: time = time(7)
    weekdays: Annotated[
        tuple[Annotated[int, msgspec.Meta(ge=0, le=6)], ...], msgspec.Meta(min_length=1)
    ] = (0, 1, 2, 3, 4)
    holidays: tuple[date, ...] = ()


@kind("notice rule set")
class NoticeRuleSet(Term, frozen=True, kw_only=True):
    """The notice the firm was given the right to."""

    SUBJECT = "notice"

    rule: NoticeRule
    source: str = ""

    def sentence(self) -> str:
        of = self.rule.of if self.rule.count != 1 else self.rule.of.rstrip("s")
        return f"Notice is {self.rule.count} {of}, cut-off {self.rule.cut_off:%H:%M}."


class ToleranceClass(
    msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True
):
    """What stakes of one kind of work are held to.

    `rule`: how a difference is judged; `reaches` and `grade`: what their checks must
    see and how independent they must be; `default`: nobody confirmed it by contract.
    """

    key: UUID
    name: str
    position: Measured | None = None
    elevation: Measured | None = None
    rule: Rule = Rule.SIMPLE
    reaches: tuple[Reach, ...] = ()
    grade: Annotated[int, msgspec.Meta(ge=0, le=3)] = 1
    source: str = ""
    default: bool = False


@kind("tolerance classes set")
class ToleranceClassesSet(Term, frozen=True, kw_only=True):
    """The whole list of tolerance classes of the job."""

    SUBJECT = "tolerances"

    classes: tuple[ToleranceClass, ...]

    def sentence(self) -> str:
        names = ", ".join(c.name for c in self.classes)
        return f"Tolerance classes: {names or 'none'}."


class Payer(msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """Who pays for setting again what was lost from one cause."""

    cause: str
    payer: str
    approval: bool = False


@kind("re-stake terms set")
class RestakeTermsSet(Term, frozen=True, kw_only=True):
    """Who pays to set stakes again, by cause; for one company, or for all (no company).
    What it costs is a private part, `price`, outside the hashed body."""

    SUBJECT = "re-stake"

    payers: tuple[Payer, ...]
    company: str = ""
    company_name: str = ""

    def sentence(self) -> str:
        whose = self.company_name or "all contractors"
        return f"Terms for setting stakes again were agreed for {whose}."


@kind("hold time set")
class HoldTimeSet(Term, frozen=True, kw_only=True):
    """How long a proposed hold waits for the surveyor before it goes out by itself."""

    SUBJECT = "hold time"

    minutes: Annotated[int, msgspec.Meta(ge=0, le=1440)]

    def sentence(self) -> str:
        return f"A proposed hold waits {self.minutes} minutes for the surveyor."
