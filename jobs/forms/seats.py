"""Forms of seats: days are those of the site."""

from __future__ import annotations

from datetime import date, datetime, time, timedelta
from typing import Any
from zoneinfo import ZoneInfo

from django import forms

from jobs.models import User
from jobs.rights import GRANTS, Role
from stakes.can import Can

_DATE = {"type": "date"}
ROLES = [(role.value, role.value.capitalize()) for role in Role]
GRANTED = [
    (Can.ISSUE.value, "Party chief: issue plans for the work named below"),
    (Can.SEE_PRICES.value, "Auditor: see prices"),
]
assert {right for right, _ in GRANTED} == {r for g in GRANTS.values() for r in g}


def date_field(label: str, **more: Any) -> forms.DateField:
    return forms.DateField(
        label=label, widget=forms.DateInput(attrs=_DATE, format="%Y-%m-%d"), **more
    )


class GiveSeatForm(forms.Form):
    person = forms.ModelChoiceField(User.objects.none(), label="Person")
    roles = forms.MultipleChoiceField(
        label="Roles on this job", choices=ROLES, widget=forms.CheckboxSelectMultiple
    )
    grants = forms.MultipleChoiceField(
        label="Granted beside",
        choices=GRANTED,
        required=False,
        widget=forms.CheckboxSelectMultiple,
    )
    work = forms.CharField(label="For which work", max_length=200, required=False)
    since = date_field("From", required=False, help_text="Empty: from now.")
    until = date_field(
        "Last day", required=False, help_text="Empty: until the seat is ended."
    )

    def __init__(self, *args: Any, zone: ZoneInfo, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.zone = zone
        people = User.objects.filter(is_active=True).select_related("company")
        self.fields["person"].queryset = people.order_by("company__name", "name")
        self.fields["person"].label_from_instance = lambda p: f"{p.company}: {p}"

    def clean_since(self) -> datetime | None:
        return begins(self.cleaned_data["since"], self.zone)

    def clean_until(self) -> datetime | None:
        day = self.cleaned_data["until"]
        return begins(day + timedelta(days=1), self.zone) if day else None


def begins(day: date | None, zone: ZoneInfo) -> datetime | None:
    """The first moment of a day of the site."""
    return datetime.combine(day, time(0), zone) if day else None
