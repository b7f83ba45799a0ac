"""The phones' address: outside any job, as the person, for several jobs at once.

Each item is judged by the seat its person had when it happened. The device's clock is
measured against the server's at each sync; what happened is moved by that offset, and
the device's own time stays beside it. What cannot be admitted waits in the tray.
"""

from __future__ import annotations

import json
import uuid
from datetime import datetime, timedelta
from typing import Annotated, Any

import msgspec
from django.utils import timezone
from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view, parser_classes
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api.asking import refusal, refusals
from jobs.api.items import (
    MOST_ITEMS,
    Item,
    fact_of,
    in_utc,
    named,
    readable,
    say,
    unsound,
)
from jobs.api.parsing import BoundedJSON
from jobs.declared import Who, open_to
from jobs.models import TrayItem, User
from jobs.queries.seats import by_of, seat_at
from stakes.models import Entry, Record
from stakes.record import Refused, Said, TimeKnown


class PhoneItem(Item, forbid_unknown_fields=True, kw_only=True):
    """A statement made on a phone: for which job, at which time of the device."""

    job: Annotated[str, msgspec.Meta(max_length=40)]
    device_time: datetime


class Sync(msgspec.Struct):
    """One sending: the device's clock as it left, the device's name, the items."""

    sent_at: datetime
    items: list[Any]
    device: Annotated[str, msgspec.Meta(max_length=64)] = ""


@open_to(Who.SIGNED_IN)
@extend_schema(request=OpenApiTypes.OBJECT, responses={200: OpenApiTypes.OBJECT})
@api_view(["POST"])
@parser_classes([BoundedJSON])
@refusals
def phone(request: Request) -> Response:
    """Take what a phone has kept; answer for every key, and with each job's head."""
    sync = _sync(request.data)
    if len(sync.items) > MOST_ITEMS:
        raise Refused(f"Send at most {MOST_ITEMS} at once.", code="too many")
    offset = timezone.now() - in_utc(sync.sent_at, "sent_at")
    person: User = request.user
    outcomes = [_outcome(person, sync.device, offset, sent) for sent in sync.items]
    jobs = {o["job"] for o in outcomes if o.get("job")}
    heads = dict(Record.objects.filter(number__in=jobs).values_list("number", "head"))
    return Response({"outcomes": outcomes, "heads": heads})


def _sync(sent: Any) -> Sync:
    """The frame around the items, each of which is read, or not, by itself."""
    frame = sent if isinstance(sent, dict) else {}
    around = {name: frame[name] for name in frame if name != "items"}
    items = frame.get("items")
    readable(around | {"items": []}, Sync)
    if not isinstance(items, list):
        raise Refused("Send what was kept as a list called items.", code="unreadable")
    return msgspec.convert(around | {"items": items}, Sync)


def _outcome(person: User, device: str, offset: timedelta, sent: Any) -> dict[str, Any]:
    try:
        item = readable(sent, PhoneItem)
    except Refused as refused:
        return _unreadable(person, sent, refused)
    told = {"key": str(item.key), "job": item.job}
    try:
        return told | admit(person, device, offset, item)
    except Refused as refused:
        if refused.code == "conflict":
            return told | {"outcome": "conflict", **refusal(refused)}
        return told | _wait(person, item.key, item.job, sent, refused)


def admit(
    person: User, device: str, offset: timedelta, item: PhoneItem
) -> dict[str, Any]:
    """Append one item as its person; raises Refused when it must wait or conflicts."""
    record = Record.objects.filter(number=item.job).first()
    device_time = in_utc(item.device_time, "device_time")
    at = in_utc(device_time + offset, "device_time")
    before = Entry.objects.filter(record=record, key=item.key).first()
    if before is not None:
        # A later sync measures the clock a little otherwise; the first one counts.
        at, offset = before.happened_at, before.happened_at - device_time
    seat = seat_at(record, person, at) if record else None
    if record is None or seat is None:
        raise Refused(
            "You had no seat on this job when it happened.",
            do="The office looks at it; nothing is lost.",
            code="no seat",
        )
    said = Said(
        fact=fact_of(item),
        at=at,
        known=item.known,
        time_known=TimeKnown.DEVICE,
        key=item.key,
        counter=item.counter,
        device_time=device_time,
        clock_offset_ms=int(offset.total_seconds() * 1000),
        corrects=item.corrects,
        withdraws=item.withdraws,
        why=item.why,
    )
    entry = say(record, said, by=by_of(person, device), rights=seat.rights)
    return {
        "outcome": "already" if before else "recorded",
        "number": entry.number,
    }


def _wait(
    person: User, key: uuid.UUID, job: str, sent: Any, refused: Refused
) -> dict[str, Any]:
    """Keep it for the office; sent again it is the same item."""
    kept, _ = TrayItem.objects.get_or_create(
        key=key,
        defaults={"person": person, "job": job, "sent": sent, "reason": str(refused)},
    )
    if (kept.person_id, kept.sent) != (person.pk, sent):
        # Saying "waiting" here would lose it: the place is taken by other words.
        taken = Refused(
            "The same key waits already with something else.",
            do="Send it again under a key of its own.",
            code="conflict",
        )
        return {"outcome": "conflict", **refusal(taken)}
    return {"outcome": "waiting", **refusal(refused)}


def _unreadable(person: User, sent: Any, refused: Refused) -> dict[str, Any]:
    """Even what cannot be read is kept, under its key or one made from its words."""
    words = json.dumps(sent, sort_keys=True)
    key = uuid.uuid5(person.pk, words)
    # As plain ASCII text where the database could not hold the thing itself.
    holdable = isinstance(sent, dict) and not unsound(sent)
    kept = sent if holdable else {"words": words}
    return {"key": named(sent), **_wait(person, key, "", kept, refused)}
