"""The parts every form of a crew is made of: lengths, marks, photos, and the time.

Each form carries a key made when it was shown. It becomes the key of the entry, so a
second tap on the button says nothing twice.
"""

from __future__ import annotations

import uuid
from collections.abc import Iterable
from datetime import datetime
from typing import Any

from django import forms
from django.core import signing
from django.utils import timezone

from geometry.errors import GeometryError
from geometry.units import Length, Unit
from stakes.actions import photos
from stakes.models import EntryMatter, Record
from stakes.queries.state import JobState, MarkView
from stakes.record import Refused
from stakes.record.append import CLOCKS_MAY_DIFFER
from stakes.record.lengths import Measured

NUMBER = {"inputmode": "decimal", "autocomplete": "off", "data-number": ""}


class LengthField(forms.CharField):
    """A length as typed, read in the unit of the job; empty is nothing, not zero."""

    def __init__(self, label: str, **more: Any) -> None:
        more.setdefault("required", False)
        more.setdefault("max_length", 40)
        more.setdefault("widget", forms.TextInput(attrs=dict(NUMBER)))
        super().__init__(label=label, **more)
        self.unit = Unit.METRE

    def clean(self, value: Any) -> Measured | None:  # type: ignore[override]
        text = super().clean(value)
        if not text:
            return None
        try:
            return Measured.of(Length.parse(text, self.unit))
        except GeometryError as error:
            raise forms.ValidationError(str(error)) from error


class MillimetresField(LengthField):
    """A small length in millimetres, whatever the unit of the job: a prism constant."""

    def clean(self, value: Any) -> Measured | None:
        self.unit = Unit.METRE
        said = super().clean(value)
        if said is None:
            return None
        if said.unit != Unit.METRE:
            raise forms.ValidationError("Give it in millimetres, as on the prism.")
        return Measured.of(Length.from_nanometres(int(said.nm) // 1000, Unit.METRE, 4))


class MarkField(forms.CharField):
    """A mark by its label, with suggestions; answers with its view."""

    def __init__(self, label: str, **more: Any) -> None:
        more.setdefault("max_length", 60)
        attrs = {"autocomplete": "off", "autocapitalize": "characters"}
        more.setdefault("widget", forms.TextInput(attrs=attrs))
        super().__init__(label=label, **more)
        self.state: JobState | None = None

    def suggest(self, form_prefix: str) -> None:
        self.widget.attrs["list"] = form_prefix

    def clean(self, value: Any) -> MarkView | None:  # type: ignore[override]
        text = super().clean(value)
        if not text:
            return None
        assert self.state is not None
        found = find(self.state, text)
        if found is None:
            raise forms.ValidationError(
                f"There is no mark {text} on this job. Type its number as on the plan."
            )
        return found


class ControlField(forms.TypedChoiceField):
    """A control mark or benchmark from a short list."""

    def __init__(self, label: str, purposes: tuple[str, ...], **more: Any) -> None:
        super().__init__(label=label, coerce=uuid.UUID, empty_value=None, **more)
        self.purposes = purposes

    def offer(self, state: JobState) -> None:
        views = [v for v in state.marks.values() if v.plan.purpose in self.purposes]
        views.sort(key=lambda view: view.label)
        self.choices = [("", "choose"), *((str(v.key), words_of(v)) for v in views)]


class PhotosInput(forms.ClearableFileInput):
    allow_multiple_selected = True


class PhotosField(forms.FileField):
    """Several photos; each is looked at when it is kept."""

    def __init__(self) -> None:
        attrs = {"accept": "image/*", "multiple": True}
        super().__init__(
            label="Photos",
            required=False,
            widget=PhotosInput(attrs=attrs),
            help_text=f"At most {photos.MOST_AT_ONCE}, each up to 12 MB.",
        )

    def clean(self, data: Any, initial: Any = None) -> list[Any]:
        if not data:
            return []
        listed = data if isinstance(data, list | tuple) else [data]
        return [super(PhotosField, self).clean(one, initial) for one in listed if one]


class FieldForm(forms.Form):
    """A form on one job: reads lengths in its unit, times in its zone."""

    key = forms.UUIDField(widget=forms.HiddenInput, required=False)
    visit = forms.UUIDField(widget=forms.HiddenInput, required=False)
    at = forms.CharField(
        label="When, if not now",
        required=False,
        widget=forms.DateTimeInput(attrs={"type": "datetime-local"}),
        help_text="Empty: now. A remembered or copied time is welcome.",
    )

    late = ("at",)
    """Fields that stand folded away at the end of the form."""

    def __init__(
        self, *args: Any, state: JobState, visit: uuid.UUID | None = None, **more: Any
    ) -> None:
        super().__init__(*args, **more)
        self.state = state
        self.initial.setdefault("key", uuid.uuid4())
        self.initial.setdefault("visit", visit)
        for field in self.fields.values():
            if isinstance(field, MillimetresField):
                field.label = f"{field.label}, mm"
            elif isinstance(field, LengthField):
                field.unit = state.record.length_unit
                field.label = f"{field.label}, {field.unit}"
            elif isinstance(field, MarkField):
                field.state = state
                field.suggest("marks-of-job")
            elif isinstance(field, ControlField):
                field.offer(state)

    @property
    def record(self) -> Record:
        return self.state.record

    def clean_at(self) -> datetime | None:
        at = moment_typed(self.cleaned_data["at"], self.record)
        if at is not None and at > timezone.now() + CLOCKS_MAY_DIFFER:
            raise forms.ValidationError(
                "What is recorded as happened lies in the future. Check date and time."
            )
        return at

    def clean_visit(self) -> uuid.UUID | None:
        """The visit, if this job knows it; a stranger's is simply not named."""
        visit = self.cleaned_data["visit"]
        return visit if visit and knows_visit(self.record, visit) else None

    def said(self) -> dict[str, Any]:
        """What every action takes: the record, the client's key, the time, the visit."""
        return {
            "record": self.record,
            "key": self.cleaned_data.get("key") or uuid.uuid4(),
            "at": self.cleaned_data.get("at"),
            "occasion": self.cleaned_data.get("visit"),
        }

    def early(self) -> list[forms.BoundField]:
        """Fields shown open, in order."""
        return [f for f in self.visible_fields() if f.name not in self.late]

    def folded(self) -> list[forms.BoundField]:
        """Fields that few need, folded away."""
        return [f for f in self.visible_fields() if f.name in self.late]

    def folded_open(self) -> bool:
        """Whether something folded away is wrong, and must be seen."""
        return any(field.errors for field in self.folded())


class RemarkFields(forms.Form):
    """A remark, kept outside the hashed record, and photos."""

    remark = forms.CharField(
        label="Remark",
        required=False,
        max_length=2000,
        widget=forms.Textarea(attrs={"rows": 2}),
    )
    photos = PhotosField()


class PassageFields(forms.Form):
    """What is said about a gate; filled on the page of the gate itself."""

    authorised_by = forms.CharField(
        widget=forms.HiddenInput, required=False, max_length=80
    )
    how = forms.CharField(widget=forms.HiddenInput, required=False, max_length=100)
    done_already = forms.BooleanField(widget=forms.HiddenInput, required=False)


class KeptPhotos:
    """Photos that came with a form, kept so that they survive a form shown again.

    A hash alone must not let anybody attach a photo of another job, so each is signed
    for its record.
    """

    def __init__(self, record: Record) -> None:
        self._signer = signing.Signer(salt=f"field photo {record.key}")

    def sign(self, hashes: Iterable[str]) -> list[str]:
        return [self._signer.sign(sha256) for sha256 in hashes]

    def read(self, signed: Iterable[str]) -> list[str]:
        found = []
        for text in list(signed)[: photos.MOST_AT_ONCE]:
            try:
                found.append(self._signer.unsign(text))
            except signing.BadSignature:
                continue
        return found


def knows_visit(record: Record, visit: uuid.UUID) -> bool:
    """Whether an entry of this job names the visit."""
    named = EntryMatter.objects.filter(record=record, thing="visit", key=visit)
    return named.exists()


def find(state: JobState, text: str) -> MarkView | None:
    """The mark somebody means by what they typed."""
    plain = " ".join(text.split())
    if plain in state.by_label:
        return state.by_label[plain]
    same = [v for k, v in state.by_label.items() if k.lower() == plain.lower()]
    return same[0] if len(same) == 1 else None


def words_of(view: MarkView) -> str:
    """A mark in a list of choices: its label and what must be known before using it."""
    standing = "" if view.standing == "standing" else f", {view.standing}"
    return f"{view.label} ({view.trust.trust}{standing})"


def moment_typed(text: str, record: Record) -> datetime | None:
    """A date and time as typed, in the zone of the job."""
    if not text.strip():
        return None
    try:
        typed = datetime.fromisoformat(text.strip())
    except ValueError as error:
        raise forms.ValidationError(
            f"“{text[:30]}” is no date and time. Write it as 2026-03-02 16:40."
        ) from error
    return typed if typed.tzinfo else typed.replace(tzinfo=record.time_zone)


def refuse_on(form: forms.Form, refused: Refused) -> None:
    """Put a refusal by its question, or above the form when it has none there."""
    shown = (
        refused.field in form.fields and not form.fields[refused.field].widget.is_hidden
    )
    form.add_error(refused.field if shown else None, str(refused))
