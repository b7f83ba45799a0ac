"""Setups as rows: what they were from the facts, their doubt from effects."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence
from datetime import datetime
from typing import Any
from uuid import UUID

from stakes.kinds.setups import SetupOpened
from stakes.models import Entry, EntryMark, EntryMatter, Record, Setup
from stakes.record import folds, reading
from stakes.standing import setups as standing
from stakes.standing.effects import Effect

ORIENTING = ("occupied", "oriented on", "benchmark", "known", "held")
"""Roles in which a setup leans on a mark; marks it merely checks are not among them."""


class SetupRows:
    """The read model of setups."""

    name = "setup"

    def refresh(
        self,
        record: Record,
        entries: Sequence[Entry],
        marks: Sequence[EntryMark],
        matters: Sequence[EntryMatter],
    ) -> None:
        self._write(record, {m.key for m in matters if m.thing == "setup"})

    def rebuild(self, record: Record) -> None:
        Setup.objects.filter(record=record).delete()
        about = EntryMatter.objects.filter(record=record, thing="setup")
        self._write(record, set(about.values_list("key", flat=True)))

    def rows(self, record: Record) -> list[dict[str, Any]]:
        return list(Setup.objects.filter(record=record).order_by("key").values())

    def _write(self, record: Record, keys: set[UUID]) -> None:
        if not keys:
            return
        overruled = reading.corrections(record)
        states = effects_of(record, overruled, keys)
        openings = _openings(record, keys, overruled)
        rows = [
            _row(record, openings[key], standing.fold(states[key]))
            for key in keys
            if key in openings
        ]
        Setup.objects.filter(record=record, key__in=keys - openings.keys()).delete()
        columns = [
            f.name
            for f in Setup._meta.concrete_fields
            if f.name not in ("key", "record")
        ]
        Setup.objects.bulk_create(
            rows, update_conflicts=True, unique_fields=["key"], update_fields=columns
        )


def effects_of(
    record: Record,
    overruled: dict[int, int],
    keys: Iterable[UUID] | None = None,
    **upto: Any,
) -> dict[UUID, list[Effect]]:
    """The counting effects of each setup, in the order of facts."""
    about = EntryMatter.objects.filter(record=record, thing="setup", **upto)
    about = about.exclude(effect="")
    if keys is not None:
        about = about.filter(key__in=list(keys))
    found: dict[UUID, list[Effect]] = defaultdict(list)
    ordered = about.order_by("happened_at", "counter", "place", "number", "id")
    for key, at, number, effect in ordered.values_list(
        "key", "happened_at", "number", "effect"
    ):
        if number not in overruled:
            found[key].append(Effect(at, number, effect))
    return found


def opened_setups(
    record: Record,
    overruled: dict[int, int],
    at: datetime | None = None,
    known: int | None = None,
) -> dict[UUID, Setup]:
    """Every setup's row: as stored now, made anew for a past (T, K)."""
    if at is None and known is None:
        return Setup.objects.filter(record=record).in_bulk()
    entries = Entry.objects.filter(record=record, kind=SetupOpened.KIND)
    entries = entries.filter(happened_at__lte=at) if at else entries
    entries = entries.filter(number__lte=known) if known is not None else entries
    found = {}
    for entry in entries.order_by("happened_at", "counter", "place", "number"):
        counted = reading.decoded(entry, overruled)
        if counted.counts:
            row = _row(record, counted, standing.SetupState())
            found[row.key] = row
    return found


def _openings(
    record: Record, keys: set[UUID], overruled: dict[int, int]
) -> dict[UUID, reading.Counted]:
    about = EntryMatter.objects.filter(record=record, thing="setup", key__in=keys)
    entries = Entry.objects.filter(
        record=record, kind=SetupOpened.KIND, number__in=about.values("number")
    )
    found = {}
    for entry in entries.order_by("happened_at", "counter", "place", "number"):
        counted = reading.decoded(entry, overruled)
        if counted.counts:
            found[counted.fact.setup] = counted  # type: ignore[attr-defined]
    return found


def _row(record: Record, opening: reading.Counted, state: standing.SetupState) -> Setup:
    fact = opening.fact
    assert isinstance(fact, SetupOpened)
    return Setup(
        key=fact.setup,
        record=record,
        sort=fact.sort,
        opened_by=opening.name,
        person=opening.person,
        instrument=fact.instrument,
        serial=fact.serial,
        occasion=fact.occasion,
        number=opening.number,
        bears_on=[str(used.mark) for used in fact.used],
        opened_at=state.opened_at,
        closed_at=state.closed_at,
        opening=state.opening,
        closing=state.closing,
        passed_at=state.passed_at,
        doubt_from=state.doubt_from,
        reason=state.reason,
    )


folds.register(SetupRows())
