"""Opening, re-checking and closing a setup of each sort."""

from __future__ import annotations

import uuid
from typing import Any

from django import forms

from stakes.actions.setups import Use
from stakes.forms.field.asking import (
    ControlField,
    FieldForm,
    LengthField,
    MarkField,
    MillimetresField,
    PassageFields,
)
from stakes.queries.setup_checks import MEASURES, CheckMade, Sight
from stakes.queries.state import JobState

CHECKS = 2
SIGHTS = 4
ANY = ("control", "benchmark", "foreign")
PLANE = ("control",)

ASKED_FOR = {
    "measured": "distance elevation",
    "angle": "direction",
    "northing": "position",
    "easting": "position",
}
"""Which number belongs to which way of checking."""

SORTS = {
    "station": "total station on a mark",
    "free": "free station",
    "satellite": "satellite",
    "level": "level run",
    "tape": "tape",
    "string": "string",
    "laser": "laser",
}
"""Each sort of setup by the word in its address."""


class ChecksForm(FieldForm):
    """What was measured to check a setup; each check names its mark and says how."""

    def __init__(self, *args: Any, state: JobState, sort: str, **more: Any) -> None:
        self.sort = sort
        self.base_fields = {**self.base_fields, **self._check_fields(sort)}
        super().__init__(*args, state=state, **more)

    @staticmethod
    def _check_fields(sort: str) -> dict[str, forms.Field]:
        measures, found = MEASURES[sort], {}
        for n in range(1, CHECKS + 1):
            found[f"check{n}_mark"] = MarkField("Checked on mark", required=False)
            if len(measures) > 1:
                found[f"check{n}_by"] = forms.ChoiceField(
                    label="Checked by",
                    choices=[(m, _BY[m]) for m in measures],
                    required=False,
                    widget=forms.RadioSelect,
                    initial=measures[0],
                )
            if {"distance", "elevation"} & set(measures):
                found[f"check{n}_measured"] = LengthField(_measured_label(sort))
            if "direction" in measures:
                found[f"check{n}_angle"] = forms.CharField(
                    label="Angle right from the mark oriented on",
                    required=False,
                    max_length=40,
                    help_text="As 45-12-10 or 45°12'10\".",
                )
            if "position" in measures:
                found[f"check{n}_northing"] = LengthField("Northing measured")
                found[f"check{n}_easting"] = LengthField("Easting measured")
        return found

    def check_groups(self) -> list[list[tuple[forms.BoundField, str]]]:
        """The fields of each check together, each with the ways of checking that it
        belongs to; the others need not show it."""
        return [
            [
                (self[name], ASKED_FOR.get(name.partition("_")[2], ""))
                for name in self.fields
                if name.startswith(f"check{n}_")
            ]
            for n in range(1, CHECKS + 1)
        ]

    def second_open(self) -> bool:
        """Whether something was typed, or is wrong, in a check that is folded away."""
        later = [field for group in self.check_groups()[1:] for field, _ in group]
        return any(
            f.errors or (self.is_bound and f.value())
            for f in later
            if not f.name.endswith("_by")
        )

    def checks(self) -> list[CheckMade]:
        said, found = self.cleaned_data, []
        for n in range(1, CHECKS + 1):
            view = said.get(f"check{n}_mark")
            if view is None:
                continue
            by = said.get(f"check{n}_by") or MEASURES[self.sort][0]
            is_place = by == "position"
            found.append(
                CheckMade(
                    mark=view.key,
                    quantity=by,
                    measured=None if is_place else said.get(f"check{n}_measured"),
                    angle=said.get(f"check{n}_angle", "") if by == "direction" else "",
                    northing=said.get(f"check{n}_northing") if is_place else None,
                    easting=said.get(f"check{n}_easting") if is_place else None,
                )
            )
        return found

    def clean(self) -> dict[str, Any]:
        said = super().clean() or self.cleaned_data
        for n in range(1, CHECKS + 1):
            numbers = [
                said.get(f"check{n}_{name}")
                for name in ("measured", "angle", "northing", "easting")
            ]
            field = f"check{n}_mark"
            if any(numbers) and not said.get(field) and field not in self.errors:
                self.add_error(field, "Say to which mark this was measured.")
        return said


class RecheckForm(ChecksForm):
    """A re-check, or the closing check, of an open setup."""

    remark = forms.CharField(
        label="Remark",
        required=False,
        max_length=2000,
        widget=forms.Textarea(attrs={"rows": 2}),
    )
    late = ("remark", "at")


class OpenForm(PassageFields, ChecksForm):
    """What every setup says of itself."""

    instrument = forms.CharField(label="Instrument", required=False, max_length=120)
    serial = forms.CharField(label="Serial number", required=False, max_length=60)
    calibrated_on = forms.CharField(
        label="Calibrated or adjusted on",
        required=False,
        max_length=40,
        widget=forms.DateInput(attrs={"type": "date"}),
    )
    weather = forms.CharField(
        label="Weather, temperature", required=False, max_length=200
    )
    remark = forms.CharField(
        label="Remark",
        required=False,
        max_length=2000,
        widget=forms.Textarea(attrs={"rows": 2}),
    )
    late = ("weather", "remark", "at")
    roles: tuple[tuple[str, str], ...] = ()
    marks: tuple[str, ...] = ()
    heights: tuple[str, ...] = ()
    """Which fields name marks in which role, stand with the marks, are heights."""

    def means(self) -> list[forms.BoundField]:
        names = ("instrument", "serial", "calibrated_on", *self.heights)
        return [self[n] for n in names if n in self.fields]

    def named(self) -> list[forms.BoundField]:
        return [self[n] for n in self.fields if n.startswith(self.marks)]

    def used(self) -> list[Use]:
        said = self.cleaned_data
        return [
            Use(mark, role)
            for name, role in self.roles
            if (mark := _key(said.get(name)))
        ]

    def more(self) -> dict[str, Any]:
        """What this sort alone says."""
        return {n: self.cleaned_data.get(n) for n in self.heights}


class StationForm(OpenForm):
    """A total station on a mark, oriented on another."""

    occupied = ControlField("Standing on", PLANE)
    oriented_on = ControlField("Oriented on", PLANE)
    backsight = LengthField("Distance measured to it")
    instrument_height = LengthField("Instrument height")
    target_height = LengthField("Prism height")
    prism_constant = MillimetresField("Prism constant")
    roles = (("occupied", "occupied"), ("oriented_on", "oriented on"))
    marks = ("occupied", "oriented_on", "backsight")
    heights = ("instrument_height", "target_height", "prism_constant")

    def checks(self) -> list[CheckMade]:
        said, made = self.cleaned_data, super().checks()
        if said.get("backsight") is not None and said.get("oriented_on"):
            made.append(CheckMade(said["oriented_on"], "distance", said["backsight"]))
        return made


class FreeForm(OpenForm):
    """A free station from sights to two or more marks."""

    instrument_height = LengthField("Instrument height")
    target_height = LengthField("Prism height")
    prism_constant = MillimetresField("Prism constant")
    marks = ("sight",)
    heights = ("instrument_height", "target_height", "prism_constant")

    def __init__(self, *args: Any, **more: Any) -> None:
        fields: dict[str, forms.Field] = {}
        for n in range(1, SIGHTS + 1):
            required = n <= 2
            fields[f"sight{n}_mark"] = ControlField(
                f"Sight {n}", PLANE, required=required
            )
            fields[f"sight{n}_distance"] = LengthField(
                f"Sight {n}: horizontal distance", required=required
            )
            fields[f"sight{n}_direction"] = forms.CharField(
                label=f"Sight {n}: circle reading",
                required=required,
                max_length=40,
                help_text="" if n > 1 else "As 45-12-10 or 45°12'10\".",
            )
        self.base_fields = {**self.base_fields, **fields}
        super().__init__(*args, **more)

    def sights(self) -> list[Sight]:
        said, found = self.cleaned_data, []
        for n in range(1, SIGHTS + 1):
            mark = said.get(f"sight{n}_mark")
            distance = said.get(f"sight{n}_distance")
            if mark and distance is not None:
                found.append(Sight(mark, distance, said[f"sight{n}_direction"]))
        return found

    def clean(self) -> dict[str, Any]:
        said = super().clean() or self.cleaned_data
        for n in range(3, SIGHTS + 1):
            given = [
                bool(said.get(f"sight{n}_{part}"))
                for part in ("mark", "distance", "direction")
            ]
            if any(given) and not all(given):
                self.add_error(
                    f"sight{n}_mark", "A sight needs mark, distance and reading."
                )
        return said

    def used(self) -> list[Use]:
        return []

    def more(self) -> dict[str, Any]:
        return {**super().more(), "sights": self.sights()}


class SatelliteForm(OpenForm):
    """A satellite session, fitted to marks of the site."""

    known1 = ControlField("Fitted to", ANY)
    known2 = ControlField("Fitted to", ANY, required=False)
    known3 = ControlField("Fitted to", ANY, required=False)
    known4 = ControlField("Fitted to", ANY, required=False)
    fix = forms.CharField(label="Base or network, fix and its quality", max_length=120)
    residuals = forms.CharField(
        label="Residuals of the fit",
        required=False,
        max_length=800,
        widget=forms.Textarea(attrs={"rows": 3}),
        help_text="One mark a line, as the receiver says.",
    )
    target_height = LengthField("Antenna height")
    roles = tuple((f"known{n}", "known") for n in range(1, 5))
    marks = ("known", "fix", "residuals")
    heights = ("target_height",)

    def more(self) -> dict[str, Any]:
        lines = self.cleaned_data["residuals"].splitlines()
        return {
            **super().more(),
            "fix": self.cleaned_data["fix"],
            "residuals": [line.strip() for line in lines if line.strip()],
        }


class LevelForm(OpenForm):
    """A level run from a benchmark."""

    benchmark = ControlField("From benchmark", ANY)
    closed_run = forms.BooleanField(
        label="The run will be closed on this benchmark", required=False
    )
    roles = (("benchmark", "benchmark"),)
    marks = ("benchmark", "closed_run")

    def more(self) -> dict[str, Any]:
        return {"closed_run": self.cleaned_data["closed_run"]}


class LaserForm(OpenForm):
    """A laser set to a benchmark."""

    benchmark = ControlField("Set to benchmark", ANY)
    roles = (("benchmark", "benchmark"),)
    marks = ("benchmark",)


class TapeForm(OpenForm):
    """A tape from named marks."""

    held1 = MarkField("Held on")
    held2 = MarkField("And on", required=False)
    roles = (("held1", "held"), ("held2", "held"))
    marks = ("held",)


class StringForm(OpenForm):
    """A string between two marks."""

    held1 = MarkField("From mark")
    held2 = MarkField("To mark")
    roles = (("held1", "held"), ("held2", "held"))
    marks = ("held",)


FORMS: dict[str, type[OpenForm]] = {
    "station": StationForm,
    "free": FreeForm,
    "satellite": SatelliteForm,
    "level": LevelForm,
    "tape": TapeForm,
    "string": StringForm,
    "laser": LaserForm,
}


def _key(value: Any) -> uuid.UUID | None:
    """The mark behind a field, whether it was chosen or typed."""
    return getattr(value, "key", value)


def _measured_label(sort: str) -> str:
    if MEASURES[sort] == ("elevation",):
        return "Elevation measured"
    if sort == "string":
        return "Offset measured, right positive"
    if "elevation" in MEASURES[sort] and "distance" in MEASURES[sort]:
        return "Distance or elevation measured"
    return "Elevation measured" if sort == "satellite" else "Distance measured"


_BY = {
    "distance": "distance",
    "direction": "angle",
    "position": "northing and easting",
    "elevation": "elevation",
}
