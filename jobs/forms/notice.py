"""The form of the notice rule."""

from __future__ import annotations

from datetime import date, time
from typing import Any

from django import forms

from jobs.kinds.terms import NoticeRule

COUNTED = (("business days", "business days"), ("hours", "hours"))
DAYS = (
    (0, "Monday"),
    (1, "Tuesday"),
    (2, "Wednesday"),
    (3, "Thursday"),
    (4, "Friday"),
    (5, "Saturday"),
    (6, "Sunday"),
)


class NoticeFields(forms.Form):
    """Everything of the rule; forms of an effective day build on it."""

    count = forms.IntegerField(label="Notice", min_value=0, max_value=1000)
    of = forms.ChoiceField(label="Counted in", choices=COUNTED)
    cut_off = forms.TimeField(
        label="Cut-off",
        widget=forms.TimeInput(attrs={"type": "time"}, format="%H:%M"),
        help_text="What comes later counts as received the next working day.",
    )
    day_begins = forms.TimeField(
        label="Working day begins",
        widget=forms.TimeInput(attrs={"type": "time"}, format="%H:%M"),
    )
    weekdays = forms.TypedMultipleChoiceField(
        label="Working days",
        choices=DAYS,
        coerce=int,
        widget=forms.CheckboxSelectMultiple,
    )
    holidays = forms.CharField(
        label="Holidays",
        required=False,
        max_length=4000,
        widget=forms.Textarea(attrs={"rows": 4}),
        help_text="One day a line, like 2026-11-26.",
    )
    source = forms.CharField(label="Where it is agreed", max_length=200, required=False)

    def clean_holidays(self) -> tuple[date, ...]:
        days = []
        lines = self.cleaned_data["holidays"].splitlines()
        for number, line in enumerate(lines, start=1):
            if line.strip():
                days.append(_day(number, line.strip()))
        return tuple(sorted(set(days)))

    def rule(self) -> NoticeRule:
        said: dict[str, Any] = self.cleaned_data
        return NoticeRule(
            count=said["count"],
            of=said["of"],
            cut_off=said["cut_off"],
            day_begins=said["day_begins"],
            weekdays=tuple(sorted(set(said["weekdays"]))),
            holidays=said["holidays"],
        )


def from_rule(rule: NoticeRule | None) -> dict[str, Any]:
    """What the form starts with."""
    rule = rule or NoticeRule(count=2, of="business days", cut_off=time(15))
    return {
        "count": rule.count,
        "of": rule.of,
        "cut_off": rule.cut_off,
        "day_begins": rule.day_begins,
        "weekdays": list(rule.weekdays),
        "holidays": "\n".join(day.isoformat() for day in rule.holidays),
    }


def _day(number: int, text: str) -> date:
    try:
        return date.fromisoformat(text)
    except ValueError as error:
        raise forms.ValidationError(
            f"Line {number}, {text[:40]!r}, is not a day. Write it like 2026-11-26."
        ) from error
