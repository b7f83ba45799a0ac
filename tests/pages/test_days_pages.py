"""Requests, visits, handovers and holds over HTTP: asked, refused, never another's."""

from __future__ import annotations

import uuid
from datetime import timedelta

import pytest
from django.test import Client
from django.urls import reverse
from django.utils import timezone

from jobs.actions import handovers, holds, requests, visits
from jobs.models import Handover, Hold, Request, Visit
from stakes.models import Entry
from stakes.templatetags.lathbook import day_words
from tests.builders import after, plan, row, set_stake
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    record = job.record
    marks = plan(
        record, row("101", "1", "2"), row("102", "5", "6"), row("B2", "7", "7")
    )
    set_stake(record, marks[0], None, after(1))
    return cast, record, marks


def client_of(person) -> Client:
    client = Client()
    client.force_login(person)
    return client


def test_a_contractor_asks_and_gets_a_receipt(site) -> None:
    cast, record, _ = site
    address = reverse("jobs:request-make", args=[record.number])
    sent = {"sort": "re-stake", "listed": "101-102, B2", "phone": "555-0100"}
    answer = client_of(cast.contractor).post(address, sent, follow=True)
    assert answer.status_code == 200
    page = answer.content.decode()
    assert "Earliest under the notice rule" in page
    assert "Only the manager" in page
    assert len(Request.objects.get().listed) == 3


def test_a_double_tap_makes_one_request(site) -> None:
    cast, record, _ = site
    client = client_of(cast.contractor)
    address = reverse("jobs:request-make", args=[record.number])
    sent = {"sort": "check", "listed": "101", "key": str(uuid.uuid4())}
    client.post(address, sent)
    client.post(address, sent)
    assert Request.objects.count() == 1


@pytest.mark.parametrize(
    "sent, words",
    [
        ({"sort": "re-stake", "listed": "999"}, "There is no mark"),
        ({"sort": "re-stake"}, "words is missing"),
        ({"sort": "demolish", "listed": "101"}, "valid choice"),
        (
            {"sort": "check", "listed": "101", "needed_by": "soon"},
            "not a date and time",
        ),
        ({"sort": "check", "listed": "101", "words": "x" * 3000}, "at most 2000"),
        ({"sort": "check", "listed": "101," * 2000}, "at most 5000"),
    ],
)
def test_a_bad_request_gets_a_sentence_and_changes_nothing(site, sent, words) -> None:
    cast, record, _ = site
    before = Entry.objects.count()
    address = reverse("jobs:request-make", args=[record.number])
    answer = client_of(cast.contractor).post(address, sent)
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert Entry.objects.count() == before


def test_a_file_that_is_no_picture_is_refused_and_the_words_are_kept(site) -> None:
    from django.core.files.uploadedfile import SimpleUploadedFile

    cast, record, _ = site
    address = reverse("jobs:request-make", args=[record.number])
    photo = SimpleUploadedFile("stake.jpg", b"<script>alert(1)</script>")
    sent = {"sort": "check", "listed": "101", "words": "leaning", "photo": photo}
    answer = client_of(cast.contractor).post(address, sent)
    assert answer.status_code == 422
    assert "leaning" in answer.content.decode()
    assert Request.objects.count() == 0


def test_the_manager_decides_plans_and_the_contractor_sees_it(site) -> None:
    cast, record, marks = site
    ask = requests.make_request(
        record=record,
        company=cast.contractor.company,
        sort="re-stake",
        listed=marks[:1],
        by=cast.by,
    )
    manager = client_of(cast.manager)
    accept = reverse("jobs:request-accept", args=[record.number, ask])
    day = timezone.now().date() + timedelta(days=8)
    manager.post(accept, {"promised_for": f"{day}T08:00", "payer": "contractor"})
    planned = {"starts_at": f"{day}T08:00", "requests": [str(ask)]}
    answer = manager.post(reverse("jobs:visit-plan", args=[record.number]), planned)
    assert answer.status_code == 303, answer.content.decode()
    assert Visit.objects.get().tasks[0]["ask"] == str(ask)
    page = client_of(cast.contractor).get(
        reverse("jobs:request", args=[record.number, ask])
    )
    assert f"{day_words(day)}, 08:00" in page.content.decode()


def test_another_company_never_sees_a_request_visit_handover_or_hold(site) -> None:
    cast, record, marks = site
    ask = requests.make_request(
        record=record, company=cast.mason.company, sort="check", words="x", by=cast.by
    )
    visit = visits.plan_visit(
        record=record,
        starts_at=after(9),
        tasks=[visits.task_for(Request.objects.get())],
        by=cast.by,
    )
    handover = handovers.hand_over(
        record=record,
        company=cast.mason.company,
        listed=marks[:1],
        signature="absent",
        in_spite=True,
        by=cast.by,
    )
    hold = holds.send_hold(record=record, listed=marks[:1], reason="x", by=cast.by)
    other = client_of(cast.contractor)
    for name, key in (
        ("request", ask),
        ("visit", visit),
        ("handover", handover),
        ("hold", hold),
    ):
        own = reverse(f"jobs:{name}", args=[record.number, key])
        assert other.get(own).status_code == 404
        assert client_of(cast.mason).get(own).status_code == 200


def test_a_handover_that_lacks_something_stops_until_it_is_said_to_be_done(
    site,
) -> None:
    cast, record, _ = site
    address = reverse("jobs:handover-make", args=[record.number])
    company = str(cast.contractor.company.pk)
    sent = {"company": company, "listed": "101", "signature": "absent"}
    chief = client_of(cast.party_chief)
    answer = chief.post(address, sent)
    assert answer.status_code == 422
    assert "Not ready to hand over" in answer.content.decode()
    assert chief.post(address, {**sent, "in_spite": "on"}).status_code == 303
    handover = Handover.objects.get()
    answer = client_of(cast.contractor).post(
        reverse("jobs:handover-answer", args=[record.number, handover.key]),
        {"acknowledged": "yes"},
    )
    assert answer.status_code == 303
    assert Handover.objects.get().answer == "acknowledged"


def test_a_hold_is_sent_by_the_surveyor_read_by_its_holder_and_lifted(site) -> None:
    cast, record, marks = site
    handovers.hand_over(
        record=record,
        company=cast.contractor.company,
        listed=marks[:1],
        signature="absent",
        in_spite=True,
        by=cast.by,
    )
    surveyor = client_of(cast.surveyor)
    sent = {"listed": "101", "words": "Please wait.", "reason": "CP3 moved"}
    surveyor.post(reverse("jobs:hold-send", args=[record.number]), sent)
    hold = Hold.objects.get()
    holder = client_of(cast.contractor)
    page = holder.get(reverse("jobs:hold", args=[record.number, hold.key]))
    assert "Do not build from these" in page.content.decode()
    holder.post(reverse("jobs:hold-acknowledge", args=[record.number, hold.key]))
    assert [h["how"] for h in Hold.objects.get().heard] == ["read", "acknowledged"]
    lift = reverse("jobs:hold-lift", args=[record.number, hold.key])
    surveyor.post(lift, {"listed": "101", "reason": "re-checked"})
    assert Hold.objects.get().lifted_at is not None
