"""Forms that adopt a value for a control mark, and answer a doubt in writing."""

from __future__ import annotations

import uuid
from typing import Any

from django import forms

from stakes.forms.office.parts import (
    DayField,
    KeyedForm,
    LengthField,
    MarksField,
    sheet_choices,
)
from stakes.models import Mark, Record


class AnswerDoubtForm(KeyedForm):
    """Why marks in question may be relied on all the same."""

    components = forms.ChoiceField(
        label="For",
        choices=[
            ("pe", "position and elevation"),
            ("p", "position"),
            ("e", "elevation"),
        ],
    )
    reason = forms.CharField(
        label="Reason", max_length=500, widget=forms.Textarea(attrs={"rows": 3})
    )

    def __init__(self, data: Any = None, *, record: Record, **kwargs: Any) -> None:
        super().__init__(data, **kwargs)
        self.fields["marks"] = MarksField(record=record, label="Marks")
        self.order_fields(["key", "marks", "components", "reason"])


class AdoptForm(KeyedForm):
    """A new value; what is left empty stays as it was."""

    source = forms.CharField(
        label="Source",
        max_length=120,
        help_text="Sheet, traverse, level loop, or whoever gave it.",
    )
    dated = DayField(label="Dated")
    position_mm = forms.FloatField(
        label="Standard deviation in plan, mm",
        required=False,
        min_value=0,
        max_value=10_000,
    )
    elevation_mm = forms.FloatField(
        label="Standard deviation in height, mm",
        required=False,
        min_value=0,
        max_value=10_000,
    )
    basis = forms.MultipleChoiceField(
        label="Sheets", required=False, widget=forms.CheckboxSelectMultiple
    )
    reason = forms.CharField(
        label="Why it changes",
        max_length=120,
        required=False,
        help_text="Needed when the mark has a value already.",
    )
    far_is_meant = forms.BooleanField(
        label="The value is far from the last one, and is meant so", required=False
    )

    def __init__(self, data: Any = None, *, record: Record, mark: Mark) -> None:
        super().__init__(data)
        unit = record.length_unit
        places = ["northing", "easting", "elevation"]
        for name in places:
            self.fields[name] = LengthField(unit=unit, label=name.capitalize())
        self.fields["basis"].choices = sheet_choices(record)
        if not self.fields["basis"].choices:
            del self.fields["basis"]
        if mark.value is None:
            del self.fields["far_is_meant"]
        self.order_fields(["key", *places])

    def said(self) -> dict[str, Any]:
        basis = [uuid.UUID(k) for k in self.cleaned_data.get("basis", [])]
        return {**self.cleaned_data, "basis": basis}
