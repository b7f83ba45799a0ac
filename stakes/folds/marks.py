"""Marks and stakes as rows: the plan side from the facts, the ground from effects."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import asdict
from datetime import datetime
from typing import Any
from uuid import UUID

from stakes.kinds.condition import ForeignMarkFound
from stakes.kinds.control import ValueAdopted
from stakes.kinds.planning import MarksPlanned, PlannedMark
from stakes.models import Entry, EntryMark, EntryMatter, Mark, Record, Stake
from stakes.record import folds, reading
from stakes.record.lengths import Measured
from stakes.standing import marks as standing
from stakes.standing.effects import Effect

PLAN_KINDS = (MarksPlanned.KIND, ValueAdopted.KIND, ForeignMarkFound.KIND)
Columns = dict[str, Any]


class MarkRows:
    """The read model of marks: refreshed for the marks that new entries name."""

    name = "mark"

    def refresh(
        self,
        record: Record,
        entries: Sequence[Entry],
        marks: Sequence[EntryMark],
        matters: Sequence[EntryMatter],
    ) -> None:
        replan = {e.number for e in entries if e.corrects or e.kind in PLAN_KINDS}
        self._write(
            record,
            {m.mark for m in marks},
            {m.mark for m in marks if m.number in replan},
        )

    def rebuild(self, record: Record) -> None:
        marks = set(
            EntryMark.objects.filter(record=record).values_list("mark", flat=True)
        )
        Mark.objects.filter(record=record).delete()
        Stake.objects.filter(record=record).delete()
        self._write(record, marks, marks)

    def rows(self, record: Record) -> list[Columns]:
        stakes = (
            Stake.objects.filter(record=record).order_by("mark", "ordinal").values()
        )
        marks = Mark.objects.filter(record=record).order_by("key").values()
        return [*marks, *({k: v for k, v in s.items() if k != "id"} for s in stakes)]

    def _write(self, record: Record, marks: set[UUID], replan: set[UUID]) -> None:
        if not marks:
            return
        overruled = reading.corrections(record)
        grounds = _grounds(record, marks, overruled)
        plans = _plans(record, replan, overruled)
        kept = Mark.objects.in_bulk(marks - replan)
        rows, stakes = [], []
        for mark in marks:
            state, last = grounds.get(mark, (standing.MarkState(), 0))
            row = kept.get(mark) or _planned(record, mark, plans.get(mark, []))
            if row is None:
                continue
            row.standing, row.held, row.doubled = (
                state.standing,
                state.held,
                state.doubled,
            )
            row.stakes_set, row.last_entry = len(state.stakes), last
            rows.append(row)
            stakes += [_stake_row(record, mark, stake) for stake in state.stakes]
        _save(record, marks, replan, rows, stakes)


def plan_rows(
    record: Record,
    overruled: dict[int, int],
    at: datetime | None = None,
    known: int | None = None,
) -> dict[UUID, Mark]:
    """The plan side of every mark: the stored rows now, folded anew for a past (T, K)."""
    if at is None and known is None:
        return Mark.objects.filter(record=record).in_bulk()
    entries = Entry.objects.filter(record=record, kind__in=PLAN_KINDS)
    entries = entries.filter(happened_at__lte=at) if at else entries
    entries = entries.filter(number__lte=known) if known is not None else entries
    found: dict[UUID, Mark] = {}
    for entry in entries.order_by("happened_at", "counter", "place", "number"):
        counted = reading.decoded(entry, overruled)
        if counted.counts:
            _take(record, found, counted)
    return found


def _save(
    record: Record,
    marks: set[UUID],
    replan: set[UUID],
    rows: list[Mark],
    stakes: list[Stake],
) -> None:
    gone = replan - {row.key for row in rows}
    if gone:
        Mark.objects.filter(record=record, key__in=gone).delete()
    columns = [
        f.name for f in Mark._meta.concrete_fields if f.name not in ("key", "record")
    ]
    Mark.objects.bulk_create(
        rows, update_conflicts=True, unique_fields=["key"], update_fields=columns
    )
    Stake.objects.filter(record=record, mark__in=marks).delete()
    Stake.objects.bulk_create(stakes)


def effects_of(
    record: Record,
    overruled: dict[int, int],
    marks: Iterable[UUID] | None = None,
    **upto: Any,
) -> dict[UUID, list[Effect]]:
    """The counting effects of each mark, in the order of facts."""
    links = EntryMark.objects.filter(record=record, **upto)
    if marks is not None:
        links = links.filter(mark__in=list(marks))
    found: dict[UUID, list[Effect]] = defaultdict(list)
    ordered = links.order_by("happened_at", "counter", "place", "number", "id")
    for mark, at, number, effect in ordered.values_list(
        "mark", "happened_at", "number", "effect"
    ):
        if number not in overruled:
            found[mark].append(Effect(at, number, effect))
    return found


def states_of(
    record: Record, overruled: dict[int, int], **upto: Any
) -> dict[UUID, standing.MarkState]:
    """Every mark's state, folded row by row as the rows are read: nothing is kept of
    the past but what it came to."""
    links = EntryMark.objects.filter(record=record, **upto)
    rows = links.order_by(
        "happened_at", "counter", "place", "number", "id"
    ).values_list("mark", "happened_at", "number", "effect")
    states: dict[UUID, standing.MarkState] = defaultdict(standing.MarkState)
    for mark, at, number, effect in rows.iterator(chunk_size=2000):
        if number not in overruled:
            standing.apply(states[mark], at, number, effect)
    return dict(states)


def _grounds(
    record: Record, marks: set[UUID], overruled: dict[int, int]
) -> dict[UUID, tuple[standing.MarkState, int]]:
    return {
        mark: (standing.fold(effects), max(e.number for e in effects))
        for mark, effects in effects_of(record, overruled, marks).items()
    }


def _plans(
    record: Record, marks: set[UUID], overruled: dict[int, int]
) -> dict[UUID, list[reading.Counted]]:
    """The counting entries that say where each mark is planned or what its value is."""
    if not marks:
        return {}
    links: dict[int, list[UUID]] = defaultdict(list)
    rows = EntryMark.objects.filter(record=record, mark__in=marks)
    for number, mark in rows.values_list("number", "mark"):
        links[number].append(mark)
    found: dict[UUID, list[reading.Counted]] = defaultdict(list)
    entries = Entry.objects.filter(
        record=record, number__in=list(links), kind__in=PLAN_KINDS
    )
    for entry in entries.order_by("happened_at", "counter", "place", "number"):
        counted = reading.decoded(entry, overruled)
        if counted.counts:
            for mark in set(links[entry.number]):
                found[mark].append(counted)
    return found


def _planned(record: Record, mark: UUID, said: list[reading.Counted]) -> Mark | None:
    """The plan side of a mark's row; None when no counting entry plans it."""
    found: dict[UUID, Mark] = {}
    for counted in said:
        _take(record, found, counted, only=mark)
    return found.get(mark)


def _take(
    record: Record,
    found: dict[UUID, Mark],
    counted: reading.Counted,
    only: UUID | None = None,
) -> None:
    """Let one counting entry say where its marks are planned and what their value is."""
    match counted.fact:
        case MarksPlanned(rows=rows):
            for planned in rows:
                if only is None or planned.mark == only:
                    found[planned.mark] = _row(record, planned, counted.number)
        case ForeignMarkFound() as foreign:
            found[foreign.mark] = _row(record, _foreign(foreign), counted.number)
        case ValueAdopted() as value if value.mark in found:
            _adopt(found[value.mark], value)


def _row(record: Record, planned: PlannedMark, number: int) -> Mark:
    row = Mark(
        key=planned.mark,
        record=record,
        label=planned.label,
        purpose=planned.purpose,
        sort=planned.sort,
        stage=planned.stage,
        carries=planned.carries,
        line=planned.line,
        words=planned.words,
        refers_to=planned.refers_to,
        tolerance=planned.tolerance,
        lasts=planned.lasts,
        basis=[str(sheet) for sheet in planned.basis],
        planned_by=number,
    )
    _place(row, planned.northing, planned.easting, planned.elevation)
    return row


def _place(
    row: Mark,
    northing: Measured | None,
    easting: Measured | None,
    elevation: Measured | None,
) -> None:
    for name, value in (
        ("northing", northing),
        ("easting", easting),
        ("elevation", elevation),
    ):
        if value is not None:
            setattr(row, f"{name}_nm", value.nm)
            setattr(row, f"{name}_m", value.metres)


def _adopt(row: Mark, value: ValueAdopted) -> None:
    _place(row, value.northing, value.easting, value.elevation)
    row.value = value.value
    if value.covariance is not None:
        row.covariance_mm2 = {
            name: getattr(value.covariance, name)
            for name in ("nn", "ne", "ee", "zz", "common")
        }


def _foreign(found: ForeignMarkFound) -> PlannedMark:
    return PlannedMark(
        mark=found.mark,
        label=found.label,
        purpose="foreign",
        carries="both" if found.elevation else "position",
        northing=found.northing,
        easting=found.easting,
        elevation=found.elevation,
        words=found.words,
    )


def proof_data(proof: standing.Proof) -> Columns:
    """A component's proof as plain data, for the row."""
    data = asdict(proof)
    return {
        "trust": str(proof.trust),
        "grade": proof.grade,
        "reaches": sorted(proof.reaches),
        "passed_at": _text(proof.passed_at),
        "passed_by": str(data["passed_by"]) if proof.passed_by else None,
        "doubt_from": _text(proof.doubt_from),
        "doubts": [[_text(a), _text(b)] for a, b in proof.doubts],
        "failed_by": proof.failed_by,
    }


def _text(moment: Any) -> str | None:
    return moment.isoformat() if moment else None


def _stake_row(record: Record, mark: UUID, stake: standing.StakeState) -> Stake:
    plain = {
        name: getattr(stake, name)
        for name in stake.__dataclass_fields__
        if name not in ("position", "elevation")
    }
    return Stake(
        record=record,
        mark=mark,
        position=proof_data(stake.position),
        elevation=proof_data(stake.elevation),
        **plain,
    )


folds.register(MarkRows())
