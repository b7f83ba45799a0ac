"""The JSON API: the same door and rights, one outcome per item, never a 500."""

from __future__ import annotations

import json
import uuid

import pytest
from django.test import Client
from django.urls import reverse
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from jobs.actions.sign_in import make_token
from stakes.models import Entry, Mark
from tests.builders import after, plan, row, set_stake
from tests.jobs.cast import make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    marks = plan(job.record, row("101", "1050.25", "2"), row("102", "5", "6"))
    set_stake(job.record, marks[0], None, after(1))
    return cast, job.record, marks


def client_of(person) -> Client:
    client = Client()
    client.force_login(person)
    return client


def send(client: Client, job: str, *items: object):
    return client.post(
        reverse("api:record", args=[job]),
        json.dumps({"items": items}),
        content_type="application/json",
    )


def gone(mark: uuid.UUID, **more: object) -> dict[str, object]:
    facts = {"listed": [str(mark)], "cause": "equipment passed"}
    return {"key": str(uuid.uuid4()), "kind": "destroyed", "facts": facts, **more}


def test_a_token_opens_the_api_and_nothing_opens_it_without_one(site) -> None:
    cast, record, _ = site
    _, text = make_token(person=cast.party_chief, name="tablet")
    address = reverse("api:marks", args=[record.number])
    assert Client().get(address).status_code in (401, 403, 404)
    answer = Client().get(address, headers={"Authorization": f"Bearer {text}"})
    assert answer.status_code == 200


def test_marks_are_told_with_exact_texts_and_at_any_moment(site) -> None:
    cast, record, _ = site
    address = reverse("api:marks", args=[record.number])
    told = client_of(cast.manager).get(address).json()
    assert told["marks"][0]["northing"] == "1050.2500"
    assert told["marks"][0]["standing"] == "standing"
    known = Entry.objects.get(kind="planned").number
    then = client_of(cast.manager).get(address, {"known": known}).json()
    assert then["marks"][0]["standing"] == "planned"


def test_each_item_has_an_outcome_of_its_own(site) -> None:
    cast, record, marks = site
    client = client_of(cast.party_chief)
    good = gone(marks[0])
    answer = send(
        client,
        record.number,
        good,
        {"key": "nonsense"},
        gone(marks[1], kind="eaten"),
        gone(marks[1], happened_at="2999-01-01T00:00:00Z"),
        gone(marks[1], kind="planned"),
        good,
        {**good, "facts": {"listed": [str(marks[1])]}},
    )
    outcomes = [o["outcome"] for o in answer.json()["outcomes"]]
    assert outcomes == [
        "recorded",
        "refused",
        "refused",
        "refused",
        "refused",
        "already",
        "conflict",
    ]
    assert Mark.objects.get(key=marks[0]).standing == "gone"
    assert Mark.objects.get(key=marks[1]).standing == "planned"


def test_what_was_sent_can_be_taken_back_with_a_reason(site) -> None:
    cast, record, marks = site
    client = client_of(cast.party_chief)
    item = gone(marks[0])
    send(client, record.number, item)
    back = {
        "key": str(uuid.uuid4()),
        "kind": "withdrawn",
        "corrects": item["key"],
        "withdraws": True,
        "why": "other stake",
    }
    [told] = send(client, record.number, back).json()["outcomes"]
    assert told["outcome"] == "recorded", told
    assert Mark.objects.get(key=marks[0]).standing == "standing"


def test_a_contractor_reads_marks_but_neither_the_record_nor_adds_to_it(site) -> None:
    cast, record, marks = site
    client = client_of(cast.contractor)
    assert client.get(reverse("api:marks", args=[record.number])).status_code == 200
    assert client.get(reverse("api:record", args=[record.number])).status_code == 403
    assert send(client, record.number, gone(marks[0])).status_code == 403


def test_the_record_is_read_on_from_where_one_was(site) -> None:
    cast, record, _ = site
    client = client_of(cast.auditor)
    address = reverse("api:record", args=[record.number])
    first = client.get(address, {"limit": 3}).json()
    assert [e["number"] for e in first["entries"]] == [1, 2, 3]
    rest = client.get(address, {"after": first["next"]}).json()
    assert rest["entries"][0]["number"] == 4
    assert rest["next"] == rest["head"]


def test_the_schema_builds_and_names_every_address(site) -> None:
    cast, *_ = site
    answer = client_of(cast.manager).get(reverse("api:schema"))
    assert answer.status_code == 200
    assert b"/api/jobs/{job}/record/" in answer.content


jsons = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=20),
    lambda inner: (
        st.lists(inner, max_size=3)
        | st.dictionaries(
            st.sampled_from(["key", "kind", "facts", "happened_at", "items", "why"]),
            inner,
            max_size=4,
        )
    ),
    max_leaves=12,
)


@settings(
    max_examples=60,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
@given(body=jsons)
def test_whatever_is_sent_gets_an_answer_and_never_breaks(site, body) -> None:
    cast, record, _ = site
    client = client_of(cast.party_chief)
    before = Entry.objects.count()
    for sent in (body, {"items": body}, {"items": [body]}):
        answer = client.post(
            reverse("api:record", args=[record.number]),
            json.dumps(sent),
            content_type="application/json",
        )
        assert answer.status_code in (200, 422)
    assert Entry.objects.count() == before


@pytest.mark.parametrize(
    "query", [{"after": "x"}, {"limit": "-1"}, {"after": "9" * 99}]
)
def test_a_number_that_is_none_is_told(site, query) -> None:
    cast, record, _ = site
    answer = client_of(cast.manager).get(
        reverse("api:marks", args=[record.number]), query
    )
    assert answer.status_code == 422
    assert "not a whole number" in answer.content.decode()
