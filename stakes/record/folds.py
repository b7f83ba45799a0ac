"""Read models: rows made by folding the record, refreshed in the append's transaction.

A fold is pure: from the entries of one thing to the columns of its row. `replay`
makes every row anew and names each difference; tests run it after every test.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from typing import Any, Protocol
from uuid import UUID

from django.db import models

from stakes.models.record import Entry, EntryMark, EntryMatter, Record
from stakes.record.reading import Counted, entries_by_key

Columns = dict[str, Any]


class ReadModel(Protocol):
    """Rows derived from the record."""

    name: str

    def refresh(
        self,
        record: Record,
        entries: Sequence[Entry],
        marks: Sequence[EntryMark],
        matters: Sequence[EntryMatter],
    ) -> None: ...

    def rebuild(self, record: Record) -> None: ...

    def rows(self, record: Record) -> list[Columns]: ...


READ_MODELS: dict[str, ReadModel] = {}


class MatterFold:
    """One row per matter of one sort, keyed by the matter's own key."""

    def __init__(
        self,
        thing: str,
        model: type[models.Model],
        fold: Callable[[list[Counted]], Columns | None],
    ) -> None:
        self.name = thing
        self.model = model
        self.fold = fold

    def refresh(
        self,
        record: Record,
        entries: Sequence[Entry],
        marks: Sequence[EntryMark],
        matters: Sequence[EntryMatter],
    ) -> None:
        keys = {m.key for m in matters if m.thing == self.name}
        if keys:
            self._write(record, keys)

    def rebuild(self, record: Record) -> None:
        keys = EntryMatter.objects.filter(record=record, thing=self.name)
        self.model._default_manager.filter(record=record).delete()
        self._write(record, set(keys.values_list("key", flat=True)))

    def rows(self, record: Record) -> list[Columns]:
        rows = self.model._default_manager.filter(record=record)
        return list(rows.order_by("pk").values())

    def _columns(self, key: UUID, happened: list[Counted]) -> Columns | None:
        return self.fold(happened)

    def _write(self, record: Record, keys: Iterable[UUID]) -> None:
        happened = entries_by_key(record, self.name, keys)
        for key in keys:
            columns = self._columns(key, happened.get(key, []))
            rows = self.model._default_manager
            if columns is None:
                rows.filter(pk=key, record=record).delete()
            else:
                rows.update_or_create(
                    pk=key, record=record, defaults=columns, create_defaults=columns
                )


Fold = Callable[[list[Counted]], Columns | None]


def fold_of(thing: str, *, model: type[models.Model]) -> Callable[[Fold], Fold]:
    """Register a pure function as the fold that makes the rows of `model`."""

    def declare(fold: Fold) -> Fold:
        READ_MODELS[thing] = MatterFold(thing, model, fold)
        return fold

    return declare


def register(read_model: ReadModel) -> None:
    READ_MODELS[read_model.name] = read_model


AFTER_APPEND: list[Callable[[Record, Sequence[Entry]], None]] = []
"""Called inside the transaction: `jobs.config` puts rows of work to be done here."""


def refresh(
    record: Record,
    entries: Sequence[Entry],
    marks: Sequence[EntryMark],
    matters: Sequence[EntryMatter],
) -> None:
    """Fold anew what the new entries concern."""
    for read_model in READ_MODELS.values():
        read_model.refresh(record, entries, marks, matters)
    for notify in AFTER_APPEND:
        notify(record, entries)


def replay(record: Record) -> list[str]:
    """Rebuild every read model of a record; name the ones that came out different."""
    different = []
    for name, read_model in READ_MODELS.items():
        before = read_model.rows(record)
        read_model.rebuild(record)
        after = read_model.rows(record)
        if before != after:
            odd = next(
                (
                    f"{b} became {a}"
                    for b, a in zip(before, after, strict=False)
                    if b != a
                ),
                f"{len(before)} rows became {len(after)}",
            )
            different.append(f"{name}: {odd}")
    return different
