"""The phones' address: each thing once, by the seat it had then, nothing dropped."""

from __future__ import annotations

import json
import uuid
from datetime import timedelta

import pytest
from django.test import Client
from django.urls import reverse
from django.utils import timezone
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from jobs.actions.seats import end_seat
from jobs.models import Seat, TrayItem
from stakes.models import Entry, Mark
from tests.builders import plan, row, set_stake
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    marks = plan(job.record, *(row(str(n), "1", "2") for n in range(101, 107)))
    for mark in marks:
        set_stake(job.record, mark, None, timezone.now())
    client = Client()
    client.force_login(cast.party_chief)
    return cast, job.record, marks, client


def thing(
    mark: uuid.UUID, job: str = "2614", minutes: float = 0, **more: object
) -> dict:
    at = timezone.now() + timedelta(minutes=minutes)
    return {
        "key": str(uuid.uuid4()),
        "job": job,
        "kind": "destroyed",
        "facts": {"listed": [str(mark)]},
        "device_time": at.isoformat(),
        **more,
    }


def sync(client: Client, *items: object, clock: timedelta = timedelta(0)) -> dict:
    sent = {"sent_at": (timezone.now() + clock).isoformat(), "items": list(items)}
    answer = client.post(
        reverse("api:phone"), json.dumps(sent), content_type="application/json"
    )
    assert answer.status_code == 200, answer.content
    return answer.json()


def test_a_device_whose_clock_is_wrong_is_put_right_by_its_offset(site) -> None:
    _, _record, marks, client = site
    fast = timedelta(hours=3)
    item = thing(marks[0], minutes=180)
    told = sync(client, item, clock=fast)
    assert told["outcomes"][0]["outcome"] == "recorded"
    entry = Entry.objects.get(key=item["key"])
    assert abs(entry.happened_at - timezone.now()) < timedelta(minutes=2)
    body = json.loads(entry.body)
    assert abs(body["clock_offset_ms"] + 3 * 3600 * 1000) < 60_000
    assert told["heads"] == {"2614": entry.number}


def test_a_reply_that_was_lost_makes_no_second_entry(site) -> None:
    _, _record, marks, client = site
    item = thing(marks[0])
    sync(client, item)
    again = sync(client, item, clock=timedelta(seconds=7))
    assert again["outcomes"][0]["outcome"] == "already"
    assert Entry.objects.filter(key=item["key"]).count() == 1


def test_other_words_under_a_key_are_a_conflict_and_both_are_known(site) -> None:
    _, _record, marks, client = site
    item = thing(marks[0])
    sync(client, item)
    told = sync(client, {**item, "facts": {"listed": [str(marks[1])]}})
    assert told["outcomes"][0]["outcome"] == "conflict"


def test_what_happened_under_a_seat_counts_after_the_seat_has_ended(site) -> None:
    cast, record, marks, client = site
    item = thing(marks[0])
    seat = Seat.objects.get(record=record, person=cast.party_chief)
    end_seat(record=record, seat=seat.key, by=cast.by, until=None)
    assert sync(client, item)["outcomes"][0]["outcome"] in ("recorded", "waiting")
    late = thing(marks[1], minutes=5)
    assert sync(client, late)["outcomes"][0]["outcome"] == "waiting"
    assert TrayItem.objects.filter(key=late["key"]).exists()


def test_what_cannot_be_admitted_waits_and_the_office_settles_it(site) -> None:
    cast, _record, marks, client = site
    unknown = thing(marks[0], job="9999")
    told = sync(client, unknown, {"half": "of something"}, 7, clock=timedelta(0))
    assert [o["outcome"] for o in told["outcomes"]] == ["waiting"] * 3
    sync(client, unknown, {"half": "of something"}, 7)
    assert TrayItem.objects.count() == 3
    office = Client()
    office.force_login(cast.manager)
    page = office.get(reverse("jobs:tray")).content.decode()
    assert "no seat on this job" in page
    waiting = TrayItem.objects.get(key=unknown["key"])
    aside = reverse("jobs:tray-aside", args=[waiting.pk])
    office.post(aside, {"reason": "typed the wrong job"})
    waiting.refresh_from_db()
    assert waiting.outcome == "typed the wrong job"


def test_an_unreadable_sync_is_told_and_not_half_kept(site) -> None:
    _, _, _, client = site
    answer = client.post(reverse("api:phone"), "[]", content_type="application/json")
    assert answer.status_code == 422
    answer = client.post(reverse("api:phone"), "{", content_type="application/json")
    assert answer.status_code == 422


@settings(
    max_examples=20,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
@given(data=st.data())
def test_any_order_doubling_and_loss_ends_with_each_thing_once(site, data) -> None:
    _, record, marks, client = site
    items = [thing(m, minutes=1 + i, counter=i) for i, m in enumerate(marks)]
    waiting = {item["key"]: item for item in items}
    for _ in range(30):
        if not waiting:
            break
        chosen = data.draw(
            st.lists(st.sampled_from(sorted(waiting)), min_size=1, max_size=8)
        )
        drift = timedelta(milliseconds=data.draw(st.integers(-500, 500)))
        told = sync(client, *(waiting[key] for key in chosen), clock=drift)
        if data.draw(st.booleans()):
            continue  # the reply was lost: the phone keeps everything
        for outcome in told["outcomes"]:
            assert outcome["outcome"] in ("recorded", "already"), outcome
            waiting.pop(outcome["key"], None)
    if waiting:
        sync(client, *waiting.values())
    for item in items:
        assert Entry.objects.filter(record=record, key=item["key"]).count() == 1
    assert set(Mark.objects.values_list("standing", flat=True)) == {"gone"}
