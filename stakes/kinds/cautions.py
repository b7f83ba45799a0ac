"""Facts of safety: utility locates, hazards of the site, cautions acknowledged.

They say what was asked and answered; whether it is safe to dig is decided by local
code, the competent person on site and the licensed surveyor, never by a record.
"""

from __future__ import annotations

from collections.abc import Iterable
from datetime import datetime
from typing import Literal
from uuid import UUID

import msgspec

from stakes.record.kinds import Fact, MarkLink, MatterLink, kind

OwnerAnswer = Literal["marked", "clear", "no answer yet", "conflict"]
Private = Literal["marked", "none there", "not asked"]
Hazard = Literal["traffic", "overhead line", "rail", "moving plant"]


class UtilityOwner(msgspec.Struct, frozen=True, kw_only=True):
    """One owner of lines under the ground and what they answered to the locate."""

    owner: str
    answer: OwnerAnswer
    remark: str = ""


@kind("locate ticket recorded")
class LocateRecorded(Fact, kw_only=True):
    """A utility locate was asked for: whose ticket, where, from when to when it holds.

    `zone` is the polygon of the plan it covers, none: the whole job. Lines owned by
    nobody who answers to the one-call centre are asked for apart (`private_lines`).
    Recording it again under the same key replaces it, as when owners have answered.
    """

    ticket: UUID
    number: str
    whose: str
    area: str
    valid_from: datetime
    valid_to: datetime
    zone: UUID | None = None
    owners: tuple[UtilityOwner, ...] = ()
    private_lines: Private = "not asked"
    private_by: str = ""
    occasion: UUID | None = None

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("locate", self.ticket)
        if self.zone:
            yield MatterLink("zone", self.zone)
        if self.occasion:
            yield MatterLink("visit", self.occasion)

    def sentence(self) -> str:
        return f"Locate ticket {self.number} of {self.whose} recorded: {self.area}."


@kind("hazard flagged")
class HazardFlagged(Fact, kw_only=True):
    """A hazard of the site was flagged, so that crews are told before they work."""

    hazard: UUID
    sort: Hazard
    words: str
    gone: bool = False

    def matters(self) -> Iterable[MatterLink]:
        return [MatterLink("hazard", self.hazard)]

    def sentence(self) -> str:
        state = "no longer there" if self.gone else "flagged"
        return f"Hazard {state}: {self.sort}. {self.words}".strip()


@kind("caution read")
class CautionRead(Fact, kw_only=True):
    """A caution was shown to a crew before an act, and somebody said they read it."""

    sort: str
    words: str
    listed: tuple[UUID, ...] = ()
    occasion: UUID | None = None

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "caution read") for m in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        return [MatterLink("visit", self.occasion)] if self.occasion else []

    def sentence(self) -> str:
        return f"Caution read, {self.sort}: {self.words}"
