"""Forms of control work: what was found, distances, rises, traverse legs, levels.

Measurements are written one a line, as in a field book; a line without its number is
passed over, so that a prepared list of pairs can be filled in part.
"""

from __future__ import annotations

import uuid
from collections.abc import Callable
from itertools import combinations, islice
from typing import Any, TypeVar

from django import forms

from geometry.cogo.closures import LEVEL_LOOP_CLASSES, TRAVERSE_CLASSES
from geometry.errors import GeometryError
from geometry.units import Angle, Length, Unit
from stakes.actions.levelling import LevelSetup
from stakes.actions.recovering import CONDITIONS, Between
from stakes.actions.traversing import Leg
from stakes.forms.office.parts import KeyedForm, MomentField, one_of
from stakes.models import Mark, Record
from stakes.record.lengths import Measured

PAIRS_PREPARED = 28
MOST_LINES = 300
NOT_LOOKED_FOR = "not looked for"
ROWS = forms.Textarea(attrs={"rows": 8, "spellcheck": "false", "autocomplete": "off"})
T = TypeVar("T")


class WorkForm(KeyedForm):
    """What every form of control work asks."""

    method = forms.CharField(
        label="Instrument and method", max_length=150, required=False
    )

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        self.record = record
        self.fields["at"] = MomentField(record=record, label="When it was measured")
        rows = Mark.objects.filter(record=record, purpose__in=("control", "benchmark"))
        self.control = list(rows.exclude(standing="retired").order_by("label"))
        self.by_label = {m.label: m.key for m in self.control}

    def lines(
        self, name: str, least: int, read: Callable[[list[str], Unit], T]
    ) -> list[T]:
        """What stands in a field line by line; complaints name the line."""
        found: list[T] = []
        written = self.cleaned_data.get(name, "").splitlines()
        if len(written) > MOST_LINES:
            self.add_error(name, f"Send at most {MOST_LINES} lines at once.")
            return []
        for number, line in enumerate(written, 1):
            parts = [p.strip() for p in line.replace(";", ",").split(",")]
            if len([p for p in parts if p]) < least:
                if len([p for p in parts if p]) not in (0, least - 1):
                    self.add_error(name, f"Line {number} has too few values.")
                continue
            try:
                found.append(read(parts, self.record.length_unit))
            except (GeometryError, ValueError) as error:
                self.add_error(name, f"Line {number}: {error}")
        return found

    def pairs(self, purpose: str) -> str:
        """A line for each pair of marks of one purpose, to be filled in."""
        names = [m.label for m in self.control if m.purpose == purpose]
        listed = islice(combinations(names, 2), PAIRS_PREPARED)
        return "\n".join(f"{a}, {b}, " for a, b in listed)

    def between(self, parts: list[str], unit: Unit) -> Between:
        if len(parts) != 3:
            raise ValueError("Write mark, mark, measurement.")
        ends = [self.by_label.get(p) for p in parts[:2]]
        for label, key in zip(parts, ends, strict=False):
            if key is None:
                raise ValueError(f"there is no control mark {label[:40]!r}.")
        return Between(ends[0], ends[1], _measured(parts[2], unit))  # type: ignore[arg-type]


class RecoverForm(WorkForm):
    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data, record=record)
        for mark in self.control[:100]:
            self.fields[f"found_{mark.key.hex}"] = forms.ChoiceField(
                label=mark.label,
                choices=one_of([NOT_LOOKED_FOR, *CONDITIONS]),
                initial=NOT_LOOKED_FOR,
            )
        self.fields["distances"] = forms.CharField(
            label="Distances between what is found",
            help_text="One a line: mark, mark, level distance. Lines without a distance "
            "are passed over.",
            required=False,
            widget=ROWS,
            initial=self.pairs("control"),
        )
        self.fields["rises"] = forms.CharField(
            label="Levels between benchmarks",
            help_text="One a line: from, to, rise (minus for a fall).",
            required=False,
            widget=ROWS,
            initial=self.pairs("benchmark"),
        )
        conditions = [n for n in self.fields if n.startswith("found_")]
        self.order_fields(["key", *conditions, "distances", "rises", "method", "at"])

    @property
    def found_fields(self) -> list[Any]:
        return [self[n] for n in self.fields if n.startswith("found_")]

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        cleaned["read_distances"] = self.lines("distances", 3, self.between)
        cleaned["read_rises"] = self.lines("rises", 3, self.between)
        return cleaned

    def said(self) -> dict[str, Any]:
        found = {
            uuid.UUID(hex=name.removeprefix("found_")): condition
            for name, condition in self.cleaned_data.items()
            if name.startswith("found_") and condition != NOT_LOOKED_FOR
        }
        return {
            "found": found,
            "distances": self.cleaned_data["read_distances"],
            "rises": self.cleaned_data["read_rises"],
            **{n: self.cleaned_data[n] for n in ("key", "method", "at")},
        }


class TraverseForm(WorkForm):
    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data, record=record)
        placed = [
            (str(m.key), m.label) for m in self.control if m.easting_m is not None
        ]
        self.fields |= {
            "start": forms.ChoiceField(label="Starts on", choices=placed),
            "back": forms.ChoiceField(label="Oriented on", choices=placed),
            "legs": forms.CharField(
                label="Legs",
                widget=ROWS,
                help_text="One a line: number of the mark it leads to, angle turned "
                "clockwise from the mark behind (30-15-20), level distance. The last "
                "leg leads to a known mark.",
            ),
            "closing_back": forms.ChoiceField(
                label="Closing angle turned to",
                required=False,
                choices=[("", "no closing angle"), *placed],
            ),
            "closing_angle": forms.CharField(
                label="Closing angle", required=False, max_length=40
            ),
            "class_name": forms.ChoiceField(
                label="Class",
                choices=[(c.name, f"{c.name} ({c.source})") for c in TRAVERSE_CLASSES],
                initial="third order, class II",
            ),
        }
        self.order_fields(["key", "start", "back", "legs"])

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        cleaned["read_legs"] = self.lines("legs", 3, _leg)
        text = cleaned.get("closing_angle", "").strip()
        cleaned["closing_rad"] = None
        if text:
            try:
                cleaned["closing_rad"] = Angle.parse(text).radians
            except GeometryError as error:
                self.add_error("closing_angle", str(error))
        if bool(text) != bool(cleaned.get("closing_back")):
            self.add_error(
                "closing_angle", "Give the closing angle and the mark it is turned to."
            )
        return cleaned

    def said(self) -> dict[str, Any]:
        said = self.cleaned_data
        back = said["closing_back"]
        return {
            "start": uuid.UUID(said["start"]),
            "back": uuid.UUID(said["back"]),
            "legs": said["read_legs"],
            "closing_angle_rad": said["closing_rad"],
            "closing_back": uuid.UUID(back) if back else None,
            **{n: said[n] for n in ("key", "method", "at", "class_name")},
        }


class LevelsForm(WorkForm):
    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data, record=record)
        heights = [
            (str(m.key), m.label) for m in self.control if m.elevation_m is not None
        ]
        self.fields |= {
            "sort": forms.ChoiceField(
                label="What it is", choices=one_of(["level loop", "benchmark transfer"])
            ),
            "start": forms.ChoiceField(label="Starts on", choices=heights),
            "setups": forms.CharField(
                label="Setups",
                widget=ROWS,
                help_text="One a line: mark the foresight stood on, backsight, "
                "foresight, length if it was taken. Call turning points TP1, TP2. The "
                "last one is a benchmark, or the first again.",
            ),
            "class_name": forms.ChoiceField(
                label="Class",
                required=False,
                choices=[
                    ("", "the tolerance of control on this job"),
                    *((c.name, f"{c.name} ({c.source})") for c in LEVEL_LOOP_CLASSES),
                ],
            ),
        }
        self.order_fields(["key", "sort", "start", "setups"])

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        cleaned["read_setups"] = self.lines("setups", 3, _level_setup)
        return cleaned

    def said(self) -> dict[str, Any]:
        said = self.cleaned_data
        names = ("key", "method", "at", "class_name", "sort")
        return {
            "start": uuid.UUID(said["start"]),
            "setups": said["read_setups"],
            **{n: said[n] for n in names},
        }


def _leg(parts: list[str], unit: Unit) -> Leg:
    if len(parts) != 3:
        raise ValueError("Write number, angle, distance.")
    to, angle, distance = parts
    return Leg(
        _label(to), Angle.parse(angle).radians, _measured(distance, unit), angle[:40]
    )


def _level_setup(parts: list[str], unit: Unit) -> LevelSetup:
    if len(parts) not in (3, 4):
        raise ValueError("Write mark, backsight, foresight and perhaps a length.")
    length = _measured(parts[3], unit) if len(parts) == 4 and parts[3] else None
    back, fore = (_measured(p, unit) for p in parts[1:3])
    return LevelSetup(_label(parts[0]), back, fore, length)


def _label(text: str) -> str:
    if not text or len(text) > 60:
        raise ValueError("The number of the mark is missing, or too long.")
    return text


def _measured(text: str, unit: Unit) -> Measured:
    return Measured.of(Length.parse(text[:60], unit))
