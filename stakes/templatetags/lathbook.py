"""How times, lengths and rights are written on every page."""

from __future__ import annotations

from datetime import date, datetime

from django import template
from django.utils.html import format_html
from django.utils.safestring import SafeString

from geometry.units import Length, Unit
from stakes.can import Asked, Can
from stakes.models import Record
from stakes.record.lengths import Measured

register = template.Library()


@register.filter
def moment(at: datetime | None, record: Record) -> SafeString | str:
    """A moment in the record's zone: Tue 3 Mar 2026, 16:40.

    A server shows every job in the time its people live in, so there is no moment
    without a record; the full instant stands in the element for machines.
    """
    if at is None:
        return "not recorded"
    there = at.astimezone(record.time_zone)
    return format_html(
        '<time datetime="{}">{}</time>', there.isoformat(), moment_words(there)
    )


@register.filter
def clock(at: datetime | None, record: Record) -> SafeString | str:
    """Only the time of day, where the day is plain: 16:40."""
    if at is None:
        return "not recorded"
    there = at.astimezone(record.time_zone)
    return format_html(
        '<time datetime="{}">{}</time>', there.isoformat(), f"{there:%H:%M}"
    )


@register.filter
def day(when: date | None) -> SafeString | str:
    """A day: Tue 3 Mar 2026."""
    if when is None:
        return "not recorded"
    return format_html(
        '<time datetime="{}">{}</time>', when.isoformat(), day_words(when)
    )


@register.filter
def measured(length: Measured | None) -> SafeString | str:
    """A length as entered, its unit beside it."""
    if length is None:
        return "–"
    text = length.text.removesuffix(length.unit).strip()
    return format_html('{}<span class="unit">{}</span>', text, length.unit)


@register.filter
def from_nm(nanometres: str, record: Record) -> SafeString | str:
    """Exact nanometres in the job's unit: 0.01 ft or 1 mm, the unit beside it."""
    if not nanometres:
        return "not recorded"
    unit = record.length_unit
    decimals = 3 if unit is Unit.METRE else 2
    length = Length.from_nanometres(int(nanometres), unit, decimals)
    text = length.shown(unit, decimals)
    return format_html(
        '{}<span class="unit">{}</span>', text, _SHORT.get(str(unit), str(unit))
    )


@register.filter
def from_metres(metres: float | None, record: Record) -> SafeString | str:
    """A computed length in the job's unit: 0.01 ft or 1 mm, the unit beside it."""
    if metres is None:
        return "not computed"
    decimals = 3 if record.length_unit is Unit.METRE else 2
    length = Length.from_metres(float(metres), record.length_unit, decimals)
    return format_html(
        '{}<span class="unit">{}</span>',
        length.text,
        _SHORT.get(str(record.length_unit), str(record.length_unit)),
    )


_SHORT = {"ftUS": "ft (US)"}

_UNITS = {
    Unit.METRE: "metres",
    Unit.FOOT: "international feet (0.3048 m)",
    Unit.US_SURVEY_FOOT: "US survey feet (1200/3937 m)",
}


@register.filter
def unit_words(unit: Unit) -> str:
    """The unit of a job, so that nobody mistakes one foot for the other."""
    return _UNITS[unit]


@register.filter
def can(asked: Asked | None, right: str) -> bool:
    """Whether whoever asks has a right, named as in the code: asked|can:"SEATS"."""
    return asked is not None and Can[right] in asked.rights


def moment_words(there: datetime) -> str:
    """A moment already in its zone, in words for mail and paper too."""
    return f"{day_words(there)}, {there:%H:%M}"


def day_words(when: date) -> str:
    return f"{when:%a} {when.day} {when:%b %Y}"
