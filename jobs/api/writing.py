"""Appending to the record by JSON: each item has its own outcome, none blocks another."""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Annotated, Any
from uuid import UUID

import msgspec
from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view
from rest_framework.exceptions import PermissionDenied
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api.asking import asked, refusal, refusals
from jobs.api.reading import record_after
from stakes.actions.correcting import LEFT_TO_THEIR_OWN_PAGES, needed
from stakes.can import Asked, Can, needs
from stakes.kinds.correcting import Withdrawn
from stakes.models import Entry
from stakes.record import Known, Refused, Said, append
from stakes.record.kinds import fact_from

MOST_ITEMS = 100
Short = Annotated[str, msgspec.Meta(max_length=500)]


class Item(msgspec.Struct, forbid_unknown_fields=True):
    """One statement as a client sends it. `key` is the client's own and makes a second
    sending harmless; `corrects` is the key of the entry whose place it takes."""

    key: UUID
    kind: Short
    facts: dict[str, Any] = {}
    happened_at: datetime | None = None
    known: Known = Known.SEEN
    counter: Annotated[int, msgspec.Meta(ge=0, le=2**53 - 1)] = 0
    corrects: UUID | None = None
    withdraws: bool = False
    why: Short = ""


@needs(Can.READ_RECORD)
@extend_schema(
    request=OpenApiTypes.OBJECT,
    responses={200: OpenApiTypes.OBJECT},
    description="GET entries after=N; POST {items: [...]}, each with its own outcome.",
)
@api_view(["GET", "POST"])
@refusals
def record(request: Request, job: str) -> Response:
    """The record: read on from an entry, or add statements."""
    if request.method == "GET":
        return record_after(request)
    if not asked(request).can(Can.RECORD):
        raise PermissionDenied("You may read this record, not add to it.")
    items = request.data.get("items") if isinstance(request.data, dict) else None
    if not isinstance(items, list) or not 0 < len(items) <= MOST_ITEMS:
        raise Refused(
            f"Send between 1 and {MOST_ITEMS} statements as a list called items.",
            code="unreadable",
        )
    return Response({"outcomes": [outcome(asked(request), item) for item in items]})


def outcome(who: Asked, sent: Any) -> dict[str, Any]:
    """What became of one item: recorded, already, or refused with its sentences."""
    key = sent.get("key") if isinstance(sent, dict) else None
    try:
        item = msgspec.convert(sent, Item)
    except msgspec.ValidationError as error:
        told = Refused(f"The item cannot be read: {error}.", code="unreadable")
        return {"key": key, "outcome": "refused", **refusal(told)}
    before = Entry.objects.filter(record=who.record, key=item.key).exists()
    try:
        _refuse_kind(who, item)
        [entry] = append(who.record, _said(item), by=who.by)
    except Refused as refused:
        word = "conflict" if refused.code == "conflict" else "refused"
        return {"key": str(item.key), "outcome": word, **refusal(refused)}
    word = "already" if before else "recorded"
    return {"key": str(item.key), "outcome": word, "number": entry.number}


def _refuse_kind(who: Asked, item: Item) -> None:
    """The right each kind takes; what a page alone may say is left to its page."""
    kind = item.kind
    if item.withdraws:
        target = Entry.objects.filter(record=who.record, key=item.corrects).first()
        kind = target.kind if target else item.kind
    if kind in LEFT_TO_THEIR_OWN_PAGES:
        raise Refused(
            f"Entries of the kind {kind!r} are made on their own page.",
            code="other page",
        )
    if needed(kind) not in who.rights:
        raise Refused(f"{kind!r} takes the right to {needed(kind)}.", code="not yours")


def _said(item: Item) -> Said:
    at = item.happened_at
    if at is not None and at.tzinfo is None:
        at = at.replace(tzinfo=UTC)
    return Said(
        fact=Withdrawn() if item.withdraws else fact_from(item.kind, item.facts),
        at=at,
        known=item.known,
        key=item.key,
        counter=item.counter,
        corrects=item.corrects,
        withdraws=item.withdraws,
        why=item.why,
    )
