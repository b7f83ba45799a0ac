"""Handovers: which stakes were given to whom with which sheet, and what was answered."""

from __future__ import annotations

from collections.abc import Iterable
from uuid import UUID

from jobs.kinds.visits import Signature
from stakes.record import Fact, MarkLink, MatterLink, kind
from stakes.standing import effects


@kind("handed over")
class HandedOver(Fact, frozen=True, kw_only=True):
    """Stakes were given to a company: on site with a signature, declined, or left
    while nobody was there. The duty to preserve them begins here.

    `lacking` names what handover should have waited for and did not.
    """

    handover: UUID
    listed: tuple[UUID, ...]
    company: str
    company_name: str
    to_whom: str = ""
    signature: Signature
    words: str = ""
    left_with: str = ""
    sheets: tuple[UUID, ...] = ()
    explained: tuple[str, ...] = ()
    lacking: tuple[str, ...] = ()
    ask: UUID | None = None
    visit: UUID | None = None

    def marks(self) -> Iterable[MarkLink]:
        return [
            MarkLink(mark, "handed over", effects.HANDED_OVER) for mark in self.listed
        ]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("handover", self.handover)
        if self.ask:
            yield MatterLink("request", self.ask)
        if self.visit:
            yield MatterLink("visit", self.visit)

    def sentence(self) -> str:
        how = {
            "signed": f"signed by {self.to_whom}",
            "declined": f"declined by {self.to_whom}: {self.words}",
            "absent": f"nobody there, left with {self.left_with or 'nobody'}",
        }[self.signature]
        return f"{len(self.listed)} stakes handed over to {self.company_name}, {how}."


@kind("handover answered")
class HandoverAnswered(Fact, frozen=True, kw_only=True):
    """Whoever received stakes acknowledged them later, or declined them with a word."""

    handover: UUID
    acknowledged: bool
    words: str = ""

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("handover", self.handover),)

    def sentence(self) -> str:
        done = "acknowledged" if self.acknowledged else "declined"
        return f"Handover {done}.{' ' + self.words if self.words else ''}"
