"""What a file of points cannot say, asked by form."""

from __future__ import annotations

import re
import uuid
from typing import Any

from django import forms

from geometry.units import Unit
from stakes.exchange.comma import BY_HEADER, MOST_BYTES, ORDERS, Answers
from stakes.forms.office.parts import KeyedForm, one_of, sheet_choices
from stakes.models import Record
from stakes.queries.tolerance import classes_of

UNITS = (
    ("m", "metres"),
    ("ft", "international feet (0.3048 m)"),
    ("ftUS", "US survey feet (1200/3937 m)"),
)
_HASH = re.compile(r"[0-9a-f]{64}")


class ImportForm(KeyedForm):
    is_multipart = True
    kept_as = ("", "")
    """Hash and name of a file kept until its answers are mended."""

    file = forms.FileField(
        label="File of comma text",
        required=False,
        allow_empty_file=True,
        help_text=f"Up to {MOST_BYTES >> 20} MB and 100,000 lines.",
    )
    text = forms.CharField(
        label="Or paste it",
        required=False,
        strip=False,
        widget=forms.Textarea(attrs={"rows": 6, "spellcheck": "false"}),
    )
    kept = forms.CharField(required=False, widget=forms.HiddenInput)
    kept_name = forms.CharField(
        required=False, max_length=200, widget=forms.HiddenInput
    )
    unit = forms.ChoiceField(
        label="Unit of its coordinates", choices=[("", "choose"), *UNITS]
    )
    order = forms.ChoiceField(
        label="Order of its columns",
        choices=[("", "choose"), *one_of([BY_HEADER, *ORDERS])],
    )
    frame = forms.CharField(
        label="Frame it is in",
        max_length=120,
        required=False,
        help_text="As the sheet or the sender names it.",
    )
    purpose = forms.ChoiceField(
        label="What the points are",
        choices=[("", "choose"), *one_of(["stake", "control", "benchmark"])],
    )
    sort = forms.CharField(label="Sort of stake", max_length=40, required=False)
    stage = forms.CharField(label="Stage", max_length=40, required=False)
    refers_to = forms.CharField(label="Cut and fill to", max_length=80, required=False)
    tolerance = forms.ChoiceField(label="Tolerance class", required=False)
    sheet = forms.ChoiceField(label="Sheet they come from", required=False)
    title = forms.CharField(label="What this plan is", max_length=120, required=False)
    doubts_seen = forms.BooleanField(
        label="I looked at the doubts; the answers stand", required=False
    )
    leave_out = forms.BooleanField(
        label="Leave the lines complained of out", required=False
    )

    def __init__(self, data: Any = None, files: Any = None, *, record: Record) -> None:
        super().__init__(data, files)
        self.fields["tolerance"].choices = one_of(classes_of(record), "by purpose")
        self.fields["sheet"].choices = [("", "none"), *sheet_choices(record)]

    def clean_kept(self) -> str:
        kept = self.cleaned_data["kept"]
        return kept if _HASH.fullmatch(kept) else ""

    def clean(self) -> dict[str, Any]:
        cleaned = super().clean() or self.cleaned_data
        given = cleaned.get("file") or cleaned.get("text", "").strip()
        if not given and not cleaned.get("kept"):
            self.add_error("file", "Choose a file, or paste its lines.")
        return cleaned

    @property
    def sheet_key(self) -> uuid.UUID | None:
        text = self.cleaned_data["sheet"]
        return uuid.UUID(text) if text else None

    def answers(self) -> Answers:
        names = ("order", "purpose", "sort", "stage", "refers_to", "tolerance", "frame")
        said = {name: self.cleaned_data[name] for name in names}
        return Answers(unit=Unit(self.cleaned_data["unit"]), **said)
