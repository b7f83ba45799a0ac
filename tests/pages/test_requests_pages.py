"""Requests over HTTP: asked, refused with a sentence, never another company's."""

from __future__ import annotations

import io
import uuid
from datetime import timedelta

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.utils import timezone
from PIL import Image

from jobs.actions import requests
from jobs.models import Request
from stakes.templatetags.lathbook import day_words
from tests.days import Site, make_site

pytestmark = pytest.mark.django_db


@pytest.fixture
def site() -> Site:
    return make_site()


def photo() -> SimpleUploadedFile:
    data = io.BytesIO()
    Image.new("RGB", (40, 30), "pink").save(data, "JPEG")
    return SimpleUploadedFile("stake.jpg", data.getvalue(), "image/jpeg")


def test_a_contractor_asks_and_gets_a_receipt_with_all_that_was_said(
    site: Site, settings, tmp_path
) -> None:
    settings.PHOTO_DIR = tmp_path
    said = {
        "sort": "re-stake",
        "listed": "101-102, 103",
        "phone": "555-0100",
        "cause": "contractor's operations",
        "last_seen": "Wednesday evening",
        "sheet_words": "C-101 rev 2",
        "site_ready": "yes, graded",
        "photo": photo(),
    }
    answer = site.as_("contractor").post(site.url("request-make"), said, follow=True)
    page = answer.content.decode()
    for words in (
        "Earliest under the notice rule",
        "Only the manager",
        "nothing promised yet",
        "Wednesday evening",
        "C-101 rev 2",
        "yes, graded",
        "contractor&#x27;s operations",
        "555-0100",
    ):
        assert words in page
    one = Request.objects.get()
    assert len(one.listed) == 3
    picture = site.as_("contractor").get(site.url("request-photo", one.key, 1))
    assert picture["Content-Type"] == "image/jpeg"
    for who in ("mason", "inspector"):
        other = site.as_(who).get(site.url("request-photo", one.key, 1))
        assert other.status_code == 404
    assert (
        site.as_("crew").get(site.url("request-photo", one.key, 2)).status_code == 404
    )


def test_the_office_takes_down_what_was_asked_by_telephone_earlier(
    site: Site,
) -> None:
    earlier = timezone.now() - timedelta(hours=2)
    local = earlier.astimezone(site.record.time_zone)
    company = site.cast.mason.company
    answer = site.send(
        "manager",
        "request-make",
        sort="check",
        listed="101",
        company=str(company.pk),
        at=f"{local:%Y-%m-%dT%H:%M}",
    )
    assert answer.status_code == 303
    one = Request.objects.get()
    assert one.received_at == earlier.replace(second=0, microsecond=0)
    assert one.company == str(company.pk)


def test_nobody_outside_the_office_backdates_a_request_or_asks_for_another_company(
    site: Site,
) -> None:
    site.send(
        "contractor",
        "request-make",
        sort="check",
        listed="101",
        company=str(site.cast.mason.company.pk),
        at="2026-01-05T07:00",
    )
    one = Request.objects.get()
    assert one.company == str(site.cast.contractor.company.pk)
    assert timezone.now() - one.received_at < timedelta(minutes=1)


def test_work_built_upon_puts_the_telephone_first(site: Site) -> None:
    assert "Telephone now" in site.page("contractor", "request-make")
    built = {"sort": "check", "listed": "101", "built": "yes"}
    answer = site.send("contractor", "request-make", **built)
    assert answer.status_code == 422
    assert "Say what was built" in answer.content.decode()
    site.send("contractor", "request-make", **built, built_from="the east footing")
    page = site.page("contractor", "request", Request.objects.get().key)
    assert page.index("Something has been built") < page.index("Receipt")


def test_no_leaves_no_alarm_behind(site: Site) -> None:
    said = {"sort": "check", "listed": "101", "built": "no", "built_from": "nothing"}
    site.send("contractor", "request-make", **said)
    assert Request.objects.get().built_from == ""


def test_a_double_tap_makes_one_request(site: Site) -> None:
    said = {"sort": "check", "listed": "101", "key": str(uuid.uuid4())}
    for _ in range(2):
        assert site.send("contractor", "request-make", **said).status_code == 303
    assert Request.objects.count() == 1


@pytest.mark.parametrize(
    "sent, words",
    [
        ({"listed": "999"}, "There is no mark"),
        ({}, "words is missing"),
        ({"sort": "demolish", "listed": "101"}, "valid choice"),
        ({"listed": "101", "needed_by": "soon"}, "not a date and time"),
        ({"listed": "101", "needed_by": "9999-12-31T23:59"}, "year 9999"),
        ({"listed": "101", "needed_by": "0001-01-01T00:00"}, "year 1 "),
        ({"listed": "101", "needed_by": "2026-02-30T10:00"}, "not a date and time"),
        ({"listed": "101", "needed_by": "2020-01-01T10:00"}, "past"),
        ({"listed": "101", "words": "x" * 3000}, "at most 2000"),
        ({"listed": "101," * 2000}, "at most 5000"),
        ({"listed": "1-999999999999999999999999"}, "There is no mark"),
        ({"listed": "101", "words": "nul\x00byte"}, "Null characters"),
        ({"listed": "101", "key": "not-a-key"}, "valid UUID"),
        ({"listed": "<script>alert(1)</script>"}, "&lt;script&gt;"),
    ],
)
def test_a_bad_request_gets_a_sentence_and_changes_nothing(
    site: Site, sent: dict, words: str
) -> None:
    before = site.entries
    answer = site.send("contractor", "request-make", **{"sort": "re-stake", **sent})
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert site.entries == before


def test_a_file_that_is_no_picture_is_refused_and_the_words_are_kept(
    site: Site,
) -> None:
    bad = SimpleUploadedFile("stake.jpg", b"<script>alert(1)</script>")
    answer = site.send(
        "contractor", "request-make", sort="check", words="leaning", photo=bad
    )
    assert answer.status_code == 422
    assert "leaning" in answer.content.decode()
    assert Request.objects.count() == 0


def test_the_manager_decides_plans_and_the_contractor_sees_it(site: Site) -> None:
    ask = site.asks()
    day = timezone.now().date() + timedelta(days=8)
    promised = {"promised_for": f"{day}T08:00", "payer": "contractor"}
    assert site.send("manager", "request-accept", ask, **promised).status_code == 303
    page = site.page("contractor", "request", ask)
    assert f"{day_words(day)}, 08:00" in page
    assert "Answer the cost" in page
    site.send("contractor", "request-cost", ask, accepted="yes")
    assert Request.objects.get().cost == "accepted"
    assert "Answer the cost" not in site.page("contractor", "request", ask)


@pytest.mark.parametrize(
    "name", ["request-accept", "request-decline", "request-talk", "request-close"]
)
def test_decisions_are_refused_without_the_right_and_without_words(
    site: Site, name: str
) -> None:
    ask, before = site.asks(), site.entries
    if name != "request-talk":
        assert site.send("contractor", name, ask, reason="x").status_code == 403
    assert site.send("crew", name, ask, reason="x").status_code == 403
    if name != "request-accept":
        assert site.send("manager", name, ask).status_code == 422
    assert site.entries == before


def test_a_cost_that_is_not_theirs_to_answer_is_said_so(site: Site) -> None:
    ask = site.asks()
    before = site.entries
    answer = site.as_("contractor").post(
        site.url("request-cost", ask), {"accepted": "yes"}, follow=True
    )
    assert "not yours to answer" in answer.content.decode()
    assert site.entries == before


def test_another_company_never_sees_a_request_nor_acts_on_it(site: Site) -> None:
    ask = site.asks(site.cast.mason, words="for the masons alone")
    before = site.entries
    assert "for the masons alone" not in site.page("contractor", "requests")
    for name in ("request", "request-talk", "request-cost", "request-withdraw"):
        for send in (site.as_("contractor").get, site.as_("contractor").post):
            assert send(site.url(name, ask)).status_code == 404
    assert "for the masons alone" in site.page("mason", "requests")
    assert site.entries == before


def test_the_inspector_sees_what_the_owner_is_to_pay_and_answers_it(
    site: Site,
) -> None:
    ask = site.asks()
    assert site.as_("inspector").get(site.url("request", ask)).status_code == 404
    requests.accept_request(record=site.record, ask=ask, payer="owner", by=site.cast.by)
    assert "Answer the cost" in site.page("inspector", "request", ask)
    site.send("inspector", "request-cost", ask, accepted="no", words="not agreed")
    assert Request.objects.get().cost == "disputed"


def test_an_unknown_request_is_not_found(site: Site) -> None:
    for name in ("request", "request-accept", "request-decline", "request-close"):
        address = site.url(name, uuid.uuid4())
        assert site.as_("manager").post(address).status_code == 404
