"""What keeps a mark from being staked: open questions, directions, newer sheets."""

from __future__ import annotations

from datetime import datetime
from uuid import UUID

from django.db.models import Q

from stakes.models import Direction, Entry, Mark, Question, Record, Sheet


def questions(record: Record, mark: UUID, at: datetime) -> list[Question]:
    """Questions to the designer that were open at a moment and hold the mark."""
    still = Q(answered_at__isnull=True) | Q(answered_at__gt=at)
    rows = Question.objects.filter(still, record=record, asked_at__lte=at)
    return [row for row in rows if str(mark) in row.holds]


def directions(record: Record, mark: UUID, at: datetime) -> list[Direction]:
    """Verbal directions not settled at a moment that hold the mark."""
    still = Q(settled_at__isnull=True) | Q(settled_at__gt=at)
    rows = Direction.objects.filter(still, record=record, given_at__lte=at)
    return [row for row in rows if str(mark) in row.holds]


def newer_sheets(record: Record, mark: Mark, at: datetime) -> list[Sheet]:
    """Sheets that came after the mark was issued and touch it, or may touch it."""
    issued = (
        Entry.objects.filter(record=record, number=mark.planned_by)
        .values_list("happened_at", flat=True)
        .first()
    )
    rows = Sheet.objects.filter(
        record=record,
        received_at__lte=at,
        status__in=("preliminary", "for construction"),
    )
    if issued is not None:
        rows = rows.filter(received_at__gt=issued)
    return [row for row in rows if _touches(row, mark)]


def _touches(sheet: Sheet, mark: Mark) -> bool:
    if str(sheet.key) in mark.basis:
        return False
    unsorted = sheet.touches_all and not sheet.sorted
    return unsorted or str(mark.key) in sheet.touched
