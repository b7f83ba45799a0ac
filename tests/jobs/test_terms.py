"""Terms: each change counts from its day, and the old stay readable."""

from __future__ import annotations

import uuid
from datetime import date, timedelta

import pytest
from django.utils import timezone

from geometry.units import Length, Unit
from jobs.actions.terms import (
    set_frame,
    set_hold_time,
    set_notice_rule,
    set_restake_terms,
    set_tolerance_classes,
    set_unit_and_zone,
)
from jobs.defaults import default_payers
from jobs.kinds.terms import NoticeRule, ToleranceClass
from jobs.models import Job
from jobs.queries.seats import asked
from jobs.queries.terms import settings_seen, terms_at, today
from stakes.models import Entry
from stakes.record import Refused
from stakes.record.lengths import Measured
from tests.builders import plan, row
from tests.jobs.cast import Cast, seat_everybody

JANUARY, MARCH, JUNE = date(2026, 1, 5), date(2026, 3, 2), date(2026, 6, 1)


def test_a_change_counts_from_its_day_on(job: Job, cast: Cast) -> None:
    for day, minutes in ((JANUARY, 30), (JUNE, 10)):
        set_hold_time(record=job.record, minutes=minutes, effective=day, by=cast.by)

    def on(day: date) -> timedelta:
        return terms_at(job.record, day).hold_time

    assert on(JUNE - timedelta(days=1)) == timedelta(minutes=30)
    assert on(JUNE) == timedelta(minutes=10)


def test_what_was_agreed_late_for_an_earlier_day_does_not_hide_a_later_one(
    job: Job, cast: Cast
) -> None:
    set_frame(record=job.record, frame="second", effective=JUNE, by=cast.by)
    set_frame(record=job.record, frame="first", effective=MARCH, by=cast.by)

    assert terms_at(job.record, MARCH).frame.frame == "first"
    assert terms_at(job.record, JUNE).frame.frame == "second"


def test_of_two_settings_for_one_day_the_later_said_counts(
    job: Job, cast: Cast
) -> None:
    for frame in ("copied wrong", "copied right"):
        set_frame(record=job.record, frame=frame, effective=MARCH, by=cast.by)

    assert terms_at(job.record, MARCH).frame.frame == "copied right"


def test_before_anything_was_agreed_nothing_is_made_up(job: Job) -> None:
    terms = terms_at(job.record, date(2000, 1, 1))

    assert terms.notice is None and terms.frame is None and terms.classes == ()
    assert terms.hold_time == timedelta(minutes=30)


def test_unit_and_zone_change_while_there_are_no_marks(job: Job, cast: Cast) -> None:
    set_unit_and_zone(
        record=job.record,
        unit=Unit.US_SURVEY_FOOT,
        zone="America/Denver",
        effective=MARCH,
        by=cast.by,
    )

    assert (job.record.unit, job.record.zone) == ("ftUS", "America/Denver")


def test_unit_and_zone_do_not_change_once_there_are_marks(job: Job, cast: Cast) -> None:
    plan(job.record, row("101", "100.00", "100.00"), at=timezone.now())
    head = job.record.head

    with pytest.raises(Refused) as refused:
        set_unit_and_zone(
            record=job.record,
            unit=Unit.METRE,
            zone="America/Chicago",
            effective=MARCH,
            by=cast.by,
        )

    assert refused.value.code == "has marks"
    job.record.refresh_from_db()
    assert (job.record.unit, job.record.head) == ("ft", head)


def test_the_price_is_no_part_of_the_hashed_body(job: Job, cast: Cast) -> None:
    seat_everybody(job, cast)

    said = Entry.objects.filter(record=job.record, kind="re-stake terms set").last()

    assert "7731.45" not in said.body and '"price"' in said.body


def test_a_price_agreed_with_one_company_is_seen_by_it_and_by_the_office(
    job: Job, cast: Cast
) -> None:
    seat_everybody(job, cast)

    def prices(person: object) -> list[str]:
        reader = asked(job.record, person, job_name=job.name)
        return [s.price for s in settings_seen(reader)["restake"] if s.price]

    assert prices(cast.mason) == prices(cast.manager) == ["7731.45 a stake"]
    assert prices(cast.contractor) == prices(cast.crew) == []


def test_what_was_agreed_with_one_company_stands_before_what_was_with_all(
    job: Job, cast: Cast
) -> None:
    own = default_payers()[:1]
    masons = cast.mason.company
    set_restake_terms(
        record=job.record, payers=own, company=masons, effective=MARCH, by=cast.by
    )
    set_restake_terms(
        record=job.record, payers=default_payers(), effective=JUNE, by=cast.by
    )

    assert terms_at(job.record, JUNE, company=str(masons.pk)).restake.payers == own
    assert len(terms_at(job.record, JUNE).restake.payers) == len(default_payers())


@pytest.mark.parametrize("factor", ["abc", "1.2", "0", "-0.9999", "NaN", "Infinity"])
def test_a_factor_that_is_none_is_refused(job: Job, cast: Cast, factor: str) -> None:
    with pytest.raises(Refused) as refused:
        set_frame(
            record=job.record,
            frame="grid",
            combined_factor=factor,
            effective=MARCH,
            by=cast.by,
        )

    assert refused.value.field == "combined_factor"


def test_a_notice_rule_that_never_works_is_refused(job: Job, cast: Cast) -> None:
    days = tuple(MARCH + timedelta(days=n) for n in range(400))
    rule = NoticeRule(count=1, of="business days", holidays=days)

    with pytest.raises(Refused) as refused:
        set_notice_rule(record=job.record, rule=rule, effective=MARCH, by=cast.by)

    assert refused.value.field == "holidays"


def tolerance(name: str, position: str = "0.02") -> ToleranceClass:
    length = Measured.of(Length.parse(position, Unit.FOOT)) if position else None
    return ToleranceClass(key=uuid.uuid4(), name=name, position=length)


@pytest.mark.parametrize(
    ("classes", "field"),
    [
        ([tolerance("Walls"), tolerance("walls ")], "name"),
        ([tolerance("Walls", "0")], "position"),
        ([tolerance("Walls", "")], "position"),
        ([tolerance(" ")], "name"),
        ([tolerance("x" * 61)], "name"),
    ],
)
def test_tolerance_classes_that_cannot_be_told_apart_or_limit_nothing_are_refused(
    job: Job, cast: Cast, classes: list[ToleranceClass], field: str
) -> None:
    with pytest.raises(Refused) as refused:
        set_tolerance_classes(
            record=job.record, classes=classes, effective=MARCH, by=cast.by
        )

    assert refused.value.field == field


def test_today_is_the_day_of_the_site(job: Job) -> None:
    here = timezone.now().astimezone(job.record.time_zone)

    assert today(job.record) == here.date()
