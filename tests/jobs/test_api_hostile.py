"""Statements nobody should believe: no way in goes round a right, and none breaks."""

from __future__ import annotations

import json
import uuid
from collections.abc import Callable
from datetime import timedelta

import pytest
from django.test import Client
from django.utils import timezone
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from jobs.models import TrayItem
from stakes.models import Entry, Mark
from stakes.record.kinds import KINDS
from tests.builders import after, plan, row, set_stake
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db

PHONE, RECORD = "/api/phone/", "/api/jobs/2614/record/"


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    marks = plan(job.record, row("101", "1050.25", "2"))
    set_stake(job.record, marks[0], None, after(1))
    return cast, job.record, marks


def client_of(person) -> Client:
    client = Client()
    client.force_login(person)
    return client


def send(client: Client, address: str, body: object):
    raw = body if isinstance(body, str | bytes) else json.dumps(body)
    return client.post(address, raw, content_type="application/json")


def thing(**more: object) -> dict[str, object]:
    facts = {"listed": [str(uuid.uuid4())]}
    return {"key": str(uuid.uuid4()), "kind": "destroyed", "facts": facts, **more}


def on_phone(*items: object, **more: object) -> dict[str, object]:
    now = timezone.now().isoformat()
    rest = {"job": "2614", "device_time": now}
    kept = [rest | one if isinstance(one, dict) else one for one in items]
    return {"sent_at": now, "items": kept, **more}


def withdrawal(of: Entry) -> dict[str, object]:
    more = {"corrects": str(of.key), "withdraws": True, "why": "why not"}
    return thing(kind="withdrawn", facts={}, **more)


def told_both_ways(client: Client, item: dict[str, object]) -> list[dict[str, str]]:
    """What becomes of one item through the record's address and the phones'."""
    again = {**item, "key": str(uuid.uuid4())}
    answers = [
        send(client, RECORD, {"items": [item]}),
        send(client, PHONE, on_phone(again)),
    ]
    return [answer.json()["outcomes"][0] for answer in answers]


@pytest.mark.parametrize(
    ("kind", "code"), [("planned", "not yours"), ("job opened", "other page")]
)
def test_nobody_takes_back_what_they_could_not_have_said(site, kind, code) -> None:
    cast, _, _ = site
    target = Entry.objects.get(kind=kind)
    told = told_both_ways(client_of(cast.crew), withdrawal(target))
    assert [one["outcome"] for one in told] == ["refused", "waiting"]
    assert [one["code"] for one in told] == [code, code]
    assert not Entry.objects.filter(corrects=target.number).exists()


def test_undoing_a_withdrawal_takes_the_right_of_what_it_took_back(site) -> None:
    cast, _, _ = site
    planned = Entry.objects.get(kind="planned")
    surveyor = client_of(cast.surveyor)
    send(surveyor, RECORD, {"items": [withdrawal(planned)]})
    taken_back = Entry.objects.get(corrects=planned.number)
    told = told_both_ways(client_of(cast.crew), withdrawal(taken_back))
    assert [one["code"] for one in told] == ["not yours", "not yours"]


@pytest.mark.parametrize("withdraws", [True, False])
def test_a_withdrawal_of_nothing_is_not_recorded(site, withdraws: bool) -> None:
    cast, _, _ = site
    before = Entry.objects.count()
    item = thing(kind="withdrawn", facts={}, withdraws=withdraws, why="why not")
    told = told_both_ways(client_of(cast.party_chief), item)
    assert [one["code"] for one in told] == ["no target", "no target"]
    assert Entry.objects.count() == before


def test_an_entry_is_taken_back_once_and_the_retry_is_the_same_act(site) -> None:
    cast, _, _ = site
    client = client_of(cast.party_chief)
    target = Entry.objects.get(kind="set")
    item = withdrawal(target)
    sent = [item, item, withdrawal(target)]
    told = send(client, RECORD, {"items": sent}).json()["outcomes"]
    assert [one["outcome"] for one in told] == ["recorded", "already", "refused"]
    assert told[2]["code"] == "already corrected"


def test_a_crew_under_contract_adds_field_facts_but_reads_no_record(site) -> None:
    cast, _, marks = site
    client = client_of(cast.subcontractor)
    assert client.get(RECORD).status_code == 403
    item = thing(facts={"listed": [str(marks[0])]})
    [told] = send(client, RECORD, {"items": [item]}).json()["outcomes"]
    assert told["outcome"] == "recorded"
    assert Mark.objects.get(key=marks[0]).standing == "gone"


@pytest.mark.parametrize(
    "length",
    [
        {"text": "5", "unit": "cubit", "nm": "5"},
        {"text": "5", "unit": "ft", "nm": "many"},
        {"text": "5", "unit": "ft", "nm": "9" * 40},
    ],
)
def test_what_is_no_length_never_reaches_the_pages(site, length) -> None:
    cast, _, marks = site
    item = thing(kind="set", facts={"mark": str(marks[0]), "elevation": length})
    told = told_both_ways(client_of(cast.crew), item)
    assert [one["code"] for one in told] == ["unreadable"] * 2


def test_a_key_that_waits_already_keeps_nothing_else_out_of_the_tray(site) -> None:
    cast, _, _ = site
    item = thing(job="9999")
    other = item | {"facts": {"listed": []}}
    frame = on_phone(item)
    for who, sent in (
        (cast.crew, frame),
        (cast.crew, frame),
        (cast.party_chief, frame),
        (cast.crew, {**frame, "items": [frame["items"][0] | other]}),
    ):
        [told] = send(client_of(who), PHONE, sent).json()["outcomes"]
        assert told["outcome"] == "waiting"
    waiting = TrayItem.objects.filter(person=cast.crew).count()
    assert (TrayItem.objects.count(), waiting) == (3, 2)


def test_what_the_database_cannot_hold_waits_as_plain_words(site) -> None:
    cast, _, marks = site
    client = client_of(cast.crew)
    half, good = thing(why="\ud800"), thing(facts={"listed": [str(marks[0])]})
    told = send(client, PHONE, on_phone(half, good)).json()["outcomes"]
    assert [one["outcome"] for one in told] == ["waiting", "recorded"]
    assert "\\ud800" in TrayItem.objects.get().sent


HOSTILE: dict[str, Callable[[], object]] = {
    "half a surrogate": lambda: [thing(why="\ud800")],
    "half a surrogate as key": lambda: [{"key": "\ud800"}],
    "a surrogate field": lambda: [{"\ud800": 1}],
    "the character zero": lambda: [thing(why="\0")],
    "a huge number": lambda: [{"counter": 10**40}],
    "a year that overflows": lambda: [
        thing(happened_at="0001-01-01T00:00:00+10:00"),
        thing(device_time="9999-12-31T23:59:59-10:00"),
    ],
    "lists for words": lambda: [thing(kind=[], facts=[], why={})],
    "no items": lambda: None,
}


@pytest.mark.parametrize("name", HOSTILE)
@pytest.mark.parametrize("address", [PHONE, RECORD])
def test_hostile_items_are_answered(site, address: str, name: str) -> None:
    cast, _, _ = site
    items = HOSTILE[name]()
    before = Entry.objects.count()
    answer = send(client_of(cast.crew), address, on_phone() | {"items": items})
    assert answer.status_code in (200, 409, 422), answer.content
    assert Entry.objects.count() == before


@pytest.mark.parametrize("address", [PHONE, RECORD])
@pytest.mark.parametrize("body", ["[" * 100_000, "{", b"\xff\xfe", "1" * 5000, "NaN"])
def test_a_body_that_is_no_json_is_told_so(site, address: str, body) -> None:
    cast, _, _ = site
    answer = send(client_of(cast.crew), address, body)
    assert answer.status_code in (400, 422)
    assert "JSON" in answer.json()["detail"]


@pytest.mark.parametrize("years", [-3000, 300_000])
def test_a_clock_of_another_age_is_refused_as_a_whole(site, years: int) -> None:
    cast, _, _ = site
    year = "0001" if years < 0 else "9999"
    frame = on_phone(thing(), sent_at=f"{year}-06-01T00:00:00Z")
    answer = send(client_of(cast.crew), PHONE, frame)
    assert (answer.status_code, answer.json()["field"]) == (422, "sent_at")


words = st.text(st.characters(), max_size=8)  # halves of surrogates included
jsons = st.recursive(
    st.none() | st.booleans() | st.integers() | words,
    lambda inner: (
        st.lists(inner, max_size=3) | st.dictionaries(words, inner, max_size=3)
    ),
    max_leaves=8,
)
almost = st.fixed_dictionaries(
    {"key": st.uuids().map(str) | words, "kind": st.sampled_from(sorted(KINDS))},
    optional={
        "facts": st.dictionaries(st.sampled_from(["listed", "mark", "ask"]), jsons),
        "counter": st.integers(),
        "why": words,
        "corrects": st.uuids().map(str) | st.none(),
        "withdraws": st.booleans() | st.integers(),
        "happened_at": st.datetimes(timezones=st.timezones()).map(
            lambda at: at.isoformat()
        ),
    },
)


@settings(
    max_examples=60,
    deadline=timedelta(seconds=5),
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
@given(items=st.lists(almost | jsons, min_size=1, max_size=4))
def test_every_item_gets_an_outcome_whatever_it_is(site, items) -> None:
    cast, _, _ = site
    client = client_of(cast.surveyor)
    for address, body in (
        (RECORD, {"items": items}),
        (PHONE, on_phone(*items)),
    ):
        answer = send(client, address, body)
        assert answer.status_code == 200, answer.content
        assert len(answer.json()["outcomes"]) == len(items)
