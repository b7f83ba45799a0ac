"""Facts of condition: seen and undisturbed, lath down, leaning, hit, gone, foreign."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Literal
from uuid import UUID

from stakes.kinds.photos import photo_links
from stakes.kinds.words import Component
from stakes.record.kinds import Fact, MarkLink, MatterLink, kind
from stakes.record.lengths import Measured
from stakes.standing import effects

Condition = Literal[
    "undisturbed", "lath down, hub there", "leaning", "hit", "put back by others"
]


@kind("seen")
class MarksSeen(Fact, kw_only=True):
    """Marks were seen: a sighting extends *last seen*, never *last checked*.

    A lath down beside a hub that is there is no loss. Leaning, hit and put back by
    others cast doubt on `components` until a check passes.
    """

    listed: tuple[UUID, ...]
    condition: Condition
    components: Component = "pe"
    cause: str = ""
    told_by: str = ""
    remark: str = ""
    occasion: UUID | None = None
    photos: tuple[str, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        match self.condition:
            case "undisturbed":
                effect = effects.seen()
            case "lath down, hub there":
                effect = effects.seen(lath_down=True)
            case how:
                effect = effects.disturbed(how, self.components)
        return [MarkLink(m, "seen", effect) for m in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        if self.occasion:
            yield MatterLink("visit", self.occasion)
        yield from photo_links(self.photos)

    def sentence(self) -> str:
        return f"Seen: {self.condition}{', ' + self.cause if self.cause else ''}."


@kind("destroyed")
class MarksGone(Fact, kw_only=True):
    """Marks were destroyed before somebody's eyes, or found missing.

    Nobody usually sees a stake go: what is known is last seen and first missing.
    Causes are facts in neutral words, with who says so.
    """

    listed: tuple[UUID, ...]
    witnessed: bool = False
    cause: str = ""
    cause_by: str = ""
    disputed: bool = False
    told_by: str = ""
    remark: str = ""
    occasion: UUID | None = None
    ask: UUID | None = None
    photos: tuple[str, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.gone(self.witnessed)
        return [MarkLink(m, "gone", effect) for m in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        if self.occasion:
            yield MatterLink("visit", self.occasion)
        if self.ask:
            yield MatterLink("request", self.ask)
        yield from photo_links(self.photos)

    def sentence(self) -> str:
        how = "Destroyed" if self.witnessed else "Found missing"
        return f"{how}{': ' + self.cause if self.cause else ''}."


@kind("foreign mark found")
class ForeignMarkFound(Fact, kw_only=True):
    """A mark set by others was found: it may be shot and compared, never be a basis
    until the surveyor adopts a value for it."""

    mark: UUID
    label: str
    words: str = ""
    northing: Measured | None = None
    easting: Measured | None = None
    elevation: Measured | None = None
    set_by: str = ""
    setup: UUID | None = None
    occasion: UUID | None = None
    photos: tuple[str, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        yield MarkLink(self.mark, "found", effects.planned(moved=False))
        yield MarkLink(self.mark, "seen", effects.seen())

    def matters(self) -> Iterable[MatterLink]:
        if self.setup:
            yield MatterLink("setup", self.setup)
        if self.occasion:
            yield MatterLink("visit", self.occasion)
        yield from photo_links(self.photos)

    def sentence(self) -> str:
        return f"Foreign mark {self.label} found. {self.words}".strip()


@kind("built from")
class BuiltFrom(Fact, kw_only=True):
    """Work was built from stakes: who says so, what, when."""

    listed: tuple[UUID, ...]
    what: str
    told_by: str = ""

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "built from", effects.BUILT_FROM) for m in self.listed]

    def sentence(self) -> str:
        return f"Built from it: {self.what}."
