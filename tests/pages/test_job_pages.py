"""Plan, marks, one mark, the record and its corrections, through the pages."""

from __future__ import annotations

import re

import pytest
from django.test import Client
from django.urls import reverse

from stakes.kinds.condition import MarksGone
from stakes.models import Entry, Mark
from stakes.record import append
from tests.builders import CHIEF, after, open_setup, plan, row, set_stake
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    """A job with two control marks, one stake set from them and one planned."""
    cast = make_cast()
    job = make_job()
    seat_everybody(job, cast)
    record = job.record
    control = plan(
        record,
        row("CP1", "1000", "2000", purpose="control"),
        row("CP2", "1200", "2000", purpose="control"),
    )
    stake, other = plan(
        record, row("101", "1050.5", "2100"), row("102", "1060", "2110")
    )
    setup = open_setup(record, control[:1], check=control[1], at=after(10))
    set_stake(record, stake, setup, after(20), holds="hub and tack")
    append(record, MarksGone(listed=(stake,), cause="dozer"), by=CHIEF, at=after(90))
    return cast, record, stake, other


def go(person, name: str, **kwargs: object) -> tuple[int, str]:
    client = Client()
    client.force_login(person)
    query = kwargs.pop("query", "")
    answer = client.get(reverse(name, kwargs=kwargs) + str(query))
    return answer.status_code, answer.content.decode()


def test_the_plan_draws_every_mark_and_lists_what_needs_care(site) -> None:
    cast, record, *_ = site
    status, page = go(cast.manager, "stakes:plan", job=record.number)
    assert status == 200
    assert page.count('class="mark"') >= 4
    assert "101: stake, gone" in page
    assert "<h2>Gone</h2>" in page


def test_the_plan_of_the_morning_shows_the_stake_before_it_went(site) -> None:
    cast, record, *_ = site
    at = after(30).astimezone(record.time_zone).strftime("%Y-%m-%dT%H:%M")
    _, page = go(cast.manager, "stakes:plan", job=record.number, query=f"?at={at}")
    assert "101: stake, standing" in page


def test_a_moment_that_cannot_be_read_is_answered_with_a_sentence(site) -> None:
    cast, record, *_ = site
    status, page = go(cast.manager, "stakes:marks", job=record.number, query="?at=soon")
    assert status == 200
    assert "is not a date and time" in page


def test_the_page_of_a_mark_tells_its_life_and_what_was_not_recorded(site) -> None:
    cast, record, stake, _ = site
    _, page = go(cast.manager, "stakes:mark", job=record.number, mark=stake)
    assert "Gone between" in page
    assert "hub and tack" in page
    control = Mark.objects.get(label="CP1").key
    _, page = go(cast.manager, "stakes:mark", job=record.number, mark=control)
    assert "Not recorded: serial, calibrated on." in page


def test_the_record_can_be_filtered_by_mark_and_kind(site) -> None:
    cast, record, *_ = site
    _, page = go(cast.manager, "stakes:record", job=record.number, query="?mark=101")
    assert "Found missing: dozer." in page
    _, page = go(cast.manager, "stakes:record", job=record.number, query="?kind=set")
    assert "Found missing" not in page


def test_a_withdrawal_leaves_both_words_readable_and_the_state_mended(site) -> None:
    cast, record, stake, _ = site
    gone = Entry.objects.get(kind="destroyed")
    client = Client()
    client.force_login(cast.manager)
    address = reverse("stakes:entry-withdraw", args=[record.number, gone.number])
    answer = client.post(address, {"why": "it was 110"})
    assert answer.status_code == 302
    assert Mark.objects.get(key=stake).standing == "standing"
    _, page = go(cast.manager, "stakes:entry", job=record.number, number=gone.number)
    assert "no longer counts" in page


def test_a_correction_names_the_right_mark_and_keeps_the_rest(site) -> None:
    cast, record, stake, other = site
    gone = Entry.objects.get(kind="destroyed")
    client = Client()
    client.force_login(cast.manager)
    address = reverse("stakes:entry-correct", args=[record.number, gone.number])
    form = client.get(address).content.decode()
    at = re.search(r'name="at" value="([^"]+)"', form)
    assert at
    sent = {"listed": "102", "cause": "dozer", "at": at[1], "why": "misread"}
    answer = client.post(address, sent)
    assert answer.status_code == 302, answer.content.decode()
    assert Mark.objects.get(key=stake).standing == "standing"
    assert Mark.objects.get(key=other).standing == "gone"


@pytest.mark.parametrize(
    "sent, words",
    [
        ({"listed": "999", "why": "x"}, "There is no mark"),
        ({"listed": "101", "why": ""}, "required"),
        ({"listed": "101", "why": "x", "at": "yesterday"}, "not a date and time"),
        ({"listed": "101", "why": "x", "at": "2999-01-01T00:00"}, "in the future"),
        ({"listed": "101", "cause": "dozer", "why": "same"}, "Nothing was changed"),
    ],
)
def test_a_bad_correction_gets_a_sentence_and_changes_nothing(
    site, sent, words
) -> None:
    cast, record, *_ = site
    gone = Entry.objects.get(kind="destroyed")
    at = gone.happened_at.astimezone(record.time_zone).strftime("%Y-%m-%dT%H:%M")
    client = Client()
    client.force_login(cast.manager)
    before = Entry.objects.count()
    address = reverse("stakes:entry-correct", args=[record.number, gone.number])
    answer = client.post(address, {"at": at, **sent})
    assert answer.status_code == 422
    assert words in answer.content.decode()
    assert Entry.objects.count() == before


def test_the_number_of_queries_of_the_plan_does_not_grow_with_marks(site) -> None:
    from django.db import connection
    from django.test.utils import CaptureQueriesContext

    cast, record, *_ = site
    client = Client()
    client.force_login(cast.manager)
    address = reverse("stakes:marks", args=[record.number])
    with CaptureQueriesContext(
        connection,
    ) as few:
        client.get(address)
    plan(record, *(row(str(n), str(n), "2000") for n in range(200, 400)))
    with CaptureQueriesContext(connection) as many:
        client.get(address)
    assert len(many) == len(few)


def test_correcting_takes_the_right_to_say_it(site) -> None:
    cast, record, *_ = site
    planned = Entry.objects.filter(kind="planned").first()
    client = Client()
    client.force_login(cast.crew)
    address = reverse("stakes:entry-withdraw", args=[record.number, planned.number])
    answer = client.post(address, {"why": "no"})
    assert answer.status_code == 422
    assert "takes the right to issue a plan" in answer.content.decode()


def test_every_kind_that_needs_another_right_is_a_kind() -> None:
    from stakes.actions.correcting import CORRECTED_BY
    from stakes.record import KINDS

    assert set(CORRECTED_BY) <= set(KINDS)
