"""Forms of handovers: give stakes, answer for having received them."""

from __future__ import annotations

from typing import Any

from django import forms

from jobs.forms.asking import SIGNATURES, Keyed, MarkList
from jobs.models import Company, CompanyKind
from stakes.models import Record

PARTIES = (CompanyKind.GENERAL, CompanyKind.TRADE, CompanyKind.OWNER)
EXPLAINED = (
    "each stake was shown",
    "what cut and fill refer to",
    "offsets are measured level",
    "stakes are to be kept, and a loss reported the same day",
)
"""What readers of stakes get wrong when nobody tells them (common practice)."""


class HandOverForm(Keyed):
    signature = forms.ChoiceField(
        label="How it was received", choices=SIGNATURES, widget=forms.RadioSelect
    )
    to_whom = forms.CharField(label="To whom", required=False, max_length=120)
    words = forms.CharField(
        label="Their words, or why declined", required=False, max_length=1000
    )
    left_with = forms.CharField(
        label="Left with, or sent to", required=False, max_length=120
    )
    explained = forms.MultipleChoiceField(
        label="What was explained",
        choices=[(words, words.capitalize()) for words in EXPLAINED],
        required=False,
        widget=forms.CheckboxSelectMultiple,
    )
    in_spite = forms.BooleanField(
        label="It was handed over already, in spite of what is lacking",
        required=False,
        help_text="What is lacking stands on the sheet and in the record.",
    )

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        seated = record.seats.values("company")
        parties = Company.objects.filter(pk__in=seated, kind__in=PARTIES)
        self.fields["company"] = forms.ModelChoiceField(
            parties, label="To which company"
        )
        self.fields["listed"] = MarkList(record=record, label="Which stakes")
        self.order_fields(["company", "listed"])


class AnswerHandoverForm(Keyed):
    acknowledged = forms.ChoiceField(
        label="These stakes",
        choices=[("yes", "We received them"), ("no", "We decline them")],
        widget=forms.RadioSelect,
    )
    words = forms.CharField(label="Why declined", required=False, max_length=1000)
