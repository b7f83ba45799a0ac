"""Asking for stakes by JSON, taking marks away, and what the description promises."""

from __future__ import annotations

import csv
import io
import json
import uuid
from datetime import timedelta

import pytest
from django.core.management import call_command
from django.test import Client
from django.utils import timezone

from jobs.actions.requests import accept_request
from jobs.models import Request
from stakes.models import Entry
from tests.builders import after, plan, row, set_stake
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db

REQUESTS, MARKS = "/api/jobs/2614/requests/", "/api/jobs/2614/marks"


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    rows = (row("=1+1", "-50.25", "2", "7"), row("102", "5", "6"))
    marks = plan(job.record, *rows)
    set_stake(job.record, marks[0], None, after(1))
    return cast, job.record, marks


def client_of(person) -> Client:
    client = Client()
    client.force_login(person)
    return client


def ask(client: Client, **more: object):
    sent = {"key": str(uuid.uuid4()), "sort": "re-stake", "words": "the corner"}
    body = json.dumps(sent | more)
    return client.post(REQUESTS, body, content_type="application/json")


def test_a_contractor_asks_for_stakes_once_however_often_it_is_sent(site) -> None:
    cast, _, marks = site
    client, key = client_of(cast.contractor), str(uuid.uuid4())
    first = ask(client, key=key, listed=[str(marks[0])])
    again = ask(client, key=key, listed=[str(marks[0])])
    other = ask(client, key=key, listed=[str(marks[1])])
    assert [a.status_code for a in (first, again, other)] == [201, 200, 409]
    assert first.json() == again.json()
    assert other.json()["code"] == "conflict"
    made = Request.objects.get()
    assert made.company == str(cast.contractor.company_id)
    assert made.listed == [str(marks[0])]


def test_nobody_asks_in_the_name_of_another_company(site) -> None:
    cast, _, _ = site
    masons = str(cast.mason.company_id)
    refused = ask(client_of(cast.contractor), company=masons)
    assert (refused.status_code, refused.json()["code"]) == (409, "not yours")
    office = client_of(cast.manager)
    assert ask(office).json()["code"] == "no company"
    assert ask(office, company=str(cast.inspector.company_id)).status_code == 409
    assert ask(office, company=str(cast.outsider.company_id)).status_code == 409
    assert ask(office, company=masons).status_code == 201
    assert client_of(cast.contractor).get(REQUESTS).json()["requests"] == []
    assert len(client_of(cast.mason).get(REQUESTS).json()["requests"]) == 1


def test_who_pays_is_told_to_those_who_see_prices(site) -> None:
    cast, record, _ = site
    made = ask(client_of(cast.contractor)).json()["request"]
    accept_request(
        record=record, ask=uuid.UUID(made["key"]), payer="contractor", by=cast.by
    )

    def told(person) -> dict[str, object]:
        [one] = client_of(person).get(REQUESTS).json()["requests"]
        return one

    assert told(cast.contractor)["payer"] == "contractor"
    assert told(cast.crew)["state"] == "accepted"
    assert not {"payer", "cost", "record_id"} & told(cast.crew).keys()


def test_who_may_only_look_asks_for_nothing(site) -> None:
    cast, _, _ = site
    client = client_of(cast.auditor)
    assert client.get(REQUESTS).status_code == 200
    assert ask(client).status_code == 403


@pytest.mark.parametrize(
    "more",
    [
        {"key": "no key"},
        {"sort": "dig"},
        {"listed": ["101"]},
        {"words": 7},
        {"words": "\ud800"},
        {"needed_by": "soon"},
        {"price": "free"},
    ],
)
def test_what_is_no_request_is_told_so(site, more) -> None:
    cast, _, _ = site
    answer = ask(client_of(cast.contractor), **more)
    assert answer.status_code == 422
    assert "cannot be read" in answer.json()["what"]
    assert not Request.objects.exists()


def test_what_cannot_be_asked_is_refused_by_the_field(site) -> None:
    cast, _, _ = site
    client = client_of(cast.contractor)
    past = (timezone.now() - timedelta(days=2)).isoformat()
    for field, more in (
        ("listed", {"listed": [str(uuid.uuid4())]}),
        ("needed_by", {"needed_by": past}),
        ("needed_by", {"needed_by": "0001-01-01T00:00:00+10:00"}),
        ("words", {"words": ""}),
    ):
        answer = ask(client, **more)
        assert (answer.status_code, answer.json()["field"]) == (409, field)


def test_marks_are_taken_away_without_an_invented_longitude(site) -> None:
    cast, record, marks = site
    answer = client_of(cast.auditor).get(f"{MARKS}.geojson")
    assert answer.headers["Content-Type"] == "application/geo+json"
    told = json.loads(answer.content)
    assert (told["type"], told["job"]) == ("FeatureCollection", "2614")
    one = next(f for f in told["features"] if f["id"] == str(marks[0]))
    # RFC 7946, section 3.2: an unlocated feature has a null geometry.
    assert one["geometry"] is None
    place = {k: one["properties"][k] for k in ("northing", "easting", "elevation")}
    assert place == {"northing": "-50.2500", "easting": "2.0000", "elevation": "7.0000"}
    assert one["properties"]["unit"] == "ft"
    assert one["properties"]["standing"] == "standing"
    assert told["as_of_entry"] == Entry.objects.filter(record=record).count()


def test_comma_text_names_its_job_and_runs_nothing_in_a_spreadsheet(site) -> None:
    cast, record, _ = site
    text = client_of(cast.auditor).get(f"{MARKS}.csv").content.decode()
    comment, rest = text.split("\r\n", 1)
    head = Entry.objects.filter(record=record).count()
    assert comment == (
        f"# job 2614, unit ft, frame local site grid, as of entry {head}"
    )
    lines = {line["number"]: line for line in csv.DictReader(io.StringIO(rest))}
    assert lines["'=1+1"]["northing"] == "-50.2500"
    assert lines["102"]["on the ground"] == "planned"


@pytest.mark.parametrize("ending", ["csv", "geojson"])
def test_marks_are_taken_away_as_they_were_known_then(site, ending: str) -> None:
    cast, _, _ = site
    known = Entry.objects.get(kind="planned").number
    client = client_of(cast.auditor)
    then = client.get(f"{MARKS}.{ending}", {"known": known}).content.decode()
    assert "standing" not in then.replace('"standing"', "")
    assert client_of(cast.crew).get(f"{MARKS}.{ending}").status_code == 403
    assert client.get(f"{MARKS}.{ending}", {"at": "yesterday"}).status_code == 422
    assert client.get(f"{MARKS}.{ending}", {"at": "0001-01-01"}).status_code < 500


def test_the_description_is_valid_and_warns_of_nothing(tmp_path) -> None:
    file = tmp_path / "schema.yaml"
    call_command(
        "spectacular", "--validate", "--fail-on-warn", "--file", str(file), verbosity=0
    )
    assert "/api/jobs/{job}/marks.geojson:" in file.read_text()
