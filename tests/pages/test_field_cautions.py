"""Locates, hazards and gates on the crew's pages."""

from __future__ import annotations

import re

from django.utils import timezone

from tests.jobs.cast import Cast
from tests.pages.crew import Field, setup_of, text


def test_a_ticket_is_recorded_and_amended_when_owners_answer(field: Field) -> None:
    now = timezone.now()
    sent = {
        "number": "T-9",
        "whose": "Contractor",
        "area": "whole site",
        "valid_from": f"{now - timezone.timedelta(days=1):%Y-%m-%dT%H:%M}",
        "valid_to": f"{now + timezone.timedelta(days=5):%Y-%m-%dT%H:%M}",
        "private_lines": "none there",
        "owner1": "Gas",
        "answer1": "no answer yet",
    }
    assert field.post("locates/record/", **sent).status_code == 303
    page = text(field.get("locates/"))
    assert "Gas did not answer yet" in page
    [ticket] = re.findall(r"/locates/([0-9a-f-]{36})/", page)
    assert 'value="T-9"' in text(field.get(f"locates/{ticket}/"))
    assert field.post(f"locates/{ticket}/", **{**sent, "answer1": "marked"})
    assert "Valid now" in text(field.get("locates/"))
    wrong = field.post("locates/record/", **{**sent, "valid_to": "2020-01-01T10:00"})
    assert "expire before it is valid" in text(wrong)


def test_a_hazard_is_read_before_a_stake_is_set(ready: Field) -> None:
    ready.post("hazards/", sort="traffic", words="haul road crosses")
    tail = f"marks/{ready.marks['101']}/set/"
    page = text(ready.get(tail))
    assert "haul road crosses" in page
    assert "23 CFR 634" in page
    sent = {"setup": setup_of(ready), "holds": "hub and tack"}
    refused = ready.post(tail, **sent)
    assert "caution was not ticked as read" in text(refused)
    assert ready.post(tail, **sent, acknowledged="traffic").status_code == 303
    [hazard] = re.findall(
        r"/hazards/([0-9a-f-]{36})/gone/", text(ready.get("hazards/"))
    )
    assert ready.post(f"hazards/{hazard}/gone/", words="closed").status_code == 303
    assert "None is flagged" in text(ready.get("hazards/"))


def test_the_surveyor_accepts_what_is_held(field: Field, cast: Cast, signed_in) -> None:
    tail = f"marks/{field.marks['101']}/set/"
    field.post(tail, holds="paint mark", setup="", done_already="on")
    assert field.get("held/").status_code == 403
    field.client = signed_in(cast.surveyor)
    assert "no setup" in text(field.get("held/")).lower()
    bare = field.post("held/", mark=str(field.marks["101"]))
    assert bare.status_code == 422
    done = field.post("held/", mark=str(field.marks["101"]), reason="shot again")
    assert done.status_code == 303
    assert "No stake is held" in text(field.get("held/"))
