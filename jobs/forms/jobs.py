"""Forms of a job: open it, describe it, close it."""

from __future__ import annotations

from zoneinfo import available_timezones

from django import forms

from geometry.units import Unit
from jobs.forms.notice import COUNTED

REGIONS = (
    "America",
    "Europe",
    "Asia",
    "Australia",
    "Pacific",
    "Africa",
    "Atlantic",
    "Indian",
    "Antarctica",
)

UNITS = (
    (Unit.FOOT, "International feet (0.3048 m)"),
    (Unit.US_SURVEY_FOOT, "US survey feet (1200/3937 m)"),
    (Unit.METRE, "Metres"),
)


def zones() -> list[tuple[str, object]]:
    """Time zones grouped by region, as a choice field wants them."""
    known = available_timezones()
    grouped: list[tuple[str, object]] = [("", "Choose one")]
    for region in REGIONS:
        names = sorted(z for z in known if z.startswith(f"{region}/"))
        choices = [(z, z.partition("/")[2].replace("_", " ")) for z in names]
        grouped.append((region, choices))
    return [*grouped, ("UTC", "UTC")]


class DescribeJobForm(forms.Form):
    name = forms.CharField(label="Name", max_length=120)
    place = forms.CharField(
        label="Place",
        max_length=200,
        required=False,
        help_text="How to find the site: street, gate, what to ask for.",
    )


class OpenJobForm(DescribeJobForm):
    number = forms.CharField(
        label="Job number", max_length=20, help_text="As the firm counts, like 2614."
    )
    unit = forms.ChoiceField(
        label="Unit",
        choices=UNITS,
        widget=forms.RadioSelect,
        help_text="As printed on the sheets. The two feet differ by 2 parts in a "
        "million: 4 feet in a coordinate of two million. It cannot change once "
        "there are marks.",
    )
    zone = forms.ChoiceField(
        label="Time zone of the site",
        choices=zones,
        help_text="Every time of this job is shown in it.",
    )
    frame = forms.CharField(
        label="Coordinate frame",
        max_length=200,
        required=False,
        help_text="As the sheets name it: a state plane zone, a site grid, local.",
    )
    combined_factor = forms.CharField(
        label="Combined factor",
        max_length=20,
        required=False,
        help_text="Grid over ground, as printed; empty when coordinates are ground.",
    )
    count = forms.IntegerField(
        label="Notice", min_value=0, max_value=1000, required=False
    )
    of = forms.ChoiceField(label="Counted in", choices=COUNTED)
    field_order = ["number", "name", "place", "unit", "zone"]


class WhyForm(forms.Form):
    why = forms.CharField(label="Reason", max_length=300, required=False)
