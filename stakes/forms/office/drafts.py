"""Forms that check, issue and retire."""

from __future__ import annotations

from typing import Any

from django import forms

from stakes.actions.issuing import Adoption
from stakes.forms.office.parts import DayField, KeyedForm


class CheckForm(forms.Form):
    how = forms.CharField(
        label="How it was checked",
        max_length=200,
        help_text="What it was compared with: sheet, dimension string, another program.",
    )
    alone = forms.BooleanField(
        label="I computed it myself, and the firm has no other person to check it",
        required=False,
    )


class IssueForm(forms.Form):
    """Issuing asks nothing more, unless values of control are adopted with it."""

    def __init__(self, data: Any = None, *, with_control: bool) -> None:
        super().__init__(data)
        self.with_control = with_control
        if with_control:
            self.fields |= {
                "adopts": forms.BooleanField(
                    label="Adopt the values of its control and benchmarks",
                    required=False,
                    initial=True,
                ),
                "source": forms.CharField(
                    label="Where the values come from", max_length=120, required=False
                ),
                "dated": DayField(label="Dated"),
                "position_mm": forms.FloatField(
                    label="Standard deviation in plan, mm",
                    required=False,
                    min_value=0,
                    max_value=10_000,
                ),
                "elevation_mm": forms.FloatField(
                    label="Standard deviation in height, mm",
                    required=False,
                    min_value=0,
                    max_value=10_000,
                ),
            }

    def adoption(self) -> Adoption | None:
        if not self.with_control or not self.cleaned_data["adopts"]:
            return None
        said = {k: v for k, v in self.cleaned_data.items() if k != "adopts"}
        return Adoption(**said)


class RetireForm(KeyedForm):
    stage = forms.CharField(label="Stage", max_length=40)
    reason = forms.CharField(label="Reason", max_length=120, required=False)
