"""Facts of the plan: marks planned, superseded, retired; zones and lines drawn."""

from __future__ import annotations

from collections.abc import Iterable
from uuid import UUID

import msgspec

from stakes.kinds.words import Carries, Purpose
from stakes.record.kinds import Fact, MarkLink, MatterLink, kind
from stakes.record.lengths import Measured
from stakes.standing import effects


class PlannedMark(msgspec.Struct, frozen=True, kw_only=True):
    """One row of a plan: a place, what it is for, and the sheets it was computed from.

    `sort` is the kind of stake (building corner, gridline, curb ...); `refers_to` is
    what cut and fill are measured to; `lasts` says how long it must hold.
    """

    mark: UUID
    label: str
    purpose: Purpose
    carries: Carries = "both"
    northing: Measured | None = None
    easting: Measured | None = None
    elevation: Measured | None = None
    sort: str = ""
    stage: str = ""
    line: str = ""
    words: str = ""
    offset: Measured | None = None
    refers_to: str = ""
    tolerance: str = ""
    lasts: str = ""
    basis: tuple[UUID, ...] = ()
    moved: bool = False


@kind("planned")
class MarksPlanned(Fact, kw_only=True):
    """Marks were issued for staking, or a mark was issued again in another place.

    `moved` rows had a stake or an older position: what stands there is superseded.
    """

    plan: UUID
    rows: tuple[PlannedMark, ...]
    computed_by: str = ""
    checked_by: str = ""
    source: str = ""

    def marks(self) -> Iterable[MarkLink]:
        for row in self.rows:
            yield MarkLink(row.mark, "planned", effects.planned(row.moved))

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("plan", self.plan)

    def sentence(self) -> str:
        return f"{_count(len(self.rows))} issued for staking."


@kind("superseded")
class MarksSuperseded(Fact, kw_only=True):
    """Stakes that still stand no longer mark the current design."""

    listed: tuple[UUID, ...]
    sheet: UUID | None = None
    reason: str = ""

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "superseded", effects.SUPERSEDED) for m in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        return [MatterLink("sheet", self.sheet)] if self.sheet else []

    def sentence(self) -> str:
        return f"{_count(len(self.listed))} superseded: {self.reason}"


@kind("retired")
class MarksRetired(Fact, kw_only=True):
    """Marks have served: their stage is done, or their removal was authorised."""

    listed: tuple[UUID, ...]
    stage: str = ""
    reason: str = ""

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(m, "retired", effects.RETIRED) for m in self.listed]

    def sentence(self) -> str:
        stage = f" with stage {self.stage}" if self.stage else ""
        return f"{_count(len(self.listed))} retired{stage}."


class Corner(msgspec.Struct, frozen=True, kw_only=True):
    """A corner of a zone or a vertex of a line."""

    northing: Measured
    easting: Measured


@kind("zone drawn")
class ZoneDrawn(Fact, kw_only=True):
    """A polygon that matters: footprint, excavation, keep-out, haul road, property,
    setback, obstacle. Drawing it again under the same key replaces it."""

    zone: UUID
    name: str
    sort: str
    corners: tuple[Corner, ...]
    closed: bool = True
    height: Measured | None = None
    words: str = ""
    basis: tuple[UUID, ...] = ()
    removed: bool = False

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("zone", self.zone)

    def sentence(self) -> str:
        done = "removed from the plan" if self.removed else "drawn"
        return f"{self.sort.capitalize()} {self.name} {done}."


@kind("layout issued")
class LayoutIssued(Fact, kw_only=True):
    """How offset stakes were placed: footprint, offset, depth, slope and work space."""

    plan: UUID
    footprint: UUID
    offset: Measured
    depth: Measured
    work_space: Measured
    clearance: Measured
    soil: str
    soil_by: str = ""
    rule: str = ""
    issues: tuple[str, ...] = ()
    listed: tuple[UUID, ...] = ()

    def matters(self) -> Iterable[MatterLink]:
        return [MatterLink("plan", self.plan), MatterLink("zone", self.footprint)]

    def sentence(self) -> str:
        return f"Offset stakes placed at {self.offset.text} {self.offset.unit}."


def _count(number: int) -> str:
    return "One mark" if number == 1 else f"{number} marks"
