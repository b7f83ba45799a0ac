"""Reading on from the last position, writing letters, sending each."""

from __future__ import annotations

from collections.abc import Sequence

from django.core.mail import EmailMessage
from django.db import transaction
from django.utils import timezone

from jobs.models import Notice, Position
from jobs.notices.first import first_notice
from jobs.notices.matters import letters
from jobs.work import ask, does
from stakes.models import Entry, Record
from stakes.record.reading import corrections, decoded

CONSUMER = "notices"
AT_ONCE = 200
TOLD = frozenset(
    {
        "request made",
        "request accepted",
        "request declined",
        "request talked over",
        "visit planned",
        "visit cancelled",
        "handed over",
        "hold sent",
        "hold lifted",
    }
)
"""Kinds that make letters; appending others wakes nobody."""


def notify(record: Record, entries: Sequence[Entry]) -> None:
    """Called in the append's transaction: ask that the record be read on."""
    if any(entry.kind in TOLD for entry in entries):
        ask(CONSUMER, record.number, record=record.pk)


@does(CONSUMER)
def consume(record: int) -> None:
    """Write the letters of what was said since the last position, then move on."""
    row = Record.objects.get(pk=record)
    while _read_on(row):
        pass


def _read_on(record: Record) -> bool:
    with transaction.atomic():
        position, _ = Position.objects.select_for_update().get_or_create(
            consumer=CONSUMER, record=record
        )
        entries = list(
            Entry.objects.filter(record=record, number__gt=position.number).order_by(
                "number"
            )[:AT_ONCE]
        )
        if not entries:
            return False
        overruled = corrections(record)
        for entry in entries:
            if entry.kind in TOLD and not entry.withdraws:
                _write(record, entry, overruled)
        position.number = entries[-1].number
        position.save(update_fields=["number"])
    return True


def _write(record: Record, entry: Entry, overruled: dict[int, int]) -> None:
    said = decoded(entry, overruled)
    if not said.counts:
        return
    for letter in letters(record, said):
        notice, is_new = Notice.objects.get_or_create(
            key=f"{record.key}:{entry.number}:{letter.to.pk}",
            defaults={
                "record": record,
                "number": entry.number,
                "to": letter.to.email,
                "subject": letter.subject,
                "body": letter.body,
            },
        )
        if is_new:
            ask("letter", str(notice.pk), notice=notice.pk)


@does("letter")
def send(notice: int) -> None:
    """Send one letter. Its Message-ID is its key, so a repeat is known as one.

    A worker killed after sending and before the mark sends it again: at least once.
    """
    row = Notice.objects.get(pk=notice)
    if row.sent_at is not None:
        return
    name = row.key.replace(":", ".")
    headers = {"Message-ID": f"<{name}@lathbook>"}
    EmailMessage(row.subject, row.body, to=[row.to], headers=headers).send()
    first_notice(row)
    Notice.objects.filter(pk=row.pk).update(sent_at=timezone.now())
