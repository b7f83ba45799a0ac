"""Admitting what a phone kept: by the seat its person had when it happened."""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import datetime, timedelta
from typing import Annotated
from uuid import UUID

import msgspec

from jobs.api.items import Item, in_utc, readable
from jobs.api.saying import Spoken, first_moment, say
from jobs.api.tray import milliseconds, settle
from jobs.models import TrayItem, User
from jobs.queries.seats import SeatThen, by_of, seat_at, seat_now
from stakes.can import Asked, Can
from stakes.models import Record
from stakes.record import Refused, TimeKnown, Told

Number = Annotated[str, msgspec.Meta(max_length=40)]


class PhoneItem(Item, forbid_unknown_fields=True, kw_only=True):
    """A statement made on a phone: for which job, at which time of the device.

    `happened_at` is sent only where the person said another time than the device's.
    `author` is who was signed in when it was made; a phone may have changed hands.
    """

    job: Number
    device_time: datetime
    author: UUID | None = None


@dataclass(frozen=True, slots=True)
class Sending:
    """Who sends, from which device, whose clock is how far behind the server's."""

    person: User
    device: str
    offset: timedelta
    admitted_by: User | None = None


def seated(record: Record, person: User) -> bool:
    return seat_now(record, person) is not None


def admit(sending: Sending, item: PhoneItem) -> Spoken:
    """Append one item as its person; raises Refused when it must wait or conflicts."""
    author = _author(sending, item)
    device_time = in_utc(item.device_time, "device_time")
    stated = item.happened_at is not None
    at = in_utc(item.happened_at or device_time + sending.offset, "device_time")
    record = Record.objects.filter(number=item.job).first()
    if record is not None and not stated:
        at = first_moment(record, item.key, device_time) or at
    seat = seat_at(record, author, at) if record else None
    if sending.admitted_by is not None:
        seat = _let_in(record, seat, author, sending.admitted_by)
    if record is None or seat is None:
        raise Refused(
            "You had no seat on this job when it happened.",
            do="The office looks at it; nothing is lost.",
            code="no seat",
        )
    told = Told(
        device_time=device_time,
        clock_offset_ms=milliseconds(sending.offset),
        time_known=TimeKnown.STATED if stated else TimeKnown.DEVICE,
        admitted_by=sending.admitted_by.name if sending.admitted_by else "",
    )
    who = Asked(
        record=record,
        by=replace(by_of(author, sending.device), told=told),
        rights=seat.rights,
        company=seat.company,
        roles=frozenset(str(role) for role in seat.roles),
    )
    return say(who, item, at, done=True)


def admit_waiting(kept: TrayItem, *, job: str, by: User) -> Spoken:
    """The office admits what waited, into the job it says, as who sent it.

    What the office may say itself it may admit for others; the entry names both.
    """
    item = readable(msgspec.json.decode(kept.sent.encode()), PhoneItem)
    item.job = job.strip() or item.job
    offset = timedelta(milliseconds=kept.clock_offset_ms)
    spoken = admit(Sending(kept.person, kept.device, offset, by), item)
    settle(kept, f"entry {spoken.entry.number} of job {item.job}", by)
    return spoken


def _author(sending: Sending, item: PhoneItem) -> User:
    if item.author in (None, sending.person.pk):
        return sending.person
    found = User.objects.filter(pk=item.author).first()
    if sending.admitted_by is None or found is None:
        raise Refused(
            "It was made while somebody else was signed in on this device.",
            do="The office looks at it; nothing is lost.",
            code="other author",
        )
    return found


def _let_in(
    record: Record | None, seat: SeatThen | None, author: User, office: User
) -> SeatThen:
    own = seat_now(record, office) if record else None
    if own is None:
        raise Refused(
            "There is no job with this number.",
            do="Name the job it belongs to.",
            field="job",
            code="no job",
        )
    if seat is None:
        return SeatThen(own.roles, own.rights - {Can.SEATS}, str(author.company_id))
    return SeatThen(seat.roles | own.roles, seat.rights | own.rights, seat.company)
