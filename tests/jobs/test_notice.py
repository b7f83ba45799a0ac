"""The notice rule: business days, hours, cut-off, holidays, summer time.

Expected moments are counted by hand on a calendar. Dates of summer time are those of
the United States in 2026: from 8 March 02:00 to 1 November 02:00 (from memory).
"""

from __future__ import annotations

from datetime import UTC, date, datetime, time
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from jobs.kinds.terms import NoticeRule
from jobs.notice import NeverWorks, counts_as_received, earliest_under_notice, works

CHICAGO = ZoneInfo("America/Chicago")
TWO_DAYS = NoticeRule(count=2, of="business days")


def chicago(*parts: int) -> datetime:
    return datetime(*parts, tzinfo=CHICAGO)


def hours(count: int, **rest: object) -> NoticeRule:
    return NoticeRule(count=count, of="hours", **rest)


def test_two_business_days_from_monday_morning_end_when_wednesday_begins() -> None:
    monday = chicago(2026, 1, 12, 9, 30)

    assert earliest_under_notice(monday, TWO_DAYS, CHICAGO) == chicago(2026, 1, 14, 7)


def test_a_weekend_between_does_not_count() -> None:
    thursday = chicago(2026, 1, 15, 9)

    assert earliest_under_notice(thursday, TWO_DAYS, CHICAGO) == chicago(2026, 1, 19, 7)


def test_what_comes_on_the_cut_off_is_in_time_and_a_minute_later_is_not() -> None:
    on_time, late = chicago(2026, 1, 12, 15, 0, 59), chicago(2026, 1, 12, 15, 1)

    assert earliest_under_notice(on_time, TWO_DAYS, CHICAGO).day == 14
    assert earliest_under_notice(late, TWO_DAYS, CHICAGO).day == 15


def test_what_comes_on_saturday_counts_as_received_on_monday() -> None:
    saturday = chicago(2026, 1, 17, 11)

    assert counts_as_received(saturday, TWO_DAYS, CHICAGO) == chicago(2026, 1, 19, 7)
    assert earliest_under_notice(saturday, TWO_DAYS, CHICAGO).day == 21


def test_a_holiday_does_not_count() -> None:
    rule = NoticeRule(
        count=2, of="business days", holidays=(date(2026, 11, 26), date(2026, 11, 27))
    )
    wednesday = chicago(2026, 11, 25, 10)

    assert earliest_under_notice(wednesday, rule, CHICAGO) == chicago(2026, 12, 1, 7)


def test_a_week_that_works_on_saturday_counts_it() -> None:
    rule = NoticeRule(count=2, of="business days", weekdays=(0, 1, 2, 3, 4, 5))
    thursday = chicago(2026, 1, 15, 9)

    assert earliest_under_notice(thursday, rule, CHICAGO).day == 17


def test_hours_stand_still_over_the_weekend() -> None:
    friday = chicago(2026, 1, 16, 10)

    assert earliest_under_notice(friday, hours(24), CHICAGO) == chicago(2026, 1, 19, 10)


def test_hours_after_the_cut_off_run_from_the_next_working_morning() -> None:
    friday = chicago(2026, 1, 16, 16)

    assert earliest_under_notice(friday, hours(4), CHICAGO) == chicago(2026, 1, 19, 11)


def test_an_hour_lost_to_summer_time_is_not_counted_as_notice() -> None:
    rule = hours(24, weekdays=(0, 1, 2, 3, 4, 5, 6))
    saturday = chicago(2026, 3, 7, 10)

    ends = earliest_under_notice(saturday, rule, CHICAGO)

    assert ends == chicago(2026, 3, 8, 11)
    assert (ends.astimezone(UTC) - saturday.astimezone(UTC)).total_seconds() == 86400


def test_an_hour_won_in_autumn_is_counted_as_notice() -> None:
    rule = hours(24, weekdays=(0, 1, 2, 3, 4, 5, 6))

    assert earliest_under_notice(chicago(2026, 10, 31, 10), rule, CHICAGO) == chicago(
        2026, 11, 1, 9
    )


def test_the_day_is_that_of_the_job_not_of_the_server() -> None:
    """23:30 UTC on Monday is still Monday afternoon in Chicago, past the cut-off."""
    received = datetime(2026, 1, 12, 20, 30, tzinfo=UTC)

    assert earliest_under_notice(received, TWO_DAYS, CHICAGO).day == 14
    assert earliest_under_notice(received, TWO_DAYS, ZoneInfo("Asia/Tokyo")).day == 15


def test_no_notice_at_all_means_at_once_within_working_time() -> None:
    rule = NoticeRule(count=0, of="business days")

    assert earliest_under_notice(chicago(2026, 1, 12, 9), rule, CHICAGO) == chicago(
        2026, 1, 12, 9
    )
    assert earliest_under_notice(chicago(2026, 1, 17, 9), rule, CHICAGO) == chicago(
        2026, 1, 19, 7
    )


def test_a_morning_that_summer_time_skips_becomes_the_moment_after_it() -> None:
    rule = NoticeRule(
        count=1, of="business days", day_begins=time(2, 30), weekdays=(5, 6)
    )

    assert earliest_under_notice(chicago(2026, 3, 7, 9), rule, CHICAGO) == chicago(
        2026, 3, 8, 3, 30
    )


def test_a_calendar_without_a_working_day_is_named_not_searched_for_ever() -> None:
    days = tuple(date.fromordinal(date(2026, 1, 5).toordinal() + n) for n in range(800))
    rule = NoticeRule(count=1, of="business days", holidays=days)

    with pytest.raises(NeverWorks):
        earliest_under_notice(chicago(2026, 1, 12, 9), rule, CHICAGO)


RULES = st.builds(
    NoticeRule,
    count=st.integers(0, 15),
    of=st.sampled_from(["business days", "hours"]),
    cut_off=st.times(),
    day_begins=st.times(max_value=time(12)),
    weekdays=st.lists(st.integers(0, 6), min_size=1, unique=True).map(tuple),
    holidays=st.lists(st.dates(date(2026, 1, 1), date(2026, 12, 31)), max_size=5).map(
        tuple
    ),
)
MOMENTS = st.datetimes(
    datetime(2026, 1, 1), datetime(2026, 12, 31), timezones=st.just(UTC)
)


@given(MOMENTS, RULES)
def test_notice_never_ends_before_the_request_came(
    received: datetime, rule: NoticeRule
) -> None:
    assert earliest_under_notice(received, rule, CHICAGO) >= received


@given(MOMENTS, MOMENTS, RULES)
def test_who_asks_later_is_never_served_earlier(
    one: datetime, other: datetime, rule: NoticeRule
) -> None:
    first, second = sorted([one, other])

    assert earliest_under_notice(first, rule, CHICAGO) <= earliest_under_notice(
        second, rule, CHICAGO
    )


@given(MOMENTS, RULES)
def test_business_days_end_on_a_working_day(
    received: datetime, rule: NoticeRule
) -> None:
    if rule.of == "business days":
        ends = earliest_under_notice(received, rule, CHICAGO)

        assert works(ends.astimezone(CHICAGO).date(), rule)
