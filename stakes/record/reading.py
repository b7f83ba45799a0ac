"""Reading the record: entries of a mark or a matter, in the order of the facts.

(T, K): what stood at the moment T by what was recorded up to entry K. Now is (None,
None). Everything that reads the past comes through here or through `standing.as_of`.
"""

from __future__ import annotations

import json
from collections import defaultdict
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from uuid import UUID

from stakes.models.record import Entry, EntryMark, EntryMatter, Record
from stakes.record.counting import corrected
from stakes.record.kinds import Fact, fact_from


@dataclass(frozen=True, slots=True)
class Counted:
    """An entry with its fact, and whether it still counts."""

    entry: Entry
    fact: Fact
    body: dict[str, Any]
    overruled_by: int | None

    @property
    def counts(self) -> bool:
        return self.overruled_by is None and not self.entry.withdraws

    @property
    def number(self) -> int:
        return self.entry.number

    @property
    def kind(self) -> str:
        return self.entry.kind

    @property
    def key(self) -> UUID:
        return self.entry.key

    @property
    def happened_at(self) -> datetime:
        return self.entry.happened_at

    @property
    def recorded_at(self) -> datetime:
        return self.entry.recorded_at

    @property
    def name(self) -> str:
        return self.entry.name

    @property
    def person(self) -> str:
        return self.entry.person

    @property
    def known(self) -> str:
        return self.entry.known


def corrections(record: Record, known: int | None = None) -> dict[int, int]:
    """Which entries do not count at K, each with the one that took its place."""
    rows = Entry.objects.filter(record=record, corrects__isnull=False)
    if known is not None:
        rows = rows.filter(number__lte=known)
    said = list(rows.values_list("number", "corrects", "withdraws"))
    return corrected(
        {number: target for number, target, _ in said if target is not None},
        {number for number, _, withdraws in said if withdraws},
    )


def decoded(entry: Entry, overruled: dict[int, int]) -> Counted:
    body = json.loads(entry.body)
    return Counted(
        entry=entry,
        fact=fact_from(entry.kind, body.get("facts", {})),
        body=body,
        overruled_by=overruled.get(entry.number),
    )


def entries(
    record: Record,
    *,
    mark: UUID | None = None,
    thing: str = "",
    key: UUID | None = None,
    kinds: Iterable[str] = (),
    at: datetime | None = None,
    known: int | None = None,
    all_said: bool = False,
) -> list[Counted]:
    """Entries about a mark, a matter or the whole record, in the order of the facts.

    Only those that count, unless `all_said`.
    """
    rows = Entry.objects.filter(record=record)
    if mark is not None:
        links = EntryMark.objects.filter(record=record, mark=mark)
        rows = rows.filter(number__in=links.values("number"))
    if thing:
        about = EntryMatter.objects.filter(record=record, thing=thing)
        about = about.filter(key=key) if key is not None else about
        rows = rows.filter(number__in=about.values("number"))
    if kinds:
        rows = rows.filter(kind__in=list(kinds))
    if at is not None:
        rows = rows.filter(happened_at__lte=at)
    if known is not None:
        rows = rows.filter(number__lte=known)
    overruled = corrections(record, known)
    found = [
        decoded(entry, overruled)
        for entry in rows.order_by("happened_at", "counter", "place", "number")
    ]
    return found if all_said else [c for c in found if c.counts]


def entries_by_key(
    record: Record, thing: str, keys: Iterable[UUID]
) -> dict[UUID, list[Counted]]:
    """The counting entries of several matters at once, each in the order of facts."""
    links: dict[int, list[UUID]] = defaultdict(list)
    about = EntryMatter.objects.filter(record=record, thing=thing, key__in=list(keys))
    for number, key in about.values_list("number", "key"):
        links[number].append(key)
    overruled = corrections(record)
    found: dict[UUID, list[Counted]] = defaultdict(list)
    rows = Entry.objects.filter(record=record, number__in=list(links))
    for entry in rows.order_by("happened_at", "counter", "place", "number"):
        counted = decoded(entry, overruled)
        if counted.counts:
            for key in links[entry.number]:
                found[key].append(counted)
    return found
