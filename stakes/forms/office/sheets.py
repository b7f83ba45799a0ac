"""Forms of sheets, questions to the designer and verbal directions."""

from __future__ import annotations

import uuid
from typing import Any

from django import forms
from django.utils import timezone

from stakes.actions.sheets import STATUSES, keep_file
from stakes.forms.office.parts import (
    DayField,
    KeyedForm,
    MarksField,
    MomentField,
    one_of,
    sheet_choices,
)
from stakes.models import Record

TEXT = forms.Textarea(attrs={"rows": 3})


class SheetForm(KeyedForm):
    is_multipart = True

    number = forms.CharField(label="Sheet number", max_length=60)
    revision = forms.CharField(label="Revision", max_length=20)
    status = forms.ChoiceField(label="Status", choices=one_of(STATUSES))
    title = forms.CharField(label="Title", max_length=200, required=False)
    from_whom = forms.CharField(label="From whom", max_length=120, required=False)
    received_on = DayField(label="Received on")
    replaces = forms.ChoiceField(label="Replaces", required=False)
    what_changed = forms.CharField(
        label="What changed", max_length=500, required=False, widget=TEXT
    )
    file = forms.FileField(
        label="The file as received",
        required=False,
        help_text="Kept as it is, under its SHA-256.",
    )

    def __init__(self, data: Any = None, files: Any = None, *, record: Record) -> None:
        super().__init__(data, files)
        self.fields["replaces"].choices = [("", "no sheet"), *sheet_choices(record)]
        today = timezone.now().astimezone(record.time_zone).date()
        self.fields["received_on"].initial = today.isoformat()
        self.fields["touched"] = MarksField(
            record=record,
            label="Marks it touches",
            required=False,
            help_text="Leave it empty for a new revision: every mark waits until "
            "somebody has sorted it. Numbers with commas between; 101-116 for a run.",
        )

    def said(self) -> dict[str, Any]:
        """What the action takes; the file is kept first, by its hash."""
        said = {k: v for k, v in self.cleaned_data.items() if k != "file"}
        said["replaces"] = _key(said["replaces"])
        upload = self.cleaned_data["file"]
        said["file_sha256"] = keep_file(upload) if upload else ""
        return said


class ReadForm(KeyedForm):
    """Somebody read the sheet; sorting it says which marks it touches."""

    changes_nothing = forms.BooleanField(
        label="It changes no mark of this job", required=False
    )
    remark = forms.CharField(
        label="Remark", max_length=2000, required=False, widget=TEXT
    )

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        self.fields["sorted_to"] = MarksField(
            record=record, label="Marks it touches", required=False
        )
        self.order_fields(["key", "sorted_to", "changes_nothing", "remark"])


class SupersedeForm(KeyedForm):
    """Stakes that no longer mark the design because of a sheet."""

    reason = forms.CharField(label="What changed", max_length=120)

    def __init__(self, data: Any = None, *, record: Record, **kwargs: Any) -> None:
        super().__init__(data, **kwargs)
        self.fields["marks"] = MarksField(record=record, label="Marks")
        self.order_fields(["key", "marks", "reason"])


class QuestionForm(KeyedForm):
    words = forms.CharField(label="Question", max_length=1000, widget=TEXT)
    to_whom = forms.CharField(label="To whom", max_length=120)
    sheets = forms.MultipleChoiceField(
        label="Sheets it is about",
        required=False,
        widget=forms.CheckboxSelectMultiple,
    )

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        self.fields["sheets"].choices = sheet_choices(record)
        self.fields["holds"] = MarksField(
            record=record, label="Marks it holds until answered", required=False
        )
        if not self.fields["sheets"].choices:
            del self.fields["sheets"]

    def said(self) -> dict[str, Any]:
        sheets = [uuid.UUID(k) for k in self.cleaned_data.get("sheets", [])]
        return {**self.cleaned_data, "sheets": sheets}


class AnswerForm(KeyedForm):
    words = forms.CharField(label="Answer", max_length=1000, widget=TEXT)
    by_whom = forms.CharField(label="Answered by", max_length=120)
    in_writing = forms.BooleanField(label="It came in writing", required=False)
    sheet = forms.ChoiceField(label="Sheet or sketch it came with", required=False)

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        self.fields["sheet"].choices = [("", "none"), *sheet_choices(record)]

    def said(self) -> dict[str, Any]:
        return {**self.cleaned_data, "sheet": _key(self.cleaned_data["sheet"])}


class DirectionForm(KeyedForm):
    words = forms.CharField(label="The words", max_length=1000, widget=TEXT)
    by_whom = forms.CharField(label="Who said it", max_length=120)
    to_whom = forms.CharField(label="To whom", max_length=120)

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        self.fields["holds"] = MarksField(
            record=record, label="Marks it holds until confirmed", required=False
        )
        self.fields["at"] = MomentField(record=record, label="When it was said")


class SettleForm(KeyedForm):
    confirmed = forms.TypedChoiceField(
        label="What became of it",
        choices=[("yes", "confirmed in writing"), ("no", "not followed")],
        coerce=lambda text: text == "yes",
    )
    words = forms.CharField(
        label="Which writing, or why not", max_length=1000, required=False, widget=TEXT
    )
    sheet = forms.ChoiceField(label="Sheet or sketch it came with", required=False)

    def __init__(self, data: Any = None, *, record: Record) -> None:
        super().__init__(data)
        self.fields["sheet"].choices = [("", "none"), *sheet_choices(record)]

    def said(self) -> dict[str, Any]:
        return {**self.cleaned_data, "sheet": _key(self.cleaned_data["sheet"])}


def _key(text: str) -> uuid.UUID | None:
    return uuid.UUID(text) if text else None
