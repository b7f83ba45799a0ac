"""Requests: received with a receipt, decided, answered, taken back, closed."""

from __future__ import annotations

import uuid
from datetime import UTC, date, datetime, timedelta

import pytest
from django.utils import timezone

from jobs.actions import requests, visits
from jobs.actions.terms import set_notice_rule
from jobs.kinds.terms import NoticeRule
from jobs.models import Request
from jobs.queries.requests import may_answer_cost, told
from jobs.queries.seats import asked, by_of
from stakes.models import Entry
from stakes.record import Refused
from tests.days import Site, make_site
from tests.jobs.cast import make_job

pytestmark = pytest.mark.django_db

# Friday 6 March 2026, 09:00 and 15:01 in Chicago (CST, UTC-6); summer time begins on
# Sunday 8 March (calendar, from memory).
FRIDAY_NINE = datetime(2026, 3, 6, 15, 0, tzinfo=UTC)


@pytest.fixture
def site() -> Site:
    return make_site()


@pytest.fixture
def two_days(site: Site) -> NoticeRule:
    """Two business days, agreed at the beginning of the year."""
    return agree(site, 2, date(2026, 1, 5))


def agree(site: Site, count: int, effective: date) -> NoticeRule:
    rule = NoticeRule(count=count, of="business days")
    set_notice_rule(record=site.record, rule=rule, effective=effective, by=site.cast.by)
    return rule


def one(key: uuid.UUID) -> Request:
    return Request.objects.get(key=key)


def test_the_receipt_counts_business_days_on_the_sites_own_clock(
    site: Site, two_days: NoticeRule
) -> None:
    request = one(site.asks(at=FRIDAY_NINE))
    assert request.received_at == FRIDAY_NINE
    # Two business days after Friday end on Tuesday; work begins there at 07:00 CDT.
    assert request.earliest == datetime(2026, 3, 10, 12, 0, tzinfo=UTC)
    assert request.promised_for is None


def test_after_the_cut_off_the_notice_runs_from_the_next_working_day(
    site: Site, two_days: NoticeRule
) -> None:
    late = one(site.asks(at=FRIDAY_NINE + timedelta(hours=6, minutes=1)))
    assert late.earliest == datetime(2026, 3, 11, 12, 0, tzinfo=UTC)


def test_each_receipt_keeps_the_rule_that_was_in_force_on_its_day(
    site: Site, two_days: NoticeRule
) -> None:
    before = one(site.asks(at=FRIDAY_NINE)).earliest
    agree(site, 9, date(2026, 3, 9))
    assert one(site.asks(at=FRIDAY_NINE)).earliest == before
    monday = one(site.asks(at=FRIDAY_NINE + timedelta(days=3)))
    assert monday.earliest == datetime(2026, 3, 20, 12, 0, tzinfo=UTC)


def test_without_a_rule_in_force_the_receipt_names_no_time(site: Site) -> None:
    assert one(site.asks(at=FRIDAY_NINE)).earliest is None


def test_the_same_request_sent_twice_is_one(site: Site) -> None:
    key = uuid.uuid4()
    assert site.asks(key=key) == site.asks(key=key) == key
    assert Request.objects.count() == 1


def test_other_words_under_the_same_key_are_told_so_and_not_lost_silently(
    site: Site,
) -> None:
    key = uuid.uuid4()
    site.asks(key=key)
    with pytest.raises(Refused, match="sent before"):
        site.asks(key=key, words="and 103 too")
    assert one(key).words == "hit by a dozer"


def test_a_key_of_another_job_is_refused_with_a_sentence(site: Site) -> None:
    key, other = uuid.uuid4(), make_job("2699").record
    said = {"company": site.cast.contractor.company, "sort": "check", "words": "x"}
    requests.make_request(record=other, key=key, by=site.cast.by, **said)
    with pytest.raises(Refused, match="another job"):
        site.asks(key=key)


def test_a_request_for_a_mark_of_another_job_is_refused(site: Site) -> None:
    before = site.entries
    with pytest.raises(Refused, match="not on this job"):
        site.asks(listed=[uuid.uuid4()])
    assert site.entries == before


@pytest.mark.parametrize(
    "said, words",
    [
        ({"listed": [], "words": "  "}, "words is missing"),
        ({"words": "x" * 2001}, "2001 characters"),
        ({"built_from": "x" * 501}, "501 characters"),
        ({"needed_by": datetime(2020, 1, 1, tzinfo=UTC)}, "past"),
    ],
)
def test_what_cannot_be_meant_is_refused_and_nothing_is_written(
    site: Site, said: dict, words: str
) -> None:
    before = site.entries
    with pytest.raises(Refused, match=words):
        site.asks(**said)
    assert site.entries == before


def test_a_telephone_number_stays_outside_the_hashed_words(site: Site) -> None:
    key = site.asks(phone="555-0199")
    assert "555-0199" not in Entry.objects.latest("number").body
    for who, seen in (("contractor", True), ("crew", True), ("auditor", False)):
        person = site.cast.everybody[who]
        reader = asked(site.record, person, job_name="")
        assert (told(reader, one(key)).phone == "555-0199") is seen, who


def test_a_request_on_a_visit_is_scheduled_and_stays_so_when_accepted_later(
    site: Site,
) -> None:
    key = site.asks()
    plan_for(site, key)
    requests.accept_request(record=site.record, ask=key, by=site.cast.by)
    assert one(key).state == "scheduled"


def plan_for(site: Site, key: uuid.UUID) -> uuid.UUID:
    return visits.plan_visit(
        record=site.record,
        starts_at=timezone.now() + timedelta(days=3),
        tasks=[visits.task_for(one(key))],
        by=site.cast.by,
    )


def test_a_cancelled_visit_leaves_its_request_waiting_for_another(site: Site) -> None:
    accepted, undecided = site.asks(), site.asks(words="another")
    requests.accept_request(record=site.record, ask=accepted, by=site.cast.by)
    for key, state in ((accepted, "accepted"), (undecided, "received")):
        visit = plan_for(site, key)
        assert (one(key).state, one(key).visit) == ("scheduled", visit)
        visits.cancel_visit(
            record=site.record, visit=visit, reason="rain", by=site.cast.by
        )
        assert (one(key).state, one(key).visit) == (state, None)


@pytest.mark.parametrize(
    "outcome, state", [("done", "scheduled"), ("site not ready", "accepted")]
)
def test_a_wasted_trip_leaves_the_request_waiting_and_a_good_one_does_not(
    site: Site, outcome: str, state: str
) -> None:
    key = site.asks()
    requests.accept_request(record=site.record, ask=key, by=site.cast.by)
    task = visits.task_for(one(key))
    visit = visits.plan_visit(
        record=site.record, starts_at=timezone.now(), tasks=[task], by=site.cast.by
    )
    visits.end_task(
        record=site.record,
        visit=visit,
        task=task.task,
        outcome=outcome,
        by=site.cast.by,
    )
    assert one(key).state == state


def test_what_is_over_cannot_be_decided_again(site: Site) -> None:
    key = site.asks()
    requests.decline_request(
        record=site.record, ask=key, reason="not our job", by=site.cast.by
    )
    for again in (
        lambda: requests.accept_request(record=site.record, ask=key, by=site.cast.by),
        lambda: requests.withdraw_request(record=site.record, ask=key, by=site.cast.by),
        lambda: plan_for(site, key),
    ):
        with pytest.raises(Refused, match="declined already"):
            again()


def test_a_decision_sent_twice_is_one_entry(site: Site) -> None:
    ask, key = site.asks(), uuid.uuid4()
    before = site.entries
    for _ in range(2):
        requests.decline_request(
            record=site.record, ask=ask, reason="no access", key=key, by=site.cast.by
        )
        requests.talk_over(
            record=site.record,
            ask=ask,
            words="call us",
            key=uuid.uuid5(key, "talk"),
            by=site.cast.by,
        )
    assert site.entries == before + 2


def test_a_decline_without_a_reason_and_a_promise_in_the_past_are_refused(
    site: Site,
) -> None:
    ask = site.asks()
    with pytest.raises(Refused, match="reason is missing"):
        requests.decline_request(
            record=site.record, ask=ask, reason=" ", by=site.cast.by
        )
    with pytest.raises(Refused, match="past"):
        requests.accept_request(
            record=site.record,
            ask=ask,
            promised_for=timezone.now() - timedelta(days=1),
            by=site.cast.by,
        )
    assert one(ask).state == "received"


def test_a_request_closes_without_stakes_only_with_a_word(site: Site) -> None:
    ask = site.asks()
    with pytest.raises(Refused, match="without a word"):
        requests.close_request(record=site.record, ask=ask, by=site.cast.by)
    requests.close_request(
        record=site.record, ask=ask, words="explained by phone", by=site.cast.by
    )
    assert one(ask).state == "closed"


def test_the_owner_answers_what_the_owner_is_to_pay_and_who_asked_the_rest(
    site: Site,
) -> None:
    ask = site.asks()

    def answers() -> list[str]:
        people = site.cast.everybody
        return [
            who
            for who in ("contractor", "mason", "inspector", "manager")
            if may_answer_cost(asked(site.record, people[who], job_name=""), one(ask))
        ]

    assert answers() == []
    for payer, who in (
        ("contractor", ["contractor"]),
        ("owner", ["inspector"]),
        ("survey firm, no charge", []),
    ):
        requests.accept_request(
            record=site.record, ask=ask, payer=payer, by=site.cast.by
        )
        assert answers() == who
    with pytest.raises(Refused, match="reason is missing"):
        requests.answer_cost(
            record=site.record, ask=ask, accepted=False, by=site.cast.by
        )


def test_the_course_shows_both_clocks_where_they_differ(site: Site) -> None:
    ask = site.asks(at=FRIDAY_NINE)
    requests.talk_over(
        record=site.record, ask=ask, words="which offset?", by=site.cast.by
    )
    reader = asked(site.record, site.cast.manager, job_name="")
    assert [s.is_late for s in told(reader, one(ask)).course] == [True, False]


def test_who_may_not_see_prices_reads_no_cost_in_the_course(site: Site) -> None:
    ask = site.asks()
    requests.accept_request(
        record=site.record, ask=ask, payer="contractor", by=site.cast.by
    )
    requests.answer_cost(
        record=site.record, ask=ask, accepted=True, by=by_of(site.cast.contractor)
    )

    def words(who: str) -> str:
        reader = asked(site.record, site.cast.everybody[who], job_name="")
        return " ".join(step.words for step in told(reader, one(ask)).course)

    assert "Cost" in words("contractor")
    assert "Cost" not in words("crew")
