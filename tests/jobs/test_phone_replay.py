"""Signals drop, replies get lost, buttons are pressed twice: each thing ends once."""

from __future__ import annotations

import json
import uuid
from datetime import timedelta

import pytest
from django.test import Client
from django.utils import timezone
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

from jobs.models import TrayItem
from stakes.models import Entry, Mark
from tests.fieldwork import field_job
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db

JOBS = ("2614", "2615")
ELEVATION = {"text": "498.9", "unit": "ft"}


@pytest.fixture
def site():
    """Two jobs ready for the field, and the phone of one who has a seat on both."""
    cast = make_cast()
    marks = {}
    for number in JOBS:
        job = make_job(number, by=cast.by)
        seat_everybody(job, cast)
        at = timezone.now() - timedelta(hours=1)
        _, marks[number] = field_job(job.record, at=at)
    client = Client()
    client.force_login(cast.party_chief)
    return marks, client


def a_day(marks, job: str) -> list[dict[str, object]]:
    """What one phone kept of a morning: seen, set past a gate, found, gone, unknown."""
    first, other = str(marks["101"]), str(marks["102"])
    kinds: list[tuple[str, dict[str, object]]] = [
        ("set", {"mark": first, "old": "pulled", "elevation": ELEVATION}),
        ("seen", {"listed": [first], "condition": "undisturbed"}),
        ("set", {"mark": other, "old": "pulled"}),
        ("destroyed", {"listed": [first], "cause": "traffic"}),
        ("foreign mark found", {"label": f"F-{uuid.uuid4().hex[:8]}"}),
        ("hazard flagged", {"sort": "traffic", "words": "gate"}),
        ("eaten", {"listed": [first]}),
        ("value adopted", {"mark": first, "source": "nobody"}),
    ]
    start = timezone.now() + timedelta(minutes=1)
    return [
        {
            "key": str(uuid.uuid4()),
            "job": job,
            "kind": kind,
            "facts": facts,
            "device_time": (start + timedelta(seconds=10 * place)).isoformat(),
            "counter": place,
        }
        for place, (kind, facts) in enumerate(kinds)
    ]


def sync(client: Client, items: list[object], drift: timedelta) -> dict[str, str]:
    sent_at = (timezone.now() + drift).isoformat()
    answer = client.post(
        "/api/phone/",
        json.dumps({"sent_at": sent_at, "items": items}),
        content_type="application/json",
    )
    assert answer.status_code == 200, answer.content
    return {o["key"]: o["outcome"] for o in answer.json()["outcomes"]}


@settings(
    max_examples=5,
    phases=[Phase.generate],
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
@given(data=st.data())
def test_every_thing_ends_in_the_record_or_in_the_tray_once(site, data) -> None:
    marks, client = site
    items = [item for job in JOBS for item in a_day(marks[job], job)]
    waiting = {str(item["key"]): item for item in items}
    first_said: dict[str, object] = {}
    for _ in range(6):
        if not waiting:
            break
        chosen = data.draw(
            st.lists(st.sampled_from(sorted(waiting)), min_size=1, max_size=10)
        )
        drift = timedelta(milliseconds=data.draw(st.integers(-4000, 4000)))
        told = sync(client, [waiting[key] for key in chosen], drift)
        first_said |= _moments(told, first_said)
        if data.draw(st.booleans()):
            continue  # the reply was lost: the phone keeps everything
        for key in told:
            del waiting[key]
    sync(client, items, timedelta(seconds=9))
    kinds = {"eaten", "value adopted"}
    for item in items:
        key = item["key"]
        places = (
            Entry.objects.filter(key=key).count(),
            TrayItem.objects.filter(key=key).count(),
        )
        assert places == ((0, 1) if item["kind"] in kinds else (1, 0)), item
    for key, moment in first_said.items():
        assert Entry.objects.get(key=key).happened_at == moment
    for job in JOBS:
        assert Mark.objects.get(key=marks[job]["101"]).standing == "gone"


def _moments(told: dict[str, str], known: dict[str, object]) -> dict[str, object]:
    """When each thing happened by the sending that was taken in first."""
    new = [k for k, word in told.items() if word in ("recorded", "already")]
    found = Entry.objects.filter(key__in=set(new) - known.keys())
    return {str(entry.key): entry.happened_at for entry in found}
