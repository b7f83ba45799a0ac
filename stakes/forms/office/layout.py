"""Forms of the layout page: what it is planned with, keeping it, the soil."""

from __future__ import annotations

import uuid
from typing import Any

from django import forms

from geometry.layout import Ground, Soil
from stakes.forms.office.parts import DayField, KeyedForm, LengthField, one_of
from stakes.models import Record, Zone
from stakes.queries.layout import SET_WORDS, USUAL, Asked
from stakes.queries.tolerance import classes_of

LENGTHS = {
    "offset": "Offset, at least",
    "step": "In whole steps of",
    "depth": "Depth of excavation",
    "work_space": "Room to work at the bottom",
    "clearance": "Stakes stay from its edge",
}


class LayoutForm(forms.Form):
    """What a layout is planned with; the page redraws as these change."""

    footprint = forms.ChoiceField(label="Footprint")
    stake_set = forms.ChoiceField(
        label="Stakes", choices=list(SET_WORDS.items()), initial="plain"
    )
    one_value = forms.BooleanField(
        label="One offset for the whole building where room allows", required=False
    )
    first_number = forms.IntegerField(
        label="First number", min_value=1, max_value=900_000
    )

    def __init__(
        self,
        data: Any = None,
        *,
        record: Record,
        zones: list[Zone],
        first_number: int = 1,
    ) -> None:
        started = starting(record, zones, first_number)
        super().__init__({**started, **data} if data else started)
        self.record = record
        self.fields["footprint"].choices = [(str(z.key), z.name) for z in zones]
        unit = record.length_unit
        for name, label in LENGTHS.items():
            self.fields[name] = LengthField(
                unit=unit, label=f"{label}, {unit}", required=True
            )
        self.order_fields(["footprint", *LENGTHS])

    def asked(self) -> Asked:
        said = self.cleaned_data
        lengths = {name: said[name] for name in LENGTHS}
        return Asked(
            footprint=uuid.UUID(said["footprint"]),
            stake_set=said["stake_set"],
            one_value=said["one_value"],
            first_number=said["first_number"],
            **lengths,
        )


def starting(record: Record, zones: list[Zone], first_number: int) -> dict[str, str]:
    """The usual values; whoever plans changes them."""
    usual = USUAL[record.length_unit.is_foot]
    return {
        **usual,
        "depth": "0",
        "footprint": str(zones[0].key) if zones else "",
        "stake_set": "plain",
        "first_number": str(first_number),
    }


class KeepForm(KeyedForm):
    """What the stakes of a layout share when it is kept as a draft."""

    title = forms.CharField(label="What this plan is", max_length=120, required=False)
    stage = forms.CharField(label="Stage", max_length=40, required=False)
    refers_to = forms.CharField(label="Cut and fill to", max_length=80, required=False)
    tolerance = forms.ChoiceField(label="Tolerance class", required=False)
    lasts = forms.CharField(label="Must last until", max_length=40, required=False)

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        self.fields["tolerance"].choices = one_of(classes_of(record), "by purpose")


class SoilForm(KeyedForm):
    soil = forms.ChoiceField(label="Class", choices=one_of(str(s) for s in Soil))
    conditions = forms.MultipleChoiceField(
        label="What else was found",
        required=False,
        choices=one_of(str(g) for g in Ground),
        widget=forms.CheckboxSelectMultiple,
    )
    by_whom = forms.CharField(
        label="Competent person", max_length=120, help_text="Who classified it."
    )
    on = DayField(label="On", required=True)
    words = forms.CharField(label="Remark", max_length=300, required=False)
