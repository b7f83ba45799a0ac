"""The form that says an entry again: one field for each fact a person may mend."""

from __future__ import annotations

from datetime import datetime
from typing import Any, Literal, get_args, get_origin, get_type_hints
from uuid import UUID

from django import forms

from geometry.errors import GeometryError
from geometry.units import Length
from stakes.models import Mark, Record
from stakes.record import Counted, Fact
from stakes.record.lengths import Measured


class WithdrawForm(forms.Form):
    why = forms.CharField(
        label="Why is it taken back?",
        max_length=500,
        widget=forms.Textarea(attrs={"rows": 2}),
    )


class CorrectForm(forms.Form):
    """Texts, choices, lengths and marks of one fact, its time, and why."""

    at = forms.CharField(label="When it happened", max_length=25)
    why = forms.CharField(
        label="Why is it corrected?",
        max_length=500,
        widget=forms.Textarea(attrs={"rows": 2}),
    )

    def __init__(self, data: Any, *, said: Counted, record: Record) -> None:
        super().__init__(data)
        self.said, self.record = said, record
        local = said.happened_at.astimezone(record.time_zone)
        self.fields["at"].initial = local.strftime("%Y-%m-%dT%H:%M")
        self.kinds = editable(type(said.fact))
        for name, sort in self.kinds.items():
            self.fields[name] = self._field(name, sort, getattr(said.fact, name))
        self.order_fields([*self.kinds, "at", "why"])

    def _field(self, name: str, sort: Any, value: Any) -> forms.Field:
        label = name.replace("_", " ").capitalize()
        if name in ("listed", "mark"):
            keys = value if name == "listed" else [value]
            found = Mark.objects.filter(record=self.record, key__in=keys)
            named = ", ".join(found.order_by("label").values_list("label", flat=True))
            label = "Marks" if name == "listed" else "Mark"
            return forms.CharField(label=label, initial=named, max_length=5000)
        if sort is Measured:
            text = value.text if value else ""
            return forms.CharField(
                label=label, initial=text, required=False, max_length=60
            )
        if get_origin(sort) is Literal:
            choices = [(c, c or "not recorded") for c in get_args(sort)]
            return forms.ChoiceField(label=label, initial=value, choices=choices)
        return forms.CharField(
            label=label, initial=value, required=False, max_length=2000
        )

    def clean_at(self) -> datetime:
        try:
            moment = datetime.fromisoformat(self.cleaned_data["at"])
        except ValueError as error:
            raise forms.ValidationError(
                "This is not a date and time. Write it as 2026-03-02T16:40."
            ) from error
        zone = self.record.time_zone
        moment = moment if moment.tzinfo else moment.replace(tzinfo=zone)
        # A form shows minutes; what was not touched keeps its seconds.
        same = self.said.happened_at.astimezone(zone).strftime("%Y-%m-%dT%H:%M")
        return self.said.happened_at if self.cleaned_data["at"] == same else moment

    def clean(self) -> dict[str, Any]:
        for name, sort in self.kinds.items():
            if name in self.cleaned_data:
                try:
                    self.cleaned_data[name] = self._plain(name, sort)
                except GeometryError as error:
                    self.add_error(name, str(error))
        return self.cleaned_data

    def _plain(self, name: str, sort: Any) -> Any:
        value = self.cleaned_data[name]
        if name in ("listed", "mark"):
            keys = [str(self._mark(name, label)) for label in _split(value)]
            return keys if name == "listed" else keys[0] if keys else None
        if sort is Measured:
            if not value.strip():
                return None
            before = getattr(self.said.fact, name)
            unit = before.length.unit if before else self.record.length_unit
            length = Length.parse(value, unit)
            return {"text": length.text, "unit": unit, "nm": str(length.nanometres)}
        return value

    def _mark(self, field: str, label: str) -> UUID | None:
        key = (
            Mark.objects.filter(record=self.record, label=label)
            .values_list("key", flat=True)
            .first()
        )
        if key is None:
            self.add_error(field, f"There is no mark {label!r} in this job.")
        return key

    @property
    def changes(self) -> dict[str, Any]:
        """The facts as plain data, as the record takes them."""
        return {name: self.cleaned_data[name] for name in self.kinds}


def editable(fact: type[Fact]) -> dict[str, Any]:
    """The facts of a kind a person may mend by form, with their sort."""
    found = {}
    for name, hint in get_type_hints(fact).items():
        if name == "KIND":
            continue
        sorts = [s for s in get_args(hint) if s is not type(None)]
        sort = sorts[0] if Measured in sorts else hint
        if (
            sort in (str, Measured)
            or get_origin(sort) is Literal
            or name
            in (
                "listed",
                "mark",
            )
        ):
            found[name] = sort
    return found


def _split(text: str) -> list[str]:
    return [label.strip() for label in text.split(",") if label.strip()]
