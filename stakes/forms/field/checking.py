"""A check of stakes: which marks, what was measured, from what."""

from __future__ import annotations

import uuid
from collections.abc import Sequence
from typing import Any

from django import forms

from stakes.forms.field.asking import (
    NUMBER,
    FieldForm,
    LengthField,
    MarkField,
    RemarkFields,
)
from stakes.forms.field.setting import setup_words
from stakes.queries.setups import OpenSetup
from stakes.queries.stake_checks import NEEDS, TAPED, Asked
from stakes.queries.taping import Taped

METHODS: dict[str, tuple[str, ...]] = {
    "distance": ("tape", "total station"),
    "diagonal": ("tape", "total station"),
    "angle": ("total station",),
    "position": ("total station", "satellite"),
    "elevation": ("level", "laser", "total station", "satellite"),
    "line": ("string", "total station", "tape"),
    "fit": ("tape", "total station"),
}
"""How each sort of check is measured when no setup is recorded for it."""

WORDS = {
    "distance": "Distance between two marks",
    "diagonal": "Diagonal",
    "angle": "Angle at a mark",
    "position": "Position, shot again",
    "elevation": "Elevation of a hub",
    "line": "On line between two marks",
    "fit": "Fit to boundary or existing work",
}


class CheckForm(RemarkFields, FieldForm):
    """One check; its marks, numbers and means depend on its sort."""

    method = forms.ChoiceField(
        label="Measured with", required=False, widget=forms.RadioSelect
    )
    instrument = forms.CharField(
        label="Its serial number", required=False, max_length=60
    )
    late = ("temperature", "pull", "hung", "instrument", "remark", "at")

    def __init__(
        self, *args: Any, sort: str, setups: Sequence[OpenSetup], **more: Any
    ) -> None:
        self.sort = sort
        fields: dict[str, forms.Field] = {
            f"mark{n}": MarkField(words[:1].upper() + words[1:])
            for n, words in enumerate(NEEDS[sort], 1)
        }
        fields |= _numbers(sort)
        self.base_fields = {**fields, **self.base_fields}
        super().__init__(*args, **more)
        self._name_units()
        zone = self.record.time_zone
        if sort in ("position", "elevation", "angle", "distance", "diagonal"):
            self.fields["setup"] = forms.ChoiceField(
                label="From setup",
                required=False,
                widget=forms.RadioSelect,
                choices=[
                    *((str(s.row.key), setup_words(s, zone)) for s in setups),
                    ("", "no setup recorded"),
                ],
                initial=str(setups[0].row.key)
                if setups
                and setups[0].row.closed_at is None
                and sort in ("position", "elevation", "angle")
                else "",
            )
            self.order_fields([*fields, "setup", "method", "photos"])
        self.fields["method"].choices = [(m, m) for m in METHODS[sort]]
        self.initial.setdefault("method", METHODS[sort][0])

    def _name_units(self) -> None:
        """Temperature and pull in the units of whoever measures in this job's unit."""
        units = ("°F", "pounds") if self.record.length_unit.is_foot else ("°C", "N")
        for name, unit in zip(("temperature", "pull"), units, strict=True):
            if name in self.fields:
                self.fields[name].label += f", {unit}"

    def marks(self) -> list[uuid.UUID]:
        return [
            self.cleaned_data[f"mark{n}"].key
            for n in range(1, len(NEEDS[self.sort]) + 1)
        ]

    def setup(self) -> uuid.UUID | None:
        text = self.cleaned_data.get("setup") or ""
        return uuid.UUID(text) if text else None

    def asked(self) -> Asked:
        said = self.cleaned_data
        taped = Taped(
            temperature=said.get("temperature"),
            pull=said.get("pull"),
            hung=said.get("hung") or False,
            rise=said.get("rise"),
        )
        return Asked(
            measured=said.get("measured"),
            angle=said.get("angle", ""),
            northing=said.get("northing"),
            easting=said.get("easting"),
            by_sheet=said.get("by_sheet"),
            taped=taped if taped != Taped() else None,
        )


def _numbers(sort: str) -> dict[str, forms.Field]:
    """What is measured in a check of this sort."""
    match sort:
        case "angle":
            return {
                "angle": forms.CharField(
                    label="Angle measured, clockwise",
                    max_length=40,
                    help_text="As 90-00-10 or 90°00'10\".",
                )
            }
        case "position":
            return {
                "northing": LengthField("Northing measured", required=True),
                "easting": LengthField("Easting measured", required=True),
            }
        case "elevation":
            return {"measured": LengthField("Elevation measured", required=True)}
        case "line":
            return {
                "measured": LengthField(
                    "Offset from the line, right positive", required=True
                )
            }
    found: dict[str, forms.Field] = {
        "measured": LengthField("Distance measured", required=True)
    }
    if sort == "fit":
        found["by_sheet"] = LengthField("Distance by the sheet", required=True)
        found["against"] = forms.CharField(
            label="Against what, by which sheet", max_length=200
        )
        found["existing"] = forms.ChoiceField(
            label="That is",
            choices=[("yes", "existing work"), ("no", "a boundary or setback")],
            initial="yes",
            widget=forms.RadioSelect,
        )
    if sort in TAPED:
        found["rise"] = LengthField(
            "Height difference of the ends",
            help_text="Only when it was measured along the slope.",
        )
        found["temperature"] = forms.DecimalField(
            label="Tape temperature",
            required=False,
            min_value=-50,
            max_value=160,
            max_digits=5,
            widget=forms.TextInput(attrs=dict(NUMBER)),
        )
        found["pull"] = forms.DecimalField(
            label="Pull on the tape",
            required=False,
            min_value=1,
            max_value=500,
            max_digits=5,
            widget=forms.TextInput(attrs=dict(NUMBER)),
        )
        found["hung"] = forms.BooleanField(
            label="Held at its ends only, so that it sagged", required=False
        )
    return found
