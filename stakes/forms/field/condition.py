"""What was found: how marks were seen, how they were lost, what others set."""

from __future__ import annotations

from typing import Any

from django import forms

from stakes.actions.condition import CAUSES
from stakes.forms.field.asking import (
    FieldForm,
    LengthField,
    RemarkFields,
    moment_typed,
)

CAUSE_CHOICES = [("", "not said"), *((c, c) for c in CAUSES), ("other", "other")]


class MarksField(forms.MultipleChoiceField):
    """The marks a statement is about, carried from the list they were ticked in."""

    widget = forms.MultipleHiddenInput

    def valid_value(self, value: Any) -> bool:
        return True


class FoundForm(RemarkFields, FieldForm):
    """How marks were seen."""

    mark = MarksField()
    cause = forms.ChoiceField(
        label="Cause, as far as known",
        choices=CAUSE_CHOICES,
        required=False,
        widget=forms.RadioSelect,
    )
    other_cause = forms.CharField(
        label="Other cause, in plain words", required=False, max_length=120
    )
    told_by = forms.CharField(
        label="Who says so, if not you",
        required=False,
        max_length=120,
        help_text="Empty: you saw it yourself.",
    )
    late = ("told_by", "remark", "at")
    field_order = ("cause", "other_cause", "photos", "told_by", "remark", "at")

    def the_cause(self) -> str:
        cause = self.cleaned_data["cause"]
        other = self.cleaned_data["other_cause"].strip()
        return other or ("" if cause == "other" else cause)


class SeenForm(FoundForm):
    """Undisturbed, or lath down beside its hub: no cause is asked."""

    cause = None  # type: ignore[assignment]
    other_cause = None  # type: ignore[assignment]
    late = ("told_by", "remark", "photos", "at")

    def the_cause(self) -> str:
        return ""


class DisturbedForm(FoundForm):
    """Leaning, hit or put back: what of it is in question."""

    components = forms.ChoiceField(
        label="In question",
        choices=[
            ("pe", "line and height"),
            ("p", "line only"),
            ("e", "height only"),
        ],
        initial="pe",
        widget=forms.RadioSelect,
    )
    field_order = ("cause", "other_cause", "components", "photos")


class GoneForm(FoundForm):
    """Destroyed before somebody's eyes, or found missing."""

    witnessed = forms.ChoiceField(
        label="What is known",
        choices=[("", "found missing"), ("yes", "seen being destroyed")],
        required=False,
        initial="",
        widget=forms.RadioSelect,
    )
    cause_by = forms.CharField(
        label="Who says that this was the cause", required=False, max_length=120
    )
    disputed = forms.BooleanField(label="The cause is disputed", required=False)
    last_seen = forms.CharField(
        label="Last seen standing",
        required=False,
        widget=forms.DateTimeInput(attrs={"type": "datetime-local"}),
        help_text="Empty: as the record has it.",
    )
    late = ("cause_by", "disputed", "last_seen", "told_by", "remark", "at")
    field_order = (
        "witnessed",
        "cause",
        "other_cause",
        "photos",
        "cause_by",
        "disputed",
        "last_seen",
        "told_by",
        "remark",
        "at",
    )

    def clean_last_seen(self) -> Any:
        return moment_typed(self.cleaned_data["last_seen"], self.record)


class ForeignForm(RemarkFields, FieldForm):
    """A mark set by others."""

    label = forms.CharField(
        label="Name", max_length=60, help_text="What stands on it, or F1."
    )
    words = forms.CharField(label="What it looks like", required=False, max_length=200)
    set_by = forms.CharField(label="Set by, if known", required=False, max_length=120)
    northing = LengthField("Northing shot")
    easting = LengthField("Easting shot")
    elevation = LengthField("Elevation shot")
    late = ("remark", "at")
    field_order = ("label", "words", "set_by", "photos", "northing", "easting")
