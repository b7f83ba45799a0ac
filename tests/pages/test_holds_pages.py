"""Holds over HTTP: proposed, sent by the surveyor, heard by holders, lifted."""

from __future__ import annotations

import uuid

import pytest

from jobs.models import Hold
from tests.builders import after
from tests.days import Site, check, make_site

pytestmark = pytest.mark.django_db
SAID = {"listed": "101", "words": "Please wait.", "reason": "CP3 moved"}


@pytest.fixture
def site() -> Site:
    site = make_site()
    site.gives()
    return site


def send(site: Site) -> Hold:
    site.send("surveyor", "hold-send", **SAID)
    return Hold.objects.get()


def test_doubt_is_proposed_with_the_holders_and_their_telephone(site: Site) -> None:
    company = site.cast.contractor.company
    company.phone = "555-0142"
    company.save()
    assert "under no hold yet" not in site.page("surveyor", "holds")
    check(site.record, site.marks[:1], "fail", after(5))
    for page in (site.page("surveyor", "holds"), site.page("party_chief", "holds")):
        assert page.index("Work already built") < page.index("Who holds them")
        assert "tel:555-0142" in page
    assert "under no hold" in site.as_("surveyor").get("/").content.decode()
    assert "under no hold yet" in site.page("surveyor", "home")
    for who in ("contractor", "mason"):
        assert "under no hold yet" not in site.page(who, "holds")


def test_a_hold_is_sent_read_acknowledged_and_lifted_and_all_of_it_is_kept(
    site: Site,
) -> None:
    hold = send(site)
    assert "do not build" in site.as_("contractor").get("/").content.decode()
    page = site.page("contractor", "hold", hold.key)
    assert "Do not build from these" in page
    assert "CP3 moved" not in page
    site.send("contractor", "hold-acknowledge", hold.key)
    site.send("contractor", "hold-acknowledge", hold.key)
    site.page("contractor", "hold", hold.key)
    heard = [h["how"] for h in Hold.objects.get().heard]
    assert heard == ["read", "acknowledged"]
    assert "do not build" not in site.as_("contractor").get("/").content.decode()
    lift = {"listed": "101", "reason": "re-checked"}
    assert site.send("surveyor", "hold-lift", hold.key, **lift).status_code == 303
    assert Hold.objects.get().lifted_at is not None


def test_whoever_was_rung_is_recorded_with_their_company(site: Site) -> None:
    hold = send(site)
    told = {"company": str(site.cast.contractor.company.pk), "by_whom": "Foreman"}
    answer = site.send("party_chief", "hold-tell", hold.key, **told)
    assert answer.status_code == 303
    assert Hold.objects.get().heard[-1]["by"] == "Foreman"
    assert "Told: Foreman" in site.page("surveyor", "hold", hold.key)
    for sent, words in (
        ({**told, "by_whom": ""}, "required"),
        ({**told, "company": str(site.cast.mason.company.pk)}, "valid choice"),
    ):
        answer = site.send("party_chief", "hold-tell", hold.key, **sent)
        assert answer.status_code == 422
        assert words in answer.content.decode()


def test_the_office_looking_at_a_hold_is_no_reading_by_its_holder(
    site: Site,
) -> None:
    hold = send(site)
    before = site.entries
    for who in ("surveyor", "manager", "auditor"):
        site.page(who, "hold", hold.key)
    assert site.entries == before


@pytest.mark.parametrize(
    "more, words",
    [
        ({"listed": ""}, "required"),
        ({"listed": "999"}, "There is no mark"),
        ({"reason": ""}, "required"),
        ({"words": "x" * 2000}, "at most 1000"),
        ({"key": "1; DROP TABLE"}, "valid UUID"),
    ],
)
def test_a_bad_hold_gets_a_sentence_and_changes_nothing(
    site: Site, more: dict, words: str
) -> None:
    before = site.entries
    answer = site.send("surveyor", "hold-send", **{**SAID, **more})
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert site.entries == before


def test_only_the_surveyor_sends_and_lifts(site: Site) -> None:
    hold = send(site)
    before = site.entries
    for who in ("manager", "party_chief", "contractor", "auditor"):
        assert site.send(who, "hold-send", **SAID).status_code == 403
        assert site.send(who, "hold-lift", hold.key, **SAID).status_code == 403
    assert site.entries == before


def test_a_company_that_holds_none_of_the_stakes_never_sees_the_hold(
    site: Site,
) -> None:
    hold = send(site)
    assert str(hold.key) not in site.page("mason", "holds")
    for name in ("hold", "hold-acknowledge"):
        assert site.send("mason", name, hold.key).status_code in (403, 404)
    assert site.as_("mason").get(site.url("hold", hold.key)).status_code == 404


def test_marks_in_the_address_that_are_none_are_left_out(site: Site) -> None:
    query = f"?mark=x&mark={uuid.uuid4()}&mark={site.marks[0]}"
    page = site.as_("surveyor").get(site.url("hold-send") + query).content.decode()
    assert ">\n101</textarea>" in page
