"""The phones' address: outside any job, as the person, for several jobs at once.

Each item is judged by the seat its person had when it happened. The device's clock is
measured against the server's at each sync; what happened is moved by that offset, and
the device's own time stays beside it. What cannot be admitted waits in the tray.
"""

from __future__ import annotations

import uuid
from datetime import UTC, datetime, timedelta
from typing import Annotated, Any

import msgspec
from django.utils import timezone
from drf_spectacular.types import OpenApiTypes
from drf_spectacular.utils import extend_schema
from rest_framework.decorators import api_view
from rest_framework.request import Request
from rest_framework.response import Response

from jobs.api.asking import refusal, refusals
from jobs.api.writing import MOST_ITEMS, Item
from jobs.declared import Who, open_to
from jobs.models import TrayItem, User
from jobs.queries.seats import by_of, seat_at
from stakes.actions.correcting import LEFT_TO_THEIR_OWN_PAGES, needed
from stakes.kinds.correcting import Withdrawn
from stakes.models import Entry, Record
from stakes.record import Refused, Said, TimeKnown, append
from stakes.record.kinds import fact_from


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
@refusals
def phone(request: Request) -> Response:
    """Take what a phone has kept; answer for every key, and with each job's head."""
    try:
        sync = msgspec.convert(request.data, Sync)
    except msgspec.ValidationError as error:
        raise Refused(f"This cannot be read: {error}.", code="unreadable") from error
    if len(sync.items) > MOST_ITEMS:
        raise Refused(f"Send at most {MOST_ITEMS} at once.", code="too many")
    offset = timezone.now() - _aware(sync.sent_at)
    person: User = request.user
    outcomes = [_outcome(person, sync.device, offset, sent) for sent in sync.items]
    jobs = {o["job"] for o in outcomes if o.get("job")}
    heads = dict(Record.objects.filter(number__in=jobs).values_list("number", "head"))
    return Response({"outcomes": outcomes, "heads": heads})


def _outcome(person: User, device: str, offset: timedelta, sent: Any) -> dict[str, Any]:
    try:
        item = msgspec.convert(sent, PhoneItem)
    except msgspec.ValidationError as error:
        return _unreadable(person, sent, str(error))
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
    at = _aware(item.device_time) + offset
    before = Entry.objects.filter(record=record, key=item.key).first()
    if before is not None:
        # A later sync measures the clock a little otherwise; the first one counts.
        at, offset = before.happened_at, before.happened_at - _aware(item.device_time)
    seat = seat_at(record, person, at) if record else None
    if record is None or seat is None:
        raise Refused(
            "You had no seat on this job when it happened.",
            do="The office looks at it; nothing is lost.",
            code="no seat",
        )
    if item.kind in LEFT_TO_THEIR_OWN_PAGES or needed(item.kind) not in seat.rights:
        raise Refused(
            f"{item.kind!r} takes a right your seat did not have then.",
            code="not yours",
        )
    said = Said(
        fact=Withdrawn() if item.withdraws else fact_from(item.kind, item.facts),
        at=at,
        known=item.known,
        time_known=TimeKnown.DEVICE,
        key=item.key,
        counter=item.counter,
        device_time=_aware(item.device_time),
        clock_offset_ms=int(offset.total_seconds() * 1000),
        corrects=item.corrects,
        withdraws=item.withdraws,
        why=item.why,
    )
    [entry] = append(record, said, by=by_of(person, device))
    return {
        "outcome": "already" if before else "recorded",
        "number": entry.number,
    }


def _wait(
    person: User, key: uuid.UUID, job: str, sent: Any, refused: Refused
) -> dict[str, Any]:
    """Keep it for the office; sent again it is the same item."""
    TrayItem.objects.get_or_create(
        key=key,
        defaults={"person": person, "job": job, "sent": sent, "reason": str(refused)},
    )
    return {"outcome": "waiting", **refusal(refused)}


def _unreadable(person: User, sent: Any, why: str) -> dict[str, Any]:
    """Even what cannot be read is kept, under its key or one made from its words."""
    words = msgspec.json.encode(sent, order="sorted")
    key = uuid.uuid5(person.pk, words.decode(errors="replace"))
    named = sent.get("key") if isinstance(sent, dict) else None
    refused = Refused(f"The item cannot be read: {why}.", code="unreadable")
    return {"key": named, **_wait(person, key, "", sent, refused)}


def _aware(moment: datetime) -> datetime:
    return moment if moment.tzinfo else moment.replace(tzinfo=UTC)
