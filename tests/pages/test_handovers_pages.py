"""Handovers over HTTP: stopped at the gate, recorded in spite of it, answered."""

from __future__ import annotations

import uuid

import pytest

from jobs.models import Handover, Request
from tests.days import Site, make_site

pytestmark = pytest.mark.django_db


@pytest.fixture
def site() -> Site:
    return make_site()


def sent(site: Site, **more: object) -> dict:
    company = str(site.cast.contractor.company.pk)
    return {"company": company, "listed": "101", "signature": "absent", **more}


def test_a_handover_that_lacks_something_stops_until_it_is_said_to_be_done(
    site: Site,
) -> None:
    before = site.entries
    answer = site.send("party_chief", "handover-make", **sent(site, listed="103"))
    assert answer.status_code == 422
    assert "Not ready to hand over: 103 is not checked" in answer.content.decode()
    assert site.entries == before
    said = sent(site, listed="103", in_spite="on")
    assert site.send("party_chief", "handover-make", **said).status_code == 303
    page = site.page("contractor", "handover", Handover.objects.get().key)
    assert "103 is not checked" in page


def test_the_form_says_what_is_lacking_before_anything_is_sent(site: Site) -> None:
    ask = site.asks(listed=[site.loose])
    page = site.as_("party_chief").get(site.url("handover-make") + f"?ask={ask}")
    assert "103 is not checked" in page.content.decode()
    assert "hit by a dozer" not in page.content.decode()


def test_a_request_is_handed_over_acknowledged_and_closed(site: Site) -> None:
    ask = site.asks()
    address = site.url("handover-make") + f"?ask={ask}"
    said = sent(site, listed="101, 102", explained=["offsets are measured level"])
    assert site.as_("party_chief").post(address, said).status_code == 303
    assert Request.objects.get().state == "closed"
    handover = Handover.objects.get()
    assert "to acknowledge" in site.as_("contractor").get("/").content.decode()
    page = site.page("contractor", "handover", handover.key)
    assert "offsets are measured level" in page
    site.send("contractor", "handover-answer", handover.key, acknowledged="yes")
    assert Handover.objects.get().answer == "acknowledged"
    assert "to acknowledge" not in site.as_("contractor").get("/").content.decode()


def test_a_double_tap_hands_over_once(site: Site) -> None:
    said = sent(site, key=str(uuid.uuid4()))
    for _ in range(2):
        assert site.send("party_chief", "handover-make", **said).status_code == 303
    assert Handover.objects.count() == 1


@pytest.mark.parametrize(
    "more, words",
    [
        ({"listed": ""}, "required"),
        ({"listed": "999"}, "There is no mark"),
        ({"signature": "signed"}, "name is missing"),
        ({"signature": "declined", "to_whom": "S"}, "reason is missing"),
        ({"signature": ""}, "required"),
        ({"company": str(uuid.uuid4())}, "valid choice"),
        ({"company": "x"}, "valid"),
        ({"explained": ["nothing at all"]}, "valid choice"),
        ({"left_with": "x" * 500}, "at most 120"),
    ],
)
def test_a_bad_handover_gets_a_sentence_and_changes_nothing(
    site: Site, more: dict, words: str
) -> None:
    before = site.entries
    answer = site.send("party_chief", "handover-make", **sent(site, **more))
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert site.entries == before


def test_addresses_that_name_nothing_of_this_job_are_simply_forms(site: Site) -> None:
    for query in ("?ask=x", f"?ask={uuid.uuid4()}", f"?visit={uuid.uuid4()}"):
        answer = site.as_("party_chief").get(site.url("handover-make") + query)
        assert answer.status_code == 200


def test_declining_takes_a_word_and_only_the_receiver_answers(site: Site) -> None:
    handover = site.gives()
    before = site.entries
    no = {"acknowledged": "no"}
    answer = site.send("contractor", "handover-answer", handover, **no)
    assert answer.status_code == 422
    for who in ("manager", "party_chief", "inspector", "auditor"):
        assert site.send(who, "handover-answer", handover, **no).status_code == 403
    assert site.send("mason", "handover-answer", handover, **no).status_code == 404
    assert site.entries == before


def test_another_company_never_sees_a_handover(site: Site) -> None:
    handover = site.gives(site.cast.mason.company, left_with="Quillfeather")
    assert "Zebrawood" not in site.page("contractor", "handovers")
    gone = site.as_("contractor").get(site.url("handover", handover))
    assert gone.status_code == 404
    assert "Quillfeather" in site.page("mason", "handover", handover)


def test_only_those_on_site_or_in_the_office_hand_over(site: Site) -> None:
    for who in ("crew", "contractor", "auditor", "subcontractor"):
        answer = site.send(who, "handover-make", **sent(site))
        assert answer.status_code == 403
    assert Handover.objects.count() == 0
