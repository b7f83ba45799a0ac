"""A statement as a client sends it, read into a type, with every moment in UTC.

Nothing of it is believed here or later: `plain` bounds it, `saying` judges it.
"""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Annotated, Any, Literal, TypeVar
from uuid import UUID

import msgspec

from jobs.api.plain import bounded, unreadable
from stakes.record import Refused
from stakes.record.canonical import LARGEST_EXACT

MOST_ITEMS = 100
YEARS = range(1990, 2200)
"""Years a moment may lie in; before is a clock that was never set, beyond overflows."""

Short = Annotated[str, msgspec.Meta(max_length=500)]
HowKnown = Literal[
    "instrument file",
    "measured and typed",
    "seen",
    "told",
    "copied from paper",
    "assumed",
]
"""What a person may say of how they know; the rest follows from what was done."""

Shape = TypeVar("Shape")


class Item(msgspec.Struct, forbid_unknown_fields=True, kw_only=True):
    """One statement as a client sends it.

    `key` is the client's own and makes a second sending harmless. `facts` are what was
    measured or seen. `corrects` is the key of an entry: `facts` then say what changes
    in it, or it is taken back (`withdraws`), with `why`.
    """

    key: UUID
    kind: Short = ""
    facts: dict[str, Any] = {}
    happened_at: datetime | None = None
    known: HowKnown | None = None
    counter: Annotated[int, msgspec.Meta(ge=0, le=LARGEST_EXACT)] = 0
    corrects: UUID | None = None
    withdraws: bool = False
    why: Short = ""


def readable(sent: Any, shape: type[Shape]) -> Shape:
    """What was sent as what it should be; Refused with a sentence when it is not."""
    bounded(sent)
    try:
        return msgspec.convert(sent, shape)
    except msgspec.ValidationError as error:
        raise unreadable(f"{error}.") from error


def named(sent: Any) -> str | None:
    """The key an item goes by, to answer under, even when the rest is unreadable."""
    key = sent.get("key") if isinstance(sent, dict) else None
    try:
        bounded(key)
    except Refused:
        return None
    return key if isinstance(key, str) and len(key) <= 64 else None


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
