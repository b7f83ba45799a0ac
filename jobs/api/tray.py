"""The tray: keeping what could not be admitted, and settling it, once and for all."""

from __future__ import annotations

import hashlib
import json
import uuid
from datetime import timedelta
from typing import Any

from django.utils import timezone

from jobs.actions.checked import checked_text
from jobs.models import TrayItem, User
from stakes.record import Refused


def keep(
    *,
    person: User,
    sent: Any,
    key: uuid.UUID | None,
    job: str,
    device: str,
    offset: timedelta,
    reason: str,
) -> TrayItem:
    """Keep an item as it was sent; sent again it is the same item of the tray."""
    words = as_text(sent)
    kept, _ = TrayItem.objects.get_or_create(
        person=person,
        # What names no key is known by its words.
        key=key or uuid.uuid5(person.pk, words),
        sha256=hashlib.sha256(words.encode()).hexdigest(),
        defaults={
            "job": job,
            "sent": words,
            "device": device,
            "clock_offset_ms": milliseconds(offset),
            "reason": reason,
        },
    )
    return kept


def as_text(sent: Any) -> str:
    """JSON in plain ASCII, the same for the same words."""
    return json.dumps(sent, sort_keys=True)


def milliseconds(offset: timedelta) -> int:
    return round(offset.total_seconds() * 1000)


def came_in(person: User, key: uuid.UUID, number: int) -> None:
    """What waited was sent again and could be admitted now: it waits no longer."""
    waiting = TrayItem.objects.filter(person=person, key=key, settled_at=None)
    waiting.update(
        settled_at=timezone.now(), settled_by=person.name, outcome=f"entry {number}"
    )


def set_aside(item: TrayItem, *, reason: str, by: User) -> None:
    """Leave it out of the record, with the reason; it stays kept."""
    settle(item, checked_text(reason, "reason", most=1000), by)


def settle(item: TrayItem, outcome: str, by: User) -> None:
    """Raises Refused when somebody settled it meanwhile."""
    waiting = TrayItem.objects.filter(pk=item.pk, settled_at=None)
    if not waiting.update(
        settled_at=timezone.now(), settled_by=by.name, outcome=outcome
    ):
        raise Refused("It has been settled meanwhile.", code="settled")
