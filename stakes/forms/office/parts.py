"""What the forms of the office share: a key sent with the form, lengths, marks."""

from __future__ import annotations

import uuid
from collections.abc import Iterable
from datetime import date, datetime
from typing import Any
from uuid import UUID

from django import forms

from geometry.errors import GeometryError
from geometry.units import Length, Unit
from stakes.models import Mark, Record, Sheet
from stakes.record.lengths import Measured

MOST_LABELS = 500


class KeyedForm(forms.Form):
    """A form sent twice is one act: its key is made when the page is shown."""

    key = forms.UUIDField(widget=forms.HiddenInput, required=False)

    def __init__(self, data: Any = None, *args: Any, **kwargs: Any) -> None:
        super().__init__(data, *args, **kwargs)
        self.fields["key"].initial = uuid.uuid4

    def clean_key(self) -> UUID:
        return self.cleaned_data["key"] or uuid.uuid4()


class LengthField(forms.CharField):
    """A length in the job's unit, or with a unit behind it; None when left empty."""

    def __init__(self, *, unit: Unit, decimals: bool = True, **kwargs: Any) -> None:
        kwargs.setdefault("max_length", 60)
        kwargs.setdefault("required", False)
        widget = forms.TextInput(
            attrs={"inputmode": "decimal", "autocomplete": "off", "spellcheck": "false"}
        )
        kwargs.setdefault("widget", widget)
        super().__init__(**kwargs)
        self.unit = unit

    def clean(self, value: Any) -> Any:
        text = super().clean(value)
        if not text:
            return None
        try:
            return Measured.of(Length.parse(text, self.unit))
        except GeometryError as error:
            raise forms.ValidationError(str(error)) from error


class MarksField(forms.CharField):
    """Numbers of marks of one job, with commas or spaces between; their keys."""

    def __init__(self, *, record: Record, **kwargs: Any) -> None:
        kwargs.setdefault("max_length", 20_000)
        kwargs.setdefault(
            "help_text", "Numbers with commas between; 101-116 for all in a row."
        )
        super().__init__(**kwargs)
        self.record = record

    def clean(self, value: Any) -> Any:
        labels = split_labels(super().clean(value))
        if not labels:
            return []
        if len(labels) > MOST_LABELS:
            raise forms.ValidationError(
                f"{len(labels)} marks are named. Name at most {MOST_LABELS} at once."
            )
        found = dict(
            Mark.objects.filter(record=self.record, label__in=labels).values_list(
                "label", "key"
            )
        )
        if missing := [label for label in labels if label not in found]:
            named = ", ".join(missing[:8])
            raise forms.ValidationError(f"There is no mark {named} on this job.")
        return [found[label] for label in labels]


def split_labels(text: str) -> list[str]:
    """Numbers out of a text; a run such as 101-104 is spelled out.

    >>> split_labels("101-103, A7; 9")
    ['101', '102', '103', 'A7', '9']
    """
    found: list[str] = []
    for part in text.replace(";", ",").replace("\n", ",").split(","):
        part = part.strip()
        first, dash, last = part.partition("-")
        run = dash and first.isdecimal() and last.isdecimal() and part.isascii()
        if run and len(part) < 15 and 0 < int(last) - int(first) < MOST_LABELS:
            found += [str(n) for n in range(int(first), int(last) + 1)]
        elif part:
            found.append(part)
    return list(dict.fromkeys(found))


def sheet_choices(record: Record) -> list[tuple[str, str]]:
    """The sheets of a job for a choice; what was replaced says so."""
    rows = Sheet.objects.filter(record=record).order_by("sheet_number", "received_at")
    return [
        (
            str(s.key),
            f"{s} ({s.status}{', replaced' if s.replaced_by else ''})",
        )
        for s in rows
    ]


def one_of(words: Iterable[str], empty: str = "") -> list[tuple[str, str]]:
    listed = [(w, w) for w in words]
    return [("", empty), *listed] if empty else listed


class MomentField(forms.CharField):
    """A local date and time of the job; None when left empty."""

    def __init__(self, *, record: Record, **kwargs: Any) -> None:
        kwargs.setdefault("required", False)
        kwargs.setdefault("max_length", 25)
        kwargs.setdefault("widget", forms.TextInput(attrs={"type": "datetime-local"}))
        super().__init__(**kwargs)
        self.record = record

    def clean(self, value: Any) -> Any:
        text = super().clean(value)
        if not text:
            return None
        try:
            moment = datetime.fromisoformat(text)
        except ValueError as error:
            raise forms.ValidationError(
                "This is not a date and time. Write it as 2026-03-02T16:40."
            ) from error
        zone = self.record.time_zone
        return moment if moment.tzinfo else moment.replace(tzinfo=zone)


class DayField(forms.CharField):
    """A day as text, 2026-03-02; may stay empty."""

    def __init__(self, **kwargs: Any) -> None:
        kwargs.setdefault("required", False)
        kwargs.setdefault("max_length", 10)
        kwargs.setdefault("widget", forms.TextInput(attrs={"type": "date"}))
        super().__init__(**kwargs)

    def clean(self, value: Any) -> Any:
        text = super().clean(value)
        try:
            return date.fromisoformat(text).isoformat() if text else ""
        except ValueError as error:
            raise forms.ValidationError(
                "This is not a day. Write it as 2026-03-02."
            ) from error
