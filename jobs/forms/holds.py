"""Forms of holds: send one, tell of it by telephone, lift it."""

from __future__ import annotations

from typing import Any

from django import forms

from jobs.forms.asking import LONG, Keyed, MarkList
from jobs.forms.requests import ReasonForm
from jobs.models import Company
from stakes.models import Record


class HoldForm(Keyed):
    words = forms.CharField(
        label="What the holders read",
        max_length=1000,
        widget=forms.Textarea(attrs=LONG),
    )
    reason = forms.CharField(
        label="Reason, for the record",
        max_length=1000,
        widget=forms.Textarea(attrs=LONG),
    )

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["listed"] = MarkList(record=record, label="Which marks")
        self.order_fields(["listed"])


class LiftForm(ReasonForm):
    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["listed"] = MarkList(record=record, label="Lift it for")
        self.order_fields(["listed"])


class TellForm(Keyed):
    by_whom = forms.CharField(label="Who was told", max_length=120)
    words = forms.CharField(label="What they said", required=False, max_length=500)

    def __init__(self, *args: Any, companies: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["company"] = forms.ModelChoiceField(
            Company.objects.filter(pk__in=companies), label="Of which company"
        )
        self.order_fields(["key", "company"])
