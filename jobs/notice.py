"""When a request may be met earliest under the notice rule. Pure: no clock, no tables.

Only the manager's acceptance promises a date; this is the first moment the contractor
can ask for without asking a favour.
"""

from __future__ import annotations

from datetime import UTC, date, datetime, time, timedelta
from zoneinfo import ZoneInfo

from jobs.kinds.terms import NoticeRule

A_DAY = timedelta(days=1)
LONGEST_CLOSURE = 366
"""Days in a row without work after which the calendar itself must be wrong."""


class NeverWorks(ValueError):
    """The rule names no working day within a year."""


def earliest_under_notice(
    received_at: datetime, rule: NoticeRule, zone: ZoneInfo
) -> datetime:
    """The first moment at which the notice is over, in `zone`.

    Business days are counted whole: received in time on Monday with two of them, the
    crew may be asked for when Wednesday begins. Hours run only on working days, and as
    the clock on the wall does not: an hour lost or won by summer time stays an hour.

    >>> rule = NoticeRule(count=2, of="business days")
    >>> friday = datetime(2026, 3, 6, 16, 0, tzinfo=ZoneInfo("America/Chicago"))
    >>> earliest_under_notice(friday, rule, ZoneInfo("America/Chicago")).isoformat()
    '2026-03-11T07:00:00-05:00'
    """
    counted = counts_as_received(received_at, rule, zone)
    if rule.of == "hours":
        return _after_hours(counted, rule, zone)
    day = counted.date()
    for _ in range(rule.count):
        day = _next_working_day(day + A_DAY, rule)
    if rule.count == 0:
        return counted
    return _at(day, rule.day_begins, zone)


def counts_as_received(
    received_at: datetime, rule: NoticeRule, zone: ZoneInfo
) -> datetime:
    """When the notice begins to run: at once, or when the next working day begins."""
    local = received_at.astimezone(zone)
    if not works(local.date(), rule):
        return _at(_next_working_day(local.date(), rule), rule.day_begins, zone)
    if local.time().replace(second=0, microsecond=0) > rule.cut_off:
        day = _next_working_day(local.date() + A_DAY, rule)
        return _at(day, rule.day_begins, zone)
    return max(local, _at(local.date(), rule.day_begins, zone))


def works(day: date, rule: NoticeRule) -> bool:
    """Whether a day is a working day under the rule."""
    return day.weekday() in rule.weekdays and day not in rule.holidays


def _after_hours(start: datetime, rule: NoticeRule, zone: ZoneInfo) -> datetime:
    left = timedelta(hours=rule.count)
    moment = start.astimezone(UTC)
    day = start.date()
    while True:
        midnight = _at(day + A_DAY, time(0), zone).astimezone(UTC)
        if left <= midnight - moment:
            return (moment + left).astimezone(zone)
        left -= midnight - moment
        day = _next_working_day(day + A_DAY, rule)
        moment = _at(day, time(0), zone).astimezone(UTC)


def _next_working_day(day: date, rule: NoticeRule) -> date:
    for later in range(LONGEST_CLOSURE):
        if works(day + later * A_DAY, rule):
            return day + later * A_DAY
    raise NeverWorks("The notice rule leaves no working day within a year.")


def _at(day: date, clock: time, zone: ZoneInfo) -> datetime:
    """A time of the wall clock; one that summer time skips is the moment after it."""
    there = datetime.combine(day, clock, zone)
    return there.astimezone(UTC).astimezone(zone)
