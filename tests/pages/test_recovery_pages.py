"""Ways back over HTTP: shown, chosen, recorded with the check, refused with a sentence."""

from __future__ import annotations

import re
import uuid

import pytest
from django.test import Client
from django.urls import reverse

from stakes.kinds.condition import MarksGone
from stakes.kinds.control import ValueAdopted
from stakes.kinds.setting import StakeSet
from stakes.models import Entry, Mark
from stakes.record import append
from tests.builders import CHIEF, SURVEYOR, after, plan, row
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    record = job.record
    places = [("1130", "5000"), ("1135", "5210"), ("1010", "5215"), ("1000", "5005")]
    rows = [
        row(f"CP{i}", n, e, purpose="control", carries="position")
        for i, (n, e) in enumerate(places, start=1)
    ]
    for mark in plan(record, *rows):
        fact = ValueAdopted(
            value=uuid.uuid4(), mark=mark, carries="position", source="traverse"
        )
        append(record, fact, by=SURVEYOR, at=after(1))
    [lost] = plan(record, row("106", "1020", "5130", carries="position"))
    append(record, StakeSet(mark=lost), by=CHIEF, at=after(5))
    append(record, MarksGone(listed=(lost,)), by=CHIEF, at=after(90))
    client = Client()
    client.force_login(cast.party_chief)
    return client, record, lost


def test_the_ways_are_drawn_and_listed_with_numbers_and_checks(site) -> None:
    client, record, lost = site
    page = client.get(reverse("stakes:ways", args=[record.number, lost]))
    text = page.content.decode()
    assert page.status_code == 200
    assert "Put it back this way" in text
    assert "Check:" in text
    assert "stroke-dasharray" in text
    assert str(lost) not in re.sub(r'href="[^"]*"', "", text)


def test_a_way_is_recorded_with_its_check_in_one_act(site) -> None:
    client, record, lost = site
    address = reverse("stakes:put-back", args=[record.number, lost, 1])
    form = client.get(address).content.decode()
    expected = re.search(r"expect ([\d.]+) ft", form)
    assert expected, form
    sent = {
        "measured": expected[1],
        "old": "not found",
        "holds": "hub and tack",
        "reason": "shortest",
        "done_already": "True",
        "key": str(uuid.uuid4()),
    }
    answer = client.post(address, sent)
    assert answer.status_code == 303, answer.content.decode()
    client.post(address, sent)
    assert Entry.objects.filter(kind="set").count() == 2
    assert Entry.objects.filter(kind="checked").count() == 1
    assert Mark.objects.get(key=lost).standing == "standing"


@pytest.mark.parametrize(
    "sent, words",
    [
        ({"measured": "abc"}, "cannot be read"),
        ({"measured": "1e400"}, "cannot be read"),
        ({"measured": "12.3", "old": "eaten"}, "valid choice"),
        ({"measured": "12.3", "at": "2999-01-01T00:00"}, "in the future"),
        ({"measured": "12.3", "holds": "x" * 200}, "at most 80"),
    ],
)
def test_bad_input_gets_a_sentence_and_changes_nothing(site, sent, words) -> None:
    client, record, lost = site
    before = Entry.objects.count()
    address = reverse("stakes:put-back", args=[record.number, lost, 1])
    usual = {"old": "not found", "holds": "hub", "reason": "x", "done_already": "True"}
    answer = client.post(address, {**usual, **sent})
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert Entry.objects.count() == before


def test_a_way_that_is_no_longer_offered_is_told(site) -> None:
    client, record, lost = site
    answer = client.get(reverse("stakes:put-back", args=[record.number, lost, 99]))
    assert answer.status_code == 409
    assert "not offered any more" in answer.content.decode()


def test_lost_marks_are_listed_for_the_crew(site) -> None:
    client, record, _ = site
    page = client.get(reverse("stakes:lost", args=[record.number]))
    assert "106: ways back" in page.content.decode()
