"""The terms in force on a day, and their history."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, timedelta

import msgspec
from django.utils import timezone

from jobs.defaults import HOLD_MINUTES
from jobs.kinds.terms import (
    FrameSet,
    HoldTimeSet,
    NoticeRule,
    NoticeRuleSet,
    Payer,
    RestakeTermsSet,
    ToleranceClass,
    ToleranceClassesSet,
    UnitAndZoneSet,
)
from jobs.kinds.terms import Term as TermSet
from jobs.models import Term
from jobs.queries.companies import companies_seen
from stakes.can import Asked, Can
from stakes.models import PrivatePart, Record

_KINDS: dict[str, type[TermSet]] = {
    fact.SUBJECT: fact
    for fact in (
        UnitAndZoneSet,
        FrameSet,
        NoticeRuleSet,
        ToleranceClassesSet,
        RestakeTermsSet,
        HoldTimeSet,
    )
}


@dataclass(frozen=True, slots=True)
class Terms:
    """Each subject of the terms as it stands on one day; None: nothing was agreed."""

    day: date
    unit: UnitAndZoneSet | None = None
    frame: FrameSet | None = None
    notice: NoticeRuleSet | None = None
    tolerances: ToleranceClassesSet | None = None
    restake: RestakeTermsSet | None = None
    hold: HoldTimeSet | None = None

    @property
    def notice_rule(self) -> NoticeRule | None:
        return self.notice.rule if self.notice else None

    @property
    def classes(self) -> tuple[ToleranceClass, ...]:
        return self.tolerances.classes if self.tolerances else ()

    def tolerance_class(self, name: str) -> ToleranceClass | None:
        return next((c for c in self.classes if c.name == name), None)

    @property
    def hold_time(self) -> timedelta:
        return timedelta(minutes=self.hold.minutes if self.hold else HOLD_MINUTES)

    def payer_for(self, cause: str) -> Payer | None:
        payers = self.restake.payers if self.restake else ()
        return next((p for p in payers if p.cause == cause), None)


_FIELD = {
    "unit and zone": "unit",
    "frame": "frame",
    "notice": "notice",
    "tolerances": "tolerances",
    "re-stake": "restake",
    "hold time": "hold",
}


def terms_at(record: Record, day: date, *, company: str = "") -> Terms:
    """The terms in force on a day, with what was agreed with one company for itself.

    Of two settings that take effect on one day, the later said counts. What was agreed
    with the company stands before what was agreed with all.
    """
    found: dict[str, TermSet] = {}
    rows = Term.objects.filter(
        record=record, effective__lte=day, company__in={"", company}
    )
    for row in rows.order_by("company", "effective", "set_at", "place"):
        found[_FIELD[row.subject]] = fact_of(row)
    return Terms(day=day, **found)  # type: ignore[arg-type]


@dataclass(frozen=True, slots=True)
class Setting:
    """One setting as a page shows it; `price` only for those who may see it."""

    row: Term
    fact: TermSet
    price: str | None


def settings_seen(asked: Asked) -> dict[str, list[Setting]]:
    """Every setting this reader may see, by subject, the latest to count first."""
    rows = Term.objects.filter(record=asked.record)
    companies = companies_seen(asked)
    if companies is not None:
        rows = rows.filter(company__in={"", *companies})
    rows = list(rows.order_by("-effective", "-set_at", "-place"))
    prices = _prices(rows) if asked.can(Can.SEE_PRICES) else {}
    found: dict[str, list[Setting]] = {subject: [] for subject in _FIELD.values()}
    for row in rows:
        setting = Setting(row, fact_of(row), prices.get(row.number))
        found[_FIELD[row.subject]].append(setting)
    return found


def fact_of(row: Term) -> TermSet:
    """The setting as it was said."""
    return msgspec.convert(row.facts, _KINDS[row.subject])


def today(record: Record) -> date:
    """The day of the job's time zone, which is not always that of the server."""
    return timezone.now().astimezone(record.time_zone).date()


def _prices(rows: list[Term]) -> dict[int, str]:
    """What was agreed as the price, by entry number; an erased one is missing."""
    if not rows:
        return {}
    parts = PrivatePart.objects.filter(
        record=rows[0].record_id, name="price", number__in=[row.number for row in rows]
    )
    return {part.number: part.text for part in parts if part.text is not None}
