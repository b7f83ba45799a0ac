"""A statement as a client sends it, and what it must pass before it is said.

Nothing of it is believed: its texts, its moment, and the right that its kind takes, or
that the kind of the entry it corrects takes, are looked at here for every way in.
"""

from __future__ import annotations

import logging
from collections.abc import Collection
from datetime import UTC, datetime
from typing import Annotated, Any, TypeVar
from uuid import UUID

import msgspec
from django.db import DataError

from stakes.actions.correcting import LEFT_TO_THEIR_OWN_PAGES, needed
from stakes.can import Can
from stakes.kinds.correcting import Withdrawn
from stakes.models import Entry, Record
from stakes.record import By, Fact, Known, Refused, Said, append, held
from stakes.record.canonical import LARGEST_EXACT
from stakes.record.kinds import fact_from
from stakes.record.lengths import Measured
from stakes.record.reading import corrections

log = logging.getLogger("lathbook.api")

MOST_ITEMS = 100
YEARS = range(1900, 2200)
"""Years a moment may lie in; beyond them its zone or the device's offset overflows."""

LONGEST_NM = 10**17
Short = Annotated[str, msgspec.Meta(max_length=500)]
Shape = TypeVar("Shape")


class Item(msgspec.Struct, forbid_unknown_fields=True):
    """One statement as a client sends it. `key` is the client's own and makes a second
    sending harmless; `corrects` is the key of the entry whose place it takes."""

    key: UUID
    kind: Short
    facts: dict[str, Any] = {}
    happened_at: datetime | None = None
    known: Known = Known.SEEN
    counter: Annotated[int, msgspec.Meta(ge=0, le=LARGEST_EXACT)] = 0
    corrects: UUID | None = None
    withdraws: bool = False
    why: Short = ""


def readable(sent: Any, shape: type[Shape]) -> Shape:
    """What was sent as what it should be; Refused with a sentence when it is not."""
    if fault := unsound(sent):
        raise Refused(f"This cannot be read: {fault}.", code="unreadable")
    try:
        return msgspec.convert(sent, shape)
    except msgspec.ValidationError as error:
        raise Refused(f"This cannot be read: {error}.", code="unreadable") from error


def unsound(sent: Any) -> str:
    """What neither the database nor the hash can hold, in words; empty when all can."""
    match sent:
        case str() if "\0" in sent:
            return "a text holds the character zero"
        case str() if any("\ud800" <= c <= "\udfff" for c in sent):
            return "a text holds half of a surrogate pair"
        case int() if abs(sent) > LARGEST_EXACT:
            return "a number is too large; send it as text"
        case dict():
            inner = [*sent.keys(), *sent.values()]
        case list():
            inner = sent
        case _:
            return ""
    return next((fault for one in inner if (fault := unsound(one))), "")


def named(sent: Any) -> str | None:
    """The key an item goes by, to answer under, even when the rest is unreadable."""
    key = sent.get("key") if isinstance(sent, dict) else None
    return key if isinstance(key, str) and len(key) <= 64 and not unsound(key) else None


def in_utc(at: datetime, field: str) -> datetime:
    """A moment in UTC; one without a zone is meant so."""
    try:
        moment = at.replace(tzinfo=UTC) if at.tzinfo is None else at.astimezone(UTC)
    except OverflowError:
        moment = None
    if moment is None or moment.year not in YEARS:
        raise Refused(
            "The moment lies outside all the years a job can have.",
            do="Check the date and the clock of the device.",
            field=field,
            code="unreadable moment",
        )
    return moment


def fact_of(item: Item) -> Fact:
    fact = Withdrawn() if item.withdraws else fact_from(item.kind, item.facts)
    _refuse_lengths(fact)
    return fact


def say(record: Record, said: Said, *, by: By, rights: Collection[Can]) -> Entry:
    """Append one statement under the rights of whoever says it."""
    with held(record) as locked:
        _refuse_kind(locked, said, rights)
        try:
            return append(locked, said, by=by)[0]
        except (ArithmeticError, LookupError, ValueError, DataError) as error:
            # Facts of the right types that still mean nothing. Nothing was written.
            log.exception("An item of the kind %r broke.", said.fact.KIND)
            raise Refused(
                "The facts cannot be taken in.",
                do="Look at their numbers and lengths.",
                code="unreadable facts",
            ) from error


def _refuse_kind(record: Record, said: Said, rights: Collection[Can]) -> None:
    """The right each kind takes; what a page alone may say is left to its page."""
    kinds = set() if said.withdraws else {said.fact.KIND}
    if said.withdraws or isinstance(said.fact, Withdrawn) or said.corrects:
        kinds.add(_target_kind(record, said))
    for kind in sorted(kinds):
        if kind in LEFT_TO_THEIR_OWN_PAGES:
            raise Refused(
                f"Entries of the kind {kind!r} are made on their own page.",
                code="other page",
            )
        if needed(kind) not in rights:
            raise Refused(
                f"{kind!r} takes the right to {needed(kind)}.",
                do="Ask somebody who has it.",
                code="not yours",
            )


def _target_kind(record: Record, said: Said) -> str:
    """The kind of what is corrected: behind a withdrawal, of what that took back."""
    found = Entry.objects.filter(record=record)
    target = found.filter(key=said.corrects).first() if said.corrects else None
    if target is None or (isinstance(said.fact, Withdrawn) and not said.withdraws):
        raise Refused(
            "A withdrawal names the entry it takes back, and that it withdraws it."
            if isinstance(said.fact, Withdrawn)
            else "The entry to correct is not in this record.",
            do="Send its key as corrects, with withdraws true to take it back.",
            field="corrects",
            code="no target",
        )
    newer = corrections(record).get(target.number)
    if newer is not None and not found.filter(key=said.key).exists():
        raise Refused(
            f"Entry {target.number} no longer counts: entry {newer} took its place.",
            do=f"Correct entry {newer}.",
            code="already corrected",
        )
    while target.kind == Withdrawn.KIND and target.corrects:
        target = found.get(number=target.corrects)
    return target.kind


def _refuse_lengths(value: Any) -> None:
    """Text, unit and nanometres that say no length would break every page they reach."""
    if isinstance(value, Measured):
        try:
            sound = abs(value.length.nanometres) < LONGEST_NM
        except ValueError:
            sound = False
        if not sound:
            raise Refused(
                f"{value.text[:40]!r} with unit {value.unit[:10]!r} is no length.",
                do="Send text, unit and whole nanometres.",
                code="unreadable facts",
            )
    elif isinstance(value, msgspec.Struct):
        for name in value.__struct_fields__:
            _refuse_lengths(getattr(value, name))
    elif isinstance(value, tuple | list):
        for one in value:
            _refuse_lengths(one)
