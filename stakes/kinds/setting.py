"""Facts of setting: a stake driven, what holds it, where it came to stand."""

from __future__ import annotations

from collections.abc import Iterable
from uuid import UUID

import msgspec

from stakes.kinds.photos import photo_links
from stakes.kinds.words import COMPONENTS, Carries, OldStake
from stakes.record.kinds import Fact, MarkLink, MatterLink, kind
from stakes.record.lengths import Measured
from stakes.standing import effects


class WayUsed(msgspec.Struct, frozen=True, kw_only=True):
    """The way back that was chosen: its method, marks, numbers, prediction, reason."""

    method: str
    marks: tuple[UUID, ...] = ()
    numbers: tuple[str, ...] = ()
    predicted: str = ""
    reason: str = ""


@kind("set")
class StakeSet(Fact, kw_only=True):
    """A stake was set for a mark: from which setup, what holds it, as-staked values.

    `old` says what became of the stake before it. `gates` names what should have held
    and did not; such a stake is held until the surveyor accepts it or an independent
    check passes. `provisional` stakes were put back from survivors alone.
    """

    mark: UUID
    setup: UUID | None = None
    carries: Carries = "both"
    holds: str = ""
    northing: Measured | None = None
    easting: Measured | None = None
    elevation: Measured | None = None
    off_north: Measured | None = None
    off_east: Measured | None = None
    off_up: Measured | None = None
    cut: Measured | None = None
    refers_to: str = ""
    label: str = ""
    plain: str = ""
    capped: bool = False
    old: OldStake = "first"
    way: WayUsed | None = None
    match: str = ""
    gates: tuple[str, ...] = ()
    authorised_by: str = ""
    provisional: bool = False
    remark: str = ""
    occasion: UUID | None = None
    ask: UUID | None = None
    method: str = ""
    photos: tuple[str, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.stake_set(
            self.setup,
            COMPONENTS[self.carries],
            self.old,
            held=bool(self.gates),
            provisional=self.provisional,
        )
        yield MarkLink(self.mark, "set", effect)
        if self.way:
            yield from (MarkLink(m, "set from") for m in self.way.marks)

    def matters(self) -> Iterable[MatterLink]:
        if self.setup:
            yield MatterLink("setup", self.setup)
        if self.occasion:
            yield MatterLink("visit", self.occasion)
        if self.ask:
            yield MatterLink("request", self.ask)
        yield from photo_links(self.photos)

    def sentence(self) -> str:
        how = f" by {self.way.method}" if self.way else ""
        held = ", held: " + "; ".join(self.gates) if self.gates else ""
        return f"Set{how}{', ' + self.holds if self.holds else ''}{held}."


@kind("gate accepted")
class GateAccepted(Fact, kw_only=True):
    """The surveyor accepted what had passed a gate, with a reason."""

    listed: tuple[UUID, ...]
    reason: str

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "accepted", effects.ACCEPTED) for m in self.listed]

    def sentence(self) -> str:
        return f"Accepted by the surveyor: {self.reason}"


@kind("old stakes pulled")
class OldStakesPulled(Fact, kw_only=True):
    """Older stakes of a mark, left beside the one that counts, were pulled."""

    listed: tuple[UUID, ...]
    occasion: UUID | None = None

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "old stake pulled", effects.PULLED) for m in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        return [MatterLink("visit", self.occasion)] if self.occasion else []
