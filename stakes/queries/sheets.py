"""Sheets as the office asks for them: which are current, unread, unsorted; what waits."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from uuid import UUID

from geometry.units import Length, Unit
from stakes.kinds.planning import MarksPlanned, PlannedMark
from stakes.models import Direction, Mark, Question, Record, Sheet
from stakes.queries.drawing import natural
from stakes.record import reading
from stakes.record.lengths import Measured


@dataclass(frozen=True, slots=True)
class SheetLine:
    """A sheet with the marks it touches and what is still to be done with it."""

    sheet: Sheet
    marks: Sequence[tuple[UUID, str]]
    replaced_by: Sheet | None
    replaces: Sheet | None
    based_on_it: Sequence[tuple[UUID, str]]

    @property
    def is_current(self) -> bool:
        return self.sheet.replaced_by is None and self.sheet.status != "superseded"

    @property
    def waits(self) -> str:
        """What somebody has to do with it; empty: nothing."""
        if not self.is_current or self.sheet.status == "information":
            return ""
        if not self.sheet.read_by:
            return "nobody has read it"
        if self.sheet.touches_all and not self.sheet.sorted:
            return "not sorted: every mark waits for it"
        return ""


@dataclass(frozen=True, slots=True)
class HeldBy:
    """An open question or direction with the marks it holds."""

    matter: Question | Direction
    marks: Sequence[tuple[UUID, str]]


def sheet_lines(record: Record) -> list[SheetLine]:
    """Every sheet of a job, by number, the newest revision first."""
    rows = list(Sheet.objects.filter(record=record).order_by("-received_at"))
    by_key = {row.key: row for row in rows}
    labels, bases = {}, {}
    for key, label, basis in Mark.objects.filter(record=record).values_list(
        "key", "label", "basis"
    ):
        labels[str(key)] = label
        for sheet in basis:
            bases.setdefault(sheet, []).append((key, label))
    rows.sort(key=lambda row: natural(row.sheet_number))
    return [
        SheetLine(
            sheet=row,
            marks=named(row.touched, labels),
            replaced_by=by_key.get(row.replaced_by),
            replaces=by_key.get(row.replaces),
            based_on_it=sorted(
                bases.get(str(row.key), []), key=lambda m: natural(m[1])
            ),
        )
        for row in rows
    ]


def named(keys: Sequence[str], labels: dict[str, str]) -> list[tuple[UUID, str]]:
    found = [(UUID(k), labels[k]) for k in dict.fromkeys(keys) if k in labels]
    return sorted(found, key=lambda m: natural(m[1]))


def held(record: Record) -> tuple[list[HeldBy], list[HeldBy]]:
    """Questions not answered and directions not settled, the oldest first."""
    labels = {
        str(k): label
        for k, label in Mark.objects.filter(record=record).values_list("key", "label")
    }
    asked = Question.objects.filter(record=record, answered_at__isnull=True)
    given = Direction.objects.filter(record=record, settled_at__isnull=True)
    return (
        [HeldBy(q, named(q.holds, labels)) for q in asked.order_by("asked_at")],
        [HeldBy(d, named(d.holds, labels)) for d in given.order_by("given_at")],
    )


def settled(record: Record) -> tuple[list[Question], list[Direction]]:
    """Questions answered and directions settled, the last first."""
    asked = Question.objects.filter(record=record, answered_at__isnull=False)
    given = Direction.objects.filter(record=record, settled_at__isnull=False)
    return (
        list(asked.order_by("-answered_at")[:100]),
        list(given.order_by("-settled_at")[:100]),
    )


@dataclass(frozen=True, slots=True)
class MovedWith:
    """A mark that was issued in another place from a sheet: by how much, and when."""

    mark: UUID
    label: str
    across: Length | None
    up: Length | None
    number: int


def moved_with(record: Record, sheet: UUID) -> list[MovedWith]:
    """What a sheet moved: each mark issued anew from it, beside its place before."""
    unit = record.length_unit
    before: dict[UUID, PlannedMark] = {}
    found = []
    for said in reading.entries(record, kinds=[MarksPlanned.KIND]):
        assert isinstance(said.fact, MarksPlanned)
        for row in said.fact.rows:
            was = before.get(row.mark)
            if row.moved and was is not None and sheet in row.basis:
                found.append(_moved(row, was, said.number, unit))
            before[row.mark] = row
    return sorted(found, key=lambda m: natural(m.label))


def _moved(row: PlannedMark, was: PlannedMark, number: int, unit: Unit) -> MovedWith:
    north = _less(row.northing, was.northing)
    east = _less(row.easting, was.easting)
    up = _less(row.elevation, was.elevation)
    across = None
    if north is not None and east is not None:
        far = math.hypot(north, east) / 1e9
        across = Length.from_metres(far, unit, 3)
    rise = None if up is None else Length.from_nanometres(up, unit, 3)
    return MovedWith(row.mark, row.label, across, rise, number)


def _less(now: Measured | None, was: Measured | None) -> int | None:
    return None if now is None or was is None else int(now.nm) - int(was.nm)
