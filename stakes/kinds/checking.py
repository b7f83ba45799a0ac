"""Facts of checking: a measurement compared with what the record computes."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Literal
from uuid import UUID

import msgspec

from stakes.kinds.photos import photo_links
from stakes.kinds.words import Component, Reach, Verdict
from stakes.record.kinds import Fact, MarkLink, MatterLink, kind
from stakes.record.lengths import Measured
from stakes.standing import effects

CheckSort = Literal[
    "distance", "diagonal", "angle", "position", "elevation", "line", "fit"
]


class Judgement(msgspec.Struct, frozen=True, kw_only=True):
    """A verdict with all it was judged by, so that anybody can judge again.

    `uncertainty` is standard (one sigma), for a position the semi-major axis.
    """

    measured: Measured | None = None
    computed: Measured | None = None
    difference: Measured | None = None
    tolerance: Measured | None = None
    uncertainty: Measured | None = None
    tolerance_class: str = ""
    rule: str = "simple acceptance"
    method: str = "1"
    verdict: Verdict
    reason: str = ""


@kind("checked")
class StakeChecked(Fact, kw_only=True):
    """Stakes were checked: what was measured, from what, with which verdict.

    `grade` says how independent the check is of the setting (0 same setup, 1 new setup
    on the same control, 2 other control or method, 3 other control and person);
    `reaches` says what it can see. `other` marks were measured to and not judged.
    `northing`, `easting` are the place measured by a check of position; `against` is
    the boundary or existing work of a check of fit, with where its number came from.
    """

    check: UUID
    sort: CheckSort
    listed: tuple[UUID, ...]
    other: tuple[UUID, ...] = ()
    setup: UUID | None = None
    set_by: tuple[UUID, ...] = ()
    components: Component = "p"
    judgement: Judgement
    corrections: tuple[str, ...] = ()
    angle: str = ""
    northing: Measured | None = None
    easting: Measured | None = None
    against: str = ""
    shared: tuple[str, ...] = ()
    grade: int = 0
    reaches: tuple[Reach, ...] = ()
    instrument: str = ""
    remark: str = ""
    occasion: UUID | None = None
    photos: tuple[str, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.checked(
            self.judgement.verdict,
            self.components,
            self.grade,
            self.reaches,
            self.setup,
        )
        yield from (MarkLink(m, "checked", effect) for m in self.listed)
        yield from (MarkLink(m, "checked from") for m in self.other)

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("check", self.check)
        if self.setup and self.setup not in self.set_by:
            yield MatterLink("setup", self.setup)
        effect = effects.setup_stake_check(self.judgement.verdict, self.grade)
        yield from (MatterLink("setup", s, effect) for s in self.set_by)
        if self.occasion:
            yield MatterLink("visit", self.occasion)
        yield from photo_links(self.photos)

    def sentence(self) -> str:
        reason = f", {self.judgement.reason}" if self.judgement.reason else ""
        return f"Checked by {self.sort}: {self.judgement.verdict}{reason}."


@kind("judged again")
class JudgedAgain(Fact, kw_only=True):
    """A check was judged again: inputs or methods changed, the measurement stands."""

    check: UUID
    listed: tuple[UUID, ...]
    components: Component = "p"
    grade: int = 0
    reaches: tuple[Reach, ...] = ()
    setup: UUID | None = None
    judgement: Judgement
    reason: str

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.checked(
            self.judgement.verdict,
            self.components,
            self.grade,
            self.reaches,
            self.setup,
        )
        return [MarkLink(m, "judged again", effect) for m in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("check", self.check)
