"""Every address of the API under anything: an answer in JSON, never a broken page."""

from __future__ import annotations

import json
from urllib.parse import quote

import pytest
from django.test import Client
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

from stakes.models import Entry
from tests.builders import after, plan, row, set_stake
from tests.jobs.cast import make_cast, make_job, seat_everybody
from tests.pages.walk import Address, addresses

pytestmark = pytest.mark.django_db

FEW = settings(
    max_examples=25,
    deadline=None,
    phases=[Phase.explicit, Phase.generate],
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)


@pytest.fixture
def site():
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    marks = plan(job.record, row("101", "1050.25", "2"))
    set_stake(job.record, marks[0], None, after(1))
    client = Client()
    client.force_login(cast.surveyor)
    return client, marks[0]


def api() -> list[Address]:
    found = [a for a in addresses() if a.name.startswith("api:")]
    assert len(found) >= 16
    return found


def path_of(address: Address, mark: object, job: str = "2614") -> str:
    from django.urls import reverse

    known = {"job": job, "mark": mark}
    names = [name for name, _ in address.parameters]
    return reverse(address.name, kwargs={name: known[name] for name in names})


words = st.text(st.characters(codec="utf-8"), max_size=12)
telling = st.sampled_from(
    [
        "",
        "0",
        "-1",
        "9" * 15,
        "9" * 40,
        "now",
        "2026-03-02",
        "0001-01-01T00:00+14:00",
        "9999-12-31T23:59-14:00",
        "2026-03-02T16:40",
        "²",
        "1e3",
        "\x00",
        "standing",
    ]
)
queries = st.dictionaries(
    st.sampled_from(
        ["at", "known", "limit", "after", "kind", "standing", "trust", "format", "lang"]
    ),
    telling | words,
    max_size=4,
)


@FEW
@given(query=queries)
def test_whatever_is_asked_of_any_address_gets_an_answer(site, query) -> None:
    client, mark = site
    for address in api():
        if "GET" in address.methods():
            answer = client.get(path_of(address, mark), query)
            assert answer.status_code in (200, 404, 406, 409, 422), address.name
            _plain(answer)


jsons = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | words,
    lambda inner: (
        st.lists(inner, max_size=3)
        | st.dictionaries(
            st.sampled_from(["items", "key", "sent_at", "sort", "listed", "company"])
            | words,
            inner,
            max_size=4,
        )
    ),
    max_leaves=10,
)


@FEW
@given(body=jsons | st.binary(max_size=40))
def test_whatever_is_sent_to_any_address_gets_an_answer(site, body) -> None:
    client, mark = site
    before = Entry.objects.count()
    raw = body if isinstance(body, bytes) else json.dumps(body)
    for address in api():
        for method in ("POST", "PUT", "PATCH", "DELETE"):
            answer = client.generic(
                method, path_of(address, mark), raw, content_type="application/json"
            )
            assert answer.status_code in (200, 403, 405, 422), (address.name, method)
            _plain(answer)
    assert Entry.objects.count() == before


@pytest.mark.parametrize("job", ["\x00", "2614\x00", "9" * 400, "é", "..", "%"])
def test_a_job_called_anything_is_one_that_is_not_there(site, job: str) -> None:
    client, mark = site
    for address in api():
        if not address.under_a_job:
            continue
        path = path_of(address, mark).replace("2614", quote(job, safe=""))
        answer = client.get(path)
        assert answer.status_code == 404, address.name


@pytest.mark.parametrize(
    "kind", ["text/plain", "multipart/form-data; boundary=x", "application/xml", ""]
)
def test_a_body_that_is_not_json_by_its_own_word_is_not_read(site, kind: str) -> None:
    client, _ = site
    for address in ("/api/phone/", "/api/jobs/2614/record/"):
        answer = client.generic("POST", address, b"{}", content_type=kind)
        assert answer.status_code in (415, 422), answer.content


def test_a_body_larger_than_may_be_sent_is_refused_by_its_size(site, settings) -> None:
    settings.DATA_UPLOAD_MAX_MEMORY_SIZE = 1000
    client, _ = site
    answer = client.post(
        "/api/phone/", json.dumps(["x" * 2000]), content_type="application/json"
    )
    assert answer.status_code == 413
    assert "send less" in answer.json()["detail"]


def _plain(answer) -> None:
    """A refusal has words a person can read: JSON, or the description's own YAML."""
    if answer.status_code < 400:
        return
    if "openapi" in answer["Content-Type"]:
        assert answer.content.startswith(b"detail:")
        return
    told = answer.json()
    assert told.get("detail") or told.get("what"), told
