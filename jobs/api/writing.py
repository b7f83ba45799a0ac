"""Appending to the record by JSON: each item has its own outcome, none blocks another."""

from __future__ import annotations

from typing import Any

from drf_spectacular.utils import extend_schema
from rest_framework.request import Request
from rest_framework.response import Response
from rest_framework.views import APIView

from jobs.api import shapes
from jobs.api.asking import asked, refusal, refusals
from jobs.api.items import MOST_ITEMS, Item, in_utc, named, readable
from jobs.api.parsing import BoundedJSON, Unreadable, body_of
from jobs.api.reading import record_after
from jobs.api.saying import say
from stakes.can import Asked, Can, needs
from stakes.record import Refused


class RecordView(APIView):
    """The record: reading it on and adding to it take different rights."""

    parser_classes = [BoundedJSON]

    @needs(Can.READ_RECORD)
    @extend_schema(parameters=shapes.RECORD_ASKED, responses=shapes.RecordPart)
    @refusals
    def get(self, request: Request, job: str) -> Response:
        """Entries after a number, in order (?after=N&limit=&kind=)."""
        return record_after(request)

    @needs(Can.RECORD)
    @extend_schema(request=shapes.Items, responses=shapes.Outcomes)
    def post(self, request: Request, job: str) -> Response:
        """Add statements, {items: [...]}; each takes the right of its own kind."""
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
        item = readable(sent, Item)
        at = in_utc(item.happened_at, "happened_at") if item.happened_at else None
        spoken = say(who, item, at)
    except Refused as refused:
        word = "conflict" if refused.code == "conflict" else "refused"
        return told | {"outcome": word, **refusal(refused)}
    return told | {"outcome": spoken.outcome, "number": spoken.entry.number}
