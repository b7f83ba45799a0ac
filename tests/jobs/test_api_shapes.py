"""The OpenAPI description is valid, and every answer has the shape it promises."""

from __future__ import annotations

import json
import uuid
from datetime import timedelta
from typing import Any

import pytest
import yaml
from django.test import Client
from django.utils import timezone
from drf_spectacular.validation import validate_schema
from jsonschema import Draft202012Validator

from jobs.actions import handovers, holds, requests, visits
from jobs.models import Request
from tests.builders import after, measured, plan, row, set_stake
from tests.jobs.cast import CANARIES, CANARY_PERSON, make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db

NOT_JSON = ("/api/schema/", "marks.geojson", "marks.csv")


@pytest.fixture
def site():
    """Marks of which the masons and the builders each were given one, and asked."""
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    record = job.record
    marks = plan(record, row("101", "1050.25", "2"), row("102", "5", "6"))
    for mark in marks:
        set_stake(record, mark, None, after(1), elevation=measured("4"))
    for who, name in ((cast.contractor, "Superintendent"), (cast.mason, CANARY_PERSON)):
        ask = requests.make_request(
            record=record,
            company=who.company,
            sort="re-stake",
            listed=marks,
            words=f"asked by {name}",
            by=cast.by,
        )
        visits.plan_visit(
            record=record,
            starts_at=timezone.now(),
            tasks=[visits.task_for(Request.objects.get(key=ask))],
            by=cast.by,
        )
        handovers.hand_over(
            record=record,
            company=who.company,
            listed=marks,
            signature="signed",
            to_whom=name,
            in_spite=True,
            by=cast.by,
        )
    holds.send_hold(record=record, listed=marks, reason="re-check", by=cast.by)
    return cast, record, marks


def client_of(person) -> Client:
    client = Client()
    client.force_login(person)
    return client


def described(client: Client) -> dict[str, Any]:
    answer = client.get("/api/schema/", headers={"Accept": "application/json"})
    return yaml.safe_load(answer.content)


def addresses(schema: dict[str, Any], mark: uuid.UUID) -> dict[str, str]:
    return {
        template: template.replace("{job}", "2614").replace("{mark}", str(mark))
        for template in schema["paths"]
        if not template.endswith(NOT_JSON) and "get" in schema["paths"][template]
    }


def holds_to(schema: dict[str, Any], template: str, method: str, answer) -> None:
    told = schema["paths"][template][method]["responses"][str(answer.status_code)]
    shape = told["content"]["application/json"]["schema"]
    text = json.dumps(schema | {"allOf": [shape]}).replace("openapi", "x-openapi")
    # OpenAPI 3.0 says `nullable` where JSON Schema says a type more.
    whole = _nullable(json.loads(text))
    errors = list(Draft202012Validator(whole).iter_errors(answer.json()))
    assert not errors, f"{template}: {errors[0].message} at {list(errors[0].path)}"


def _nullable(value: Any) -> Any:
    if isinstance(value, list):
        return [_nullable(member) for member in value]
    if not isinstance(value, dict):
        return value
    inner = {name: _nullable(member) for name, member in value.items()}
    if inner.pop("nullable", False) is True:
        return {"anyOf": [inner, {"type": "null"}]}
    return inner


def test_the_description_is_valid_openapi(site) -> None:
    cast, *_ = site
    schema = described(client_of(cast.manager))
    validate_schema(schema)
    assert schema["components"]["securitySchemes"]["token"]["scheme"] == "bearer"
    posts = [p for p, verbs in schema["paths"].items() if "post" in verbs]
    assert sorted(posts) == [
        "/api/jobs/{job}/record/",
        "/api/jobs/{job}/requests/",
        "/api/phone/",
    ]


def test_every_answer_has_the_shape_that_is_described(site) -> None:
    cast, _, marks = site
    client = client_of(cast.manager)
    schema = described(client)
    found = addresses(schema, marks[0])
    assert len(found) >= 12
    for template, address in found.items():
        answer = client.get(address)
        assert answer.status_code in (200, 409), (template, answer.content)
        if answer.status_code == 200:
            holds_to(schema, template, "get", answer)


def test_what_is_appended_is_answered_in_the_shape_that_is_described(site) -> None:
    cast, _, marks = site
    client = client_of(cast.party_chief)
    schema = described(client)
    now = timezone.now()
    item = {
        "key": str(uuid.uuid4()),
        "kind": "seen",
        "facts": {"listed": [str(marks[0])], "condition": "undisturbed"},
    }
    kept = {
        **item,
        "key": str(uuid.uuid4()),
        "job": "2614",
        "device_time": (now + timedelta(minutes=1)).isoformat(),
    }
    for template, body in (
        ("/api/jobs/{job}/record/", {"items": [item, {}]}),
        ("/api/phone/", {"sent_at": now.isoformat(), "items": [kept, {}]}),
    ):
        address = template.replace("{job}", "2614")
        answer = client.post(address, json.dumps(body), content_type="application/json")
        holds_to(schema, template, "post", answer)
        assert answer.json()["outcomes"][0]["outcome"] == "recorded"


@pytest.mark.parametrize("who", ["contractor", "inspector", "subcontractor"])
def test_nothing_between_the_firm_and_another_company_is_told(site, who: str) -> None:
    cast, _, marks = site
    client = client_of(cast.everybody[who])
    pages = [f"/jobs/2614/marks/{marks[0]}/"]
    for address in [*addresses(described(client), marks[0]).values(), *pages]:
        answer = client.get(address)
        if answer.status_code == 200:
            said = answer.content.decode()
            assert [c for c in CANARIES if c in said] == [], address


def test_a_history_is_told_as_far_as_its_reader_may_read(site) -> None:
    cast, _, marks = site
    address = f"/api/jobs/2614/marks/{marks[0]}/history/"
    own = client_of(cast.contractor).get(address).json()["lines"]
    whole = client_of(cast.auditor).get(address).json()["lines"]
    assert [line["kind"] for line in own if line["kind"] == "handed over"] == [
        "handed over"
    ]
    assert len([line for line in whole if line["kind"] == "handed over"]) == 2
    assert "entry" not in own[0] and whole[0]["entry"]["kind"] == "planned"


def test_what_may_be_said_is_told_with_its_right_and_its_facts(site) -> None:
    cast, *_ = site
    told = client_of(cast.crew).get("/api/kinds/").json()["kinds"]
    by_kind = {one["kind"]: one for one in told}
    assert by_kind["set"]["right"] == "record field facts"
    assert by_kind["value adopted"]["right"] == "adopt values for control"
    assert "verdict" not in json.dumps(by_kind["checked"]["facts"])


def test_entries_of_one_kind_are_read_alone(site) -> None:
    cast, *_ = site
    client = client_of(cast.auditor)
    address = "/api/jobs/2614/record/"
    found = client.get(address, {"kind": "set"}).json()["entries"]
    assert {one["kind"] for one in found} == {"set"}
    assert client.get(address, {"kind": "eaten"}).status_code == 422
