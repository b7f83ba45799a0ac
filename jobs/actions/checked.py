"""What may be said: checks that more than one action makes."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal, InvalidOperation
from uuid import UUID
from zoneinfo import available_timezones

from stakes.models import Mark, Record
from stakes.record import Refused

PLAUSIBLE_FACTOR = (Decimal("0.99"), Decimal("1.01"))
"""Grid over ground: beyond 1 part in 100 the number is something else."""


def refuse_zone(zone: str) -> None:
    """Time zones are those of the IANA list, which knows every change of summer time."""
    if zone not in available_timezones():
        raise Refused(
            f"{zone!r} is not a time zone of the IANA list.",
            do="Choose one like America/Chicago or Europe/Berlin.",
            field="zone",
        )


def checked_factor(text: str) -> str:
    """A combined factor as printed; an empty one means ground distances."""
    if not text.strip():
        return ""
    try:
        factor = Decimal(text.strip())
    except InvalidOperation:
        factor = Decimal("NaN")
    low, high = PLAUSIBLE_FACTOR
    if not factor.is_finite() or not low <= factor <= high:
        raise Refused(
            f"{text.strip()!r} is not a combined factor.",
            where="It is grid over ground and lies close to 1, like 0.99985932.",
            do="Copy it from the sheet, or leave it empty for ground distances.",
            field="combined_factor",
        )
    return text.strip()


def checked_text(text: str, field: str, *, most: int, required: bool = True) -> str:
    """A text without blanks around it, refused when it is missing or too long."""
    text = text.strip()
    if required and not text:
        raise Refused(f"The {field} is missing.", do="Write it.", field=field)
    if len(text) > most:
        raise Refused(
            f"The {field} has {len(text)} characters.",
            do=f"Shorten it to {most}.",
            field=field,
        )
    return text


def refuse_unknown_marks(record: Record, listed: Sequence[UUID]) -> None:
    """Marks are named by key; a key of another job, or of none, names nothing here."""
    known = Mark.objects.filter(record=record, key__in=listed).count()
    if known != len(set(listed)):
        raise Refused(
            "One of the marks named is not on this job.",
            do="Choose the marks again from the plan or the list.",
            field="listed",
            code="unknown mark",
        )
