"""Appending to the record by JSON: each item has its own outcome, none blocks another."""

from __future__ import annotations

from typing import Any

from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import extend_schema
from rest_framework.request import Request
from rest_framework.response import Response
from rest_framework.views import APIView

from jobs.api.asking import asked, refusal
from jobs.api.items import MOST_ITEMS, Item, fact_of, in_utc, named, readable, say
from jobs.api.parsing import BoundedJSON, Unreadable, body_of
from jobs.api.reading import record_after
from stakes.can import Asked, Can, needs
from stakes.models import Entry
from stakes.record import Refused, Said


class RecordView(APIView):
    """The record: reading it on and adding to it take different rights."""

    parser_classes = [BoundedJSON]

    @needs(Can.READ_RECORD)
    @extend_schema(responses={200: OpenApiTypes.OBJECT})
    def get(self, request: Request, job: str) -> Response:
        """Entries after a number, in order (?after=N&limit=)."""
        return record_after(request)

    @needs(Can.RECORD)
    @extend_schema(request=OpenApiTypes.OBJECT, responses={200: OpenApiTypes.OBJECT})
    def post(self, request: Request, job: str) -> Response:
        """Add statements, {items: [...]}; each has its own outcome."""
        sent = body_of(request)
        items = sent.get("items") if isinstance(sent, dict) else None
        if not isinstance(items, list) or not 0 < len(items) <= MOST_ITEMS:
            raise Unreadable(
                f"Send between 1 and {MOST_ITEMS} statements as a list called items."
            )
        return Response({"outcomes": [outcome(asked(request), one) for one in items]})


def outcome(who: Asked, sent: Any) -> dict[str, Any]:
    """What became of one item: recorded, already, or refused with its sentences."""
    told = {"key": named(sent)}
    try:
        return told | _recorded(who, readable(sent, Item))
    except Refused as refused:
        word = "conflict" if refused.code == "conflict" else "refused"
        return told | {"outcome": word, **refusal(refused)}


def _recorded(who: Asked, item: Item) -> dict[str, Any]:
    before = Entry.objects.filter(record=who.record, key=item.key).exists()
    at = in_utc(item.happened_at, "happened_at") if item.happened_at else None
    said = Said(
        fact=fact_of(item),
        at=at,
        known=item.known,
        key=item.key,
        counter=item.counter,
        corrects=item.corrects,
        withdraws=item.withdraws,
        why=item.why,
    )
    entry = say(who.record, said, by=who.by, rights=who.rights)
    return {"outcome": "already" if before else "recorded", "number": entry.number}
