"""Forms of the terms. Each asks for the day from which the setting counts."""

from __future__ import annotations

import uuid
from datetime import date
from typing import Any

from django import forms

from geometry.decide import Reach, Rule
from geometry.errors import GeometryError
from geometry.units import Length, Unit
from jobs.defaults.payers import CAUSES, PAYERS
from jobs.forms.jobs import UNITS, zones
from jobs.forms.notice import NoticeFields
from jobs.forms.seats import date_field
from jobs.kinds.terms import Payer, ToleranceClass
from jobs.models import Company
from stakes.record.lengths import Measured


class TermForm(forms.Form):
    effective = date_field("Counts from")


class UnitAndZoneForm(TermForm):
    unit = forms.ChoiceField(label="Unit", choices=UNITS, widget=forms.RadioSelect)
    zone = forms.ChoiceField(label="Time zone", choices=zones)
    field_order = ["unit", "zone"]


class FrameForm(TermForm):
    frame = forms.CharField(
        label="Coordinate frame", max_length=200, help_text="As the sheets name it."
    )
    combined_factor = forms.CharField(
        label="Combined factor",
        max_length=20,
        required=False,
        help_text="Grid over ground, as printed; empty when coordinates are ground.",
    )
    field_order = ["frame", "combined_factor"]


class NoticeForm(TermForm, NoticeFields):
    field_order = ["count", "of", "cut_off", "day_begins", "weekdays", "holidays"]


class HoldTimeForm(TermForm):
    minutes = forms.IntegerField(
        label="Minutes",
        min_value=0,
        max_value=1440,
        help_text="A hold that doubt proposes goes out by itself after this time; at "
        "once where work stands on the stakes.",
    )
    field_order = ["minutes"]


class RestakeForm(TermForm):
    """Who pays, one question a cause; the price is kept outside the hashed record."""

    company = forms.ModelChoiceField(
        Company.objects.none(),
        label="Agreed with",
        required=False,
        empty_label="all contractors",
    )
    price = forms.CharField(
        label="Price",
        required=False,
        max_length=1000,
        widget=forms.Textarea(attrs={"rows": 3}),
        help_text="Seen only by those who may see prices, and by the company itself.",
    )

    def __init__(self, *args: Any, companies: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["company"].queryset = companies
        for number, cause in enumerate(CAUSES):
            self.fields[f"payer_{number}"] = forms.ChoiceField(
                label=cause.capitalize(), choices=[(p, p) for p in PAYERS]
            )
            self.fields[f"approval_{number}"] = forms.BooleanField(
                label="Cost is approved before the work", required=False
            )

    def payers(self) -> tuple[Payer, ...]:
        said = self.cleaned_data
        return tuple(
            Payer(
                cause=cause,
                payer=said[f"payer_{number}"],
                approval=said[f"approval_{number}"],
            )
            for number, cause in enumerate(CAUSES)
        )

    def by_cause(self) -> list[tuple[forms.BoundField, forms.BoundField]]:
        """Payer and approval of each cause, for a page that sets them side by side."""
        numbers = range(len(CAUSES))
        return [(self[f"payer_{n}"], self[f"approval_{n}"]) for n in numbers]


def from_payers(payers: tuple[Payer, ...]) -> dict[str, Any]:
    """What the form starts with."""
    found: dict[str, Any] = {}
    known = {payer.cause: payer for payer in payers}
    for number, cause in enumerate(CAUSES):
        if cause in known:
            found[f"payer_{number}"] = known[cause].payer
            found[f"approval_{number}"] = known[cause].approval
    return found


class ToleranceForm(TermForm):
    name = forms.CharField(label="Work", max_length=60)
    position = forms.CharField(label="Position", max_length=20, required=False)
    elevation = forms.CharField(label="Elevation", max_length=20, required=False)
    rule = forms.ChoiceField(
        label="Judged by",
        choices=[
            (Rule.SIMPLE, "simple acceptance: within is within"),
            (Rule.GUARDED, "guard band: proved within, uncertainty taken off"),
        ],
        widget=forms.RadioSelect,
    )
    reaches = forms.MultipleChoiceField(
        label="Its checks must see",
        choices=[
            (Reach.SHAPE, "shape: sides and diagonals between the stakes"),
            (Reach.PLACE, "place: against control not used to set"),
            (Reach.FIT, "fit: against boundary, setback, existing work"),
            (Reach.HEIGHT, "height"),
        ],
        required=False,
        widget=forms.CheckboxSelectMultiple,
    )
    grade = forms.TypedChoiceField(
        label="Independent to grade",
        coerce=int,
        choices=[
            (0, "0: same setup"),
            (1, "1: new setup, same control"),
            (2, "2: other control or other method"),
            (3, "3: other control and other person"),
        ],
        help_text="Choose no grade that the people at hand cannot reach.",
    )
    source = forms.CharField(
        label="Where it is agreed",
        max_length=200,
        required=False,
        help_text="Contract, specification, or who decided.",
    )
    field_order = ["name", "position", "elevation"]

    def __init__(self, *args: Any, unit: Unit, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.unit = unit
        for field in ("position", "elevation"):
            self.fields[field].help_text = f"In {unit.plural}; empty: not limited."

    def clean_position(self) -> Measured | None:
        return self._measured("position")

    def clean_elevation(self) -> Measured | None:
        return self._measured("elevation")

    def _measured(self, field: str) -> Measured | None:
        text = self.cleaned_data[field]
        if not text:
            return None
        try:
            return Measured.of(Length.parse(text, self.unit))
        except GeometryError as error:
            raise forms.ValidationError(str(error)) from error

    def tolerance(self, key: uuid.UUID) -> ToleranceClass:
        said = self.cleaned_data
        return ToleranceClass(
            key=key,
            name=said["name"],
            position=said["position"],
            elevation=said["elevation"],
            rule=Rule(said["rule"]),
            reaches=tuple(Reach(r) for r in said["reaches"]),
            grade=said["grade"],
            source=said["source"],
        )


def from_class(tolerance: ToleranceClass) -> dict[str, Any]:
    """What the form starts with."""
    return {
        "name": tolerance.name,
        "position": tolerance.position.text if tolerance.position else "",
        "elevation": tolerance.elevation.text if tolerance.elevation else "",
        "rule": tolerance.rule,
        "reaches": list(tolerance.reaches),
        "grade": tolerance.grade,
        "source": tolerance.source,
    }


def from_day(day: date) -> dict[str, Any]:
    return {"effective": day}
