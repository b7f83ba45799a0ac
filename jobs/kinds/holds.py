"""Holds: do not build from these until re-checked. Neutral words; who heard, who not."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Literal
from uuid import UUID

from stakes.record import Fact, MarkLink, MatterLink, kind
from stakes.standing import effects


@kind("hold sent")
class HoldSent(Fact, frozen=True, kw_only=True):
    """The surveyor, or the firm's rule after nobody answered, asked that nothing be
    built from these marks until they are re-checked."""

    hold: UUID
    listed: tuple[UUID, ...]
    to_companies: tuple[str, ...] = ()
    words: str = ""
    reason: str = ""
    sent_by_rule: bool = False

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.hold_sent(self.hold)
        return [MarkLink(mark, "held", effect) for mark in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("hold", self.hold),)

    def sentence(self) -> str:
        return f"Hold pending re-check sent for {len(self.listed)} marks."


@kind("hold lifted")
class HoldLifted(Fact, frozen=True, kw_only=True):
    """A hold was lifted for these marks; what is left of it stays in force."""

    hold: UUID
    listed: tuple[UUID, ...]
    reason: str

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.hold_lifted(self.hold)
        return [MarkLink(mark, "hold lifted", effect) for mark in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("hold", self.hold),)

    def sentence(self) -> str:
        return f"Hold lifted for {len(self.listed)} marks: {self.reason}"


@kind("hold heard")
class HoldHeard(Fact, frozen=True, kw_only=True):
    """Somebody was told of a hold, read it, or acknowledged it."""

    hold: UUID
    how: Literal["told", "read", "acknowledged"]
    company: str = ""
    company_name: str = ""
    by_whom: str = ""
    words: str = ""

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("hold", self.hold),)

    def sentence(self) -> str:
        return f"Hold {self.how} by {self.by_whom or self.company_name}."
