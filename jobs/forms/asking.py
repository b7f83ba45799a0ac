"""What the forms of requests, visits, handovers and holds share. Times are the site's."""

from __future__ import annotations

import uuid
from datetime import UTC, datetime
from typing import Any
from uuid import UUID

from django import forms
from django.utils.dateparse import parse_datetime

from stakes.models import Mark, Record
from stakes.queries.drawing import natural

LONG = {"rows": 3}
SIGNATURES = [
    ("signed", "Signed"),
    ("declined", "Declined"),
    ("absent", "Nobody was there"),
]
FIRST_YEAR, LAST_YEAR = 2000, 2100
"""Outside these a date is a slip of the finger, and clocks have no zone for it."""


class Keyed(forms.Form):
    """A form that is one act however often its button is pressed: gloves tap twice."""

    key = forms.UUIDField(widget=forms.HiddenInput, required=False, initial=uuid.uuid4)


class LocalMoment(forms.DateTimeField):
    """A time of the site, chosen with the device's own control."""

    def __init__(self, *, record: Record, **more: Any) -> None:
        widget = forms.DateTimeInput(
            attrs={"type": "datetime-local"}, format="%Y-%m-%dT%H:%M"
        )
        super().__init__(widget=widget, **more)
        self.record = record

    def prepare_value(self, value: Any) -> Any:
        """A moment is shown by the clock on the site."""
        if isinstance(value, datetime) and value.tzinfo is not None:
            return value.astimezone(self.record.time_zone).replace(tzinfo=None)
        return value

    def to_python(self, value: Any) -> datetime | None:
        if value in self.empty_values:
            return None
        try:
            moment = parse_datetime(str(value).strip())
        except ValueError:
            moment = None
        if moment is None:
            raise forms.ValidationError(
                "This is not a date and time. Write it as 2026-03-02T16:40."
            )
        if not FIRST_YEAR <= moment.year <= LAST_YEAR:
            raise forms.ValidationError(
                f"The year {moment.year} is not meant. Check the date."
            )
        # What names no zone was read off the clock on the site.
        if moment.tzinfo is None:
            moment = moment.replace(tzinfo=self.record.time_zone)
        return moment.astimezone(UTC)


class MarkList(forms.CharField):
    """Numbers of marks as people write them: 101, 104-107, B2."""

    def __init__(self, *, record: Record, **more: Any) -> None:
        more.setdefault("widget", forms.Textarea(attrs={"rows": 2}))
        more.setdefault("help_text", "Numbers with commas; 101-108 for a run.")
        super().__init__(max_length=5000, **more)
        self.record = record

    def clean(self, value: Any) -> list[UUID]:
        text = super().clean(value) or ""
        found = Mark.objects.filter(record=self.record)
        known = dict(found.values_list("label", "key"))
        keys: dict[UUID, None] = {}
        for piece in (p.strip() for p in text.replace("\n", ",").split(",")):
            if piece:
                keys |= dict.fromkeys(self._keys(piece, known))
        return list(keys)

    def _keys(self, piece: str, known: dict[str, UUID]) -> list[UUID]:
        if piece in known:
            return [known[piece]]
        first, dash, last = piece.partition("-")
        first, last = first.strip(), last.strip()
        if dash and first.isdecimal() and last.isdecimal() and len(first + last) < 20:
            low, high = int(first), int(last)
            run = [label for label in known if label.isdecimal()]
            inside = [label for label in run if low <= int(label) <= high]
            if inside:
                return [known[label] for label in sorted(inside, key=natural)]
        raise forms.ValidationError(
            f"There is no mark {piece[:40]!r} on this job. Copy the number from the "
            "stake or the list of marks."
        )


def when(record: Record, label: str) -> LocalMoment:
    """A time that is now unless said otherwise."""
    return LocalMoment(
        record=record, label=label, required=False, help_text="Empty: now."
    )


def labels_of(record: Record, keys: Any) -> str:
    """Marks as a form writes them."""
    found = Mark.objects.filter(record=record, key__in=keys)
    labels = found.values_list("label", flat=True)
    return ", ".join(sorted(labels, key=natural))
