"""The form that draws a zone or a line from its corners."""

from __future__ import annotations

import uuid
from typing import Any

from django import forms

from stakes.actions.zones import SORTS, read_corners
from stakes.forms.office.parts import KeyedForm, LengthField, one_of, sheet_choices
from stakes.models import Record


class ZoneForm(KeyedForm):
    sort = forms.ChoiceField(label="What it is", choices=one_of(SORTS))
    name = forms.CharField(label="Name", max_length=80)
    corners = forms.CharField(
        label="Corners, in order",
        max_length=200_000,
        widget=forms.Textarea(attrs={"rows": 8, "spellcheck": "false"}),
        help_text="One a line: northing, easting, or the number of a mark. The first "
        "corner is not repeated.",
    )
    words = forms.CharField(label="Words beside it", max_length=200, required=False)

    def __init__(self, data: Any = None, *, record: Record, **kwargs: Any) -> None:
        super().__init__(data, **kwargs)
        self.fields["height"] = LengthField(
            unit=record.length_unit,
            label="Height above ground",
            help_text="For an obstacle that a line of sight may pass over.",
        )
        self.fields["basis"] = forms.MultipleChoiceField(
            label="Sheets",
            required=False,
            choices=sheet_choices(record),
            widget=forms.CheckboxSelectMultiple,
        )
        if not self.fields["basis"].choices:
            del self.fields["basis"]

    def said(self, record: Record) -> dict[str, Any]:
        corners = read_corners(self.cleaned_data["corners"], record)
        basis = [uuid.UUID(k) for k in self.cleaned_data.get("basis", [])]
        return {**self.cleaned_data, "corners": corners, "basis": basis}
