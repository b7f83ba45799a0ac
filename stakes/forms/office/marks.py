"""The table in which marks are typed: one row a mark, and what all rows share."""

from __future__ import annotations

import uuid
from collections.abc import Mapping, Sequence
from typing import Any

from django import forms
from django.http import QueryDict

from stakes.actions.issuing import MOST_TYPED
from stakes.exchange.rows import Complaint
from stakes.forms.office.parts import KeyedForm, one_of, sheet_choices
from stakes.models import Record
from stakes.queries.tolerance import classes_of

COLUMNS: tuple[tuple[str, str], ...] = (
    ("label", "Number"),
    ("northing", "Northing"),
    ("easting", "Easting"),
    ("elevation", "Elevation"),
    ("purpose", "Purpose"),
    ("carries", "Carries"),
    ("line", "Line"),
    ("stage", "Stage"),
    ("refers_to", "Cut and fill to"),
    ("tolerance", "Tolerance class"),
    ("lasts", "Must last"),
)
SHARED = ("purpose", "sort", "stage", "refers_to", "tolerance", "lasts")
CHOICES = {
    "purpose": ("stake", "control", "benchmark"),
    "carries": ("both", "position", "elevation"),
}
ROWS_SHOWN = 8


class SharedForm(KeyedForm):
    """What every row says unless it says otherwise itself."""

    title = forms.CharField(label="What this plan is", max_length=120)
    purpose = forms.ChoiceField(label="Purpose", choices=one_of(CHOICES["purpose"]))
    sort = forms.CharField(
        label="Sort of stake",
        max_length=40,
        required=False,
        help_text="Building corner, gridline, curb ...",
    )
    stage = forms.CharField(
        label="Stage",
        max_length=40,
        required=False,
        help_text="Clearing, rough, footing, finish ...",
    )
    refers_to = forms.CharField(
        label="Cut and fill to",
        max_length=80,
        required=False,
        help_text="Top of footing, flow line, finished floor ...",
    )
    tolerance = forms.ChoiceField(label="Tolerance class", required=False)
    lasts = forms.CharField(label="Must last until", max_length=40, required=False)
    basis = forms.MultipleChoiceField(
        label="Basis: the sheets these were computed from",
        required=False,
        widget=forms.CheckboxSelectMultiple,
    )

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        names = [name for name in classes_of(record) if name]
        self.fields["tolerance"].choices = one_of(names, "by purpose")
        self.fields["basis"].choices = sheet_choices(record)

    @property
    def basis_keys(self) -> list[uuid.UUID]:
        return [uuid.UUID(k) for k in self.cleaned_data["basis"]]


class MarkTable:
    """The rows as typed, kept exactly, with what is wrong beside them."""

    def __init__(self, sent: QueryDict | None, shared: Mapping[str, Any]) -> None:
        self.rows = _typed(sent) if sent is not None else []
        self.shared = shared
        self.wrong: dict[int, list[Complaint]] = {}

    @property
    def filled(self) -> list[dict[str, str]]:
        """Rows somebody wrote in, completed with what all rows share."""
        return [self._whole(row) | {"row": str(at + 1)} for at, row in self._used()]

    def complain(self, wrong: Sequence[Complaint]) -> None:
        """Put each complaint by the row it belongs to on the page."""
        for complaint in wrong:
            self.wrong.setdefault(complaint.row - 1, []).append(complaint)

    def shown(self, more: int = 0) -> list[dict[str, Any]]:
        """Rows for the page, never fewer than a handful of empty ones."""
        count = max(len(self.rows) + more, ROWS_SHOWN)
        rows = [*self.rows, *({} for _ in range(count - len(self.rows)))]
        return [
            {
                "number": at + 1,
                "cells": [_cell(at, name, label, row) for name, label in COLUMNS],
                "wrong": self.wrong.get(at, []),
            }
            for at, row in enumerate(rows[:MOST_TYPED])
        ]

    def _used(self) -> list[tuple[int, dict[str, str]]]:
        named = ("label", "northing", "easting", "elevation")
        return [
            (at, row)
            for at, row in enumerate(self.rows)
            if any(row.get(name, "").strip() for name in named)
        ]

    def _whole(self, row: Mapping[str, str]) -> dict[str, str]:
        whole = {name: str(self.shared.get(name, "") or "") for name in SHARED}
        return whole | {name: text for name, text in row.items() if text.strip()}


def _cell(at: int, name: str, label: str, row: Mapping[str, str]) -> dict[str, Any]:
    return {
        "name": f"{name}-{at}",
        "label": label,
        "value": row.get(name, ""),
        "choices": CHOICES.get(name),
        "is_number": name in ("northing", "easting", "elevation"),
    }


def _typed(sent: QueryDict) -> list[dict[str, str]]:
    """Rows named label-0, northing-0 ...; gaps closed, no more than are read."""
    names = {name for name, _ in COLUMNS}
    found: dict[int, dict[str, str]] = {}
    for field, text in sent.items():
        name, _, at = field.rpartition("-")
        if name in names and at.isascii() and at.isdecimal() and len(at) < 6:
            found.setdefault(int(at), {})[name] = str(text)[:300]
    return [found[at] for at in sorted(found)][: MOST_TYPED + 1]
