"""The phones' address: outside any job, as the person, for several jobs at once.

The device's clock is measured against the server's at each sync; what happened is moved
by that offset, and the device's own time stays beside it. Every item is answered for by
its key; what cannot be admitted waits in the tray and is never dropped.
"""

from __future__ import annotations

from datetime import datetime
from typing import Annotated, Any
from uuid import UUID

import msgspec
from django.utils import timezone
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view, parser_classes
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api import shapes, tray
from jobs.api.admitting import PhoneItem, Sending, admit, seated
from jobs.api.asking import refusal, refusals
from jobs.api.items import MOST_ITEMS, in_utc, named, readable
from jobs.api.parsing import BoundedJSON, body_of
from jobs.declared import Who, open_to
from jobs.models import User
from stakes.models import Record
from stakes.record import Refused


class Sync(msgspec.Struct, forbid_unknown_fields=True):
    """One sending: the device's clock as it left, the device's name, the items."""

    sent_at: datetime
    items: list[Any]
    device: Annotated[str, msgspec.Meta(max_length=64)] = ""


@open_to(Who.SIGNED_IN)
@extend_schema(request=shapes.Sync, responses=shapes.Synced)
@api_view(["POST"])
@parser_classes([BoundedJSON])
@refusals
def phone(request: Request) -> Response:
    """Take what a phone has kept; answer for every key, and with each job's head."""
    sync = _sync(body_of(request))
    offset = timezone.now() - in_utc(sync.sent_at, "sent_at")
    sending = Sending(request.user, sync.device or _device(request), offset)
    outcomes = [_outcome(sending, sent) for sent in sync.items]
    return Response({"outcomes": outcomes, "heads": _heads(request.user, outcomes)})


def _sync(sent: Any) -> Sync:
    """The frame around the items, each of which is read, or not, by itself."""
    frame = sent if isinstance(sent, dict) else {}
    items = frame.get("items")
    if not isinstance(items, list):
        raise Refused("Send what was kept as a list called items.", code="unreadable")
    if len(items) > MOST_ITEMS:
        raise Refused(
            f"{len(items)} items were sent at once.",
            do=f"Send at most {MOST_ITEMS}, and the others after them.",
            code="too many",
        )
    sync = readable(frame | {"items": []}, Sync)
    sync.items = items
    return sync


def _device(request: Request) -> str:
    token = request._request.token  # type: ignore[attr-defined]
    return f"token {token.name}"[:64] if token else ""


def _heads(person: User, outcomes: list[dict[str, Any]]) -> dict[str, int]:
    """Where the record of each job stands, for whoever has a seat there: a phone that
    saw it further sends again what it kept."""
    named_jobs = {o["job"] for o in outcomes if o["job"]}
    found = Record.objects.filter(number__in=named_jobs)
    return {r.number: r.head for r in found if seated(r, person)}


def _outcome(sending: Sending, sent: Any) -> dict[str, Any]:
    """What became of one item: recorded, already, conflict, waiting or set aside."""
    told: dict[str, Any] = {"key": named(sent), "job": ""}
    key: UUID | None = None
    try:
        item = readable(sent, PhoneItem)
        key, told["job"] = item.key, item.job
        spoken = admit(sending, item)
    except Refused as refused:
        if refused.code == "conflict":
            return told | {"outcome": "conflict", **refusal(refused)}
        return told | _waits(sending, sent, key, told["job"], refused)
    tray.came_in(sending.person, item.key, spoken.entry.number)
    return told | {"outcome": spoken.outcome, "number": spoken.entry.number}


def _waits(
    sending: Sending, sent: Any, key: UUID | None, job: str, refused: Refused
) -> dict[str, Any]:
    kept = tray.keep(
        person=sending.person,
        sent=sent,
        key=key,
        job=job,
        device=sending.device,
        offset=sending.offset,
        reason=str(refused),
    )
    if kept.settled_at is not None:
        aside = Refused(kept.outcome, where=f"Settled by {kept.settled_by}.")
        return {"outcome": "set aside", **refusal(aside)}
    return {"outcome": "waiting", **refusal(refused)}
