"""The tray: what waits keeps its time, and is settled once, by the office or by itself."""

from __future__ import annotations

import json
import uuid
from datetime import timedelta

import pytest
from django.test import Client
from django.utils import timezone

from jobs.actions.seats import give_seat
from jobs.models import TrayItem
from jobs.rights import Role
from stakes.models import Entry, Mark
from tests.fieldwork import field_job
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    record, marks = field_job(job.record, at=timezone.now() - timedelta(hours=1))
    return cast, record, marks


def kept(kind: str = "seen", minutes: float = 0, **more: object) -> dict:
    at = timezone.now() + timedelta(minutes=minutes)
    said = {"key": str(uuid.uuid4()), "job": "2614", "kind": kind}
    return said | {"device_time": at.isoformat()} | more


def client_of(person) -> Client:
    client = Client()
    client.force_login(person)
    return client


def sync(person, *items: object, clock: timedelta = timedelta(0)) -> dict:
    sent_at = timezone.now() + clock
    body = {"sent_at": sent_at.isoformat(), "device": "phone 7", "items": items}
    answer = client_of(person).post(
        "/api/phone/", json.dumps(body), content_type="application/json"
    )
    assert answer.status_code == 200, answer.content
    return answer.json()


def undisturbed(mark: uuid.UUID) -> dict[str, object]:
    return {"listed": [str(mark)], "condition": "undisturbed"}


def test_what_waited_still_happened_when_it_happened(site) -> None:
    cast, _, marks = site
    fast = timedelta(hours=3)
    item = kept(minutes=180, job="9999", facts=undisturbed(marks["101"]))
    sync(cast.crew, item, clock=fast)
    waiting = TrayItem.objects.get()
    office = client_of(cast.manager)
    office.post(f"/tray/{waiting.pk}/admit/", {"job": "2614"})
    entry = Entry.objects.get(key=item["key"])
    assert abs(entry.happened_at - timezone.now()) < timedelta(minutes=2)
    body = json.loads(entry.body)
    assert body["person"]["name"] == cast.crew.name
    assert (body["admitted_by"], body["device"]) == (cast.manager.name, "phone 7")
    waiting.refresh_from_db()
    assert f"entry {entry.number}" in waiting.outcome
    assert sync(cast.crew, item | {"job": "2614"})["outcomes"][0]["outcome"] == (
        "already"
    )


def test_the_office_admits_what_somebody_without_a_seat_saw(site) -> None:
    cast, _, marks = site
    item = kept(facts=undisturbed(marks["101"]))
    told = sync(cast.outsider, item)
    assert told["outcomes"][0]["code"] == "no seat"
    assert told["heads"] == {}
    client_of(cast.surveyor).post(f"/tray/{TrayItem.objects.get().pk}/admit/")
    assert Entry.objects.get(key=item["key"]).name == cast.outsider.name


def test_the_office_lends_nobody_a_right_it_has_not(site) -> None:
    cast, _, marks = site
    facts = {"mark": str(marks["CP1"]), "source": "A-1", "reason": "anew"}
    value = facts | {"elevation": {"text": "500.02", "unit": "ft"}}
    item = kept("value adopted", facts=value)
    assert sync(cast.crew, item)["outcomes"][0]["code"] == "not yours"
    waiting = TrayItem.objects.get()
    page = client_of(cast.manager).post(
        f"/tray/{waiting.pk}/admit/", {"job": "2614"}, follow=True
    )
    assert "takes the right to adopt values" in page.content.decode()
    assert not Entry.objects.filter(key=item["key"]).exists()
    client_of(cast.surveyor).post(f"/tray/{waiting.pk}/admit/", {"job": "2614"})
    assert Entry.objects.filter(key=item["key"]).exists()


def test_a_seat_given_for_that_time_lets_the_phone_send_it_itself(site) -> None:
    cast, record, marks = site
    item = kept(facts=undisturbed(marks["101"]))
    sync(cast.outsider, item)
    give_seat(
        record=record,
        person=cast.outsider,
        roles=[Role.CONTRACTOR],
        since=timezone.now() - timedelta(days=1),
        by=cast.by,
    )
    assert sync(cast.outsider, item)["outcomes"][0]["code"] == "not yours"
    item = kept(facts=undisturbed(marks["101"]))
    sync(cast.crew, item | {"device_time": "2020-01-01T00:00:00Z"})
    again = sync(cast.crew, item)["outcomes"][0]
    assert again["outcome"] == "recorded"
    settled = TrayItem.objects.get(person=cast.crew)
    assert settled.outcome == f"entry {again['number']}"


def test_what_is_set_aside_is_told_to_the_phone_and_kept(site) -> None:
    cast, _, marks = site
    item = kept(job="9999", facts=undisturbed(marks["101"]))
    sync(cast.crew, item)
    waiting = TrayItem.objects.get()
    address = f"/tray/{waiting.pk}/aside/"
    office = client_of(cast.manager)
    assert office.post(address, {"reason": ""}).status_code == 422
    office.post(address, {"reason": "typed the wrong job"})
    assert office.post(address, {"reason": "twice"}).status_code == 404
    [told] = sync(cast.crew, item)["outcomes"]
    assert (told["outcome"], told["what"]) == ("set aside", "typed the wrong job")
    assert json.loads(TrayItem.objects.get().sent)["job"] == "9999"


def test_what_was_made_by_another_person_on_the_phone_waits(site) -> None:
    cast, _, marks = site
    made = kept(facts=undisturbed(marks["101"]), author=str(cast.crew.pk))
    [told] = sync(cast.party_chief, made)["outcomes"]
    assert (told["outcome"], told["code"]) == ("waiting", "other author")
    client_of(cast.manager).post(f"/tray/{TrayItem.objects.get().pk}/admit/")
    assert Entry.objects.get(key=made["key"]).name == cast.crew.name
    own = kept(facts=undisturbed(marks["102"]), author=str(cast.crew.pk))
    assert sync(cast.crew, own)["outcomes"][0]["outcome"] == "recorded"


def test_what_a_phone_kept_was_done_already_and_no_gate_refuses_it(site) -> None:
    cast, _, marks = site
    item = kept("set", facts={"mark": str(marks["101"])}, counter=7)
    first, again = (sync(cast.crew, item)["outcomes"][0] for _ in range(2))
    assert (first["outcome"], again["outcome"]) == ("recorded", "already")
    entry = Entry.objects.get(key=item["key"])
    assert entry.counter == 7
    assert "nobody" in json.loads(entry.body)["facts"]["authorised_by"]
    assert Mark.objects.get(key=marks["101"]).held or entry.body


def test_a_time_the_person_stated_is_kept_as_stated(site) -> None:
    cast, _, marks = site
    stated = (timezone.now() - timedelta(minutes=30)).isoformat()
    item = kept(facts=undisturbed(marks["101"]), happened_at=stated)
    give = {"roles": [Role.CREW], "since": timezone.now() - timedelta(days=2)}
    give_seat(record=Mark.objects.first().record, person=cast.crew, by=cast.by, **give)
    [told] = sync(cast.crew, item, clock=timedelta(hours=1))["outcomes"]
    assert told["outcome"] == "recorded", told
    entry = Entry.objects.get(key=item["key"])
    assert entry.happened_at.isoformat() == stated
    body = json.loads(entry.body)
    assert body["time_known"] == "stated by the person"
    assert body["device_time"]


def test_only_those_with_a_seat_learn_where_a_record_stands(site) -> None:
    cast, record, marks = site
    told = sync(cast.outsider, kept(facts={}), kept(job="9999"))
    assert told["heads"] == {}
    reasons = {one["what"] for one in told["outcomes"]}
    assert len(reasons) == 1
    told = sync(cast.crew, kept(facts=undisturbed(marks["101"])))
    record.refresh_from_db()
    assert told["heads"] == {"2614": record.head}


def test_a_batch_too_large_is_told_so_as_a_whole(site) -> None:
    cast, *_ = site
    body = {"sent_at": timezone.now().isoformat(), "items": [{}] * 101}
    answer = client_of(cast.crew).post(
        "/api/phone/", json.dumps(body), content_type="application/json"
    )
    assert (answer.status_code, answer.json()["code"]) == (422, "too many")
    assert not TrayItem.objects.exists()


def test_a_phone_is_told_to_sign_in_by_json_and_never_sent_elsewhere(site) -> None:
    cast, *_ = site
    answer = Client().post("/api/phone/", "{}", content_type="application/json")
    assert (answer.status_code, answer.json()["code"]) == (401, "sign in")
    strict = Client(enforce_csrf_checks=True)
    strict.force_login(cast.crew)
    answer = strict.post("/api/phone/", "{}", content_type="application/json")
    assert answer.status_code == 403
    assert "protection" in answer.json()["detail"]
