"""Handovers: what they wait for, what they close, how they are answered."""

from __future__ import annotations

import uuid

import pytest

from jobs.actions import handovers, holds, requests, visits
from jobs.models import Handover, Request
from jobs.queries.readiness import lacking
from jobs.queries.seats import by_of
from stakes.queries.state import job_state
from stakes.record import Refused
from tests.builders import SURVEYOR, after
from tests.days import Site, check, make_site
from tests.jobs.cast import make_job

pytestmark = pytest.mark.django_db


@pytest.fixture
def site() -> Site:
    return make_site()


def test_a_request_runs_from_received_to_closed_by_its_handover(site: Site) -> None:
    ask = site.asks()
    requests.accept_request(record=site.record, ask=ask, by=site.cast.by)
    visit = visits.plan_visit(
        record=site.record,
        starts_at=after(0),
        tasks=[visits.task_for(Request.objects.get(key=ask))],
        by=site.cast.by,
    )
    site.gives(signature="signed", to_whom="Superintendent", ask=ask, visit=visit)
    assert Request.objects.get(key=ask).state == "closed"
    assert job_state(site.record).marks[site.marks[0]].stake.handed_over


def test_handing_over_part_of_what_was_asked_leaves_the_request_open(
    site: Site,
) -> None:
    ask = site.asks()
    site.gives(listed=site.marks[:1], ask=ask)
    assert Request.objects.get(key=ask).state == "received"


def test_handover_waits_for_what_is_lacking_but_never_refuses_what_was_done(
    site: Site,
) -> None:
    before = site.entries
    with pytest.raises(Refused, match="103 is not checked") as refused:
        site.gives(listed=[*site.marks, site.loose])
    assert (refused.value.code, refused.value.field) == ("gate", "in_spite")
    assert site.entries == before
    site.gives(listed=[*site.marks, site.loose], in_spite=True)
    assert "103 is not checked" in Handover.objects.get().lacking[0]


def test_a_gate_that_is_clear_leaves_nothing_lacking_even_when_told_in_spite(
    site: Site,
) -> None:
    site.gives(in_spite=True)
    assert Handover.objects.get().lacking == []


@pytest.mark.parametrize(
    "trouble, words",
    [
        (
            lambda s: check(s.record, s.marks[:1], "fail", after(5)),
            "101 is in question",
        ),
        (
            lambda s: holds.send_hold(
                record=s.record, listed=s.marks, reason="CP3", by=SURVEYOR
            ),
            "101, 102 are on hold",
        ),
    ],
)
def test_doubt_and_holds_stop_a_handover_before_it_is_done(
    site: Site, trouble, words: str
) -> None:
    trouble(site)
    assert words in "; ".join(lacking(site.record, site.marks))


@pytest.mark.parametrize(
    "said, words",
    [
        ({"listed": []}, "No stakes"),
        ({"listed": [uuid.uuid4()]}, "No stakes"),
        ({"signature": "signed"}, "name is missing"),
        ({"signature": "declined", "to_whom": "S"}, "reason is missing"),
        ({"visit": uuid.uuid4()}, "no such visit"),
        ({"ask": uuid.uuid4()}, "no such request"),
        ({"left_with": "x" * 121}, "121 characters"),
    ],
)
def test_a_handover_that_names_nothing_or_nobody_is_refused(
    site: Site, said: dict, words: str
) -> None:
    before = site.entries
    with pytest.raises(Refused, match=words):
        site.gives(**said)
    assert site.entries == before


def test_the_request_of_one_company_is_not_closed_by_handing_to_another(
    site: Site,
) -> None:
    ask = site.asks()
    with pytest.raises(Refused, match="asked for these stakes"):
        site.gives(site.cast.mason.company, ask=ask)
    assert Request.objects.get(key=ask).state == "received"


def test_a_request_of_another_job_is_not_answered_here(site: Site) -> None:
    other = make_job("2699").record
    ask = requests.make_request(
        record=other,
        company=site.cast.contractor.company,
        sort="check",
        words="x",
        by=site.cast.by,
    )
    with pytest.raises(Refused, match="no such request"):
        site.gives(ask=ask)


def test_a_handover_sent_twice_is_one_and_closes_its_request_once(site: Site) -> None:
    ask, key = site.asks(), uuid.uuid4()
    before = site.entries
    assert site.gives(ask=ask, key=key) == site.gives(ask=ask, key=key)
    assert Handover.objects.count() == 1
    assert site.entries == before + 2


def test_a_handover_is_answered_once_and_declined_only_with_a_word(
    site: Site,
) -> None:
    handover = site.gives(left_with="site office")
    answer = {
        "record": site.record,
        "handover": handover,
        "by": by_of(site.cast.contractor),
    }
    with pytest.raises(Refused, match="reason is missing"):
        handovers.answer_handover(**answer, acknowledged=False)
    key = uuid.uuid4()
    handovers.answer_handover(**answer, acknowledged=True, key=key)
    handovers.answer_handover(**answer, acknowledged=True, key=key)
    with pytest.raises(Refused, match="acknowledged already"):
        handovers.answer_handover(**answer, acknowledged=False, words="no")


def test_what_was_explained_and_which_sheets_stand_with_the_handover(
    site: Site,
) -> None:
    from jobs.kinds.handovers import HandedOver
    from stakes.record import entries

    key = site.gives(explained=["offsets are measured level"])
    [said] = entries(site.record, thing="handover", key=key)
    assert isinstance(said.fact, HandedOver)
    assert said.fact.explained == ("offsets are measured level",)
