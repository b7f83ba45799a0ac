"""What was found, in three taps: seen, leaning, gone, set by others, with photos."""

from __future__ import annotations

import re
import uuid

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile

from stakes.models import Mark
from stakes.record import entries
from tests.jobs.cast import Cast
from tests.pages.crew import Field, photo, put, text


def test_seen_undisturbed_is_one_tap_on_the_marks_page(ready: Field) -> None:
    put(ready, "101")
    page = text(ready.get(f"marks/{ready.marks['101']}/"))
    assert '<button class="main">Seen, looks undisturbed</button>' in page
    done = ready.post("found/undisturbed/", mark=str(ready.marks["101"]))
    assert done.status_code == 303
    assert entries(ready.record)[-1].kind == "seen"


def test_several_marks_are_gone_at_once_with_a_cause_and_a_photo(
    ready: Field, cast: Cast, signed_in
) -> None:
    put(ready, "101", "102")
    marks = [str(ready.marks[m]) for m in ("101", "102")]
    chosen = ready.client.get(ready.url("several/"), {"what": "gone", "mark": marks})
    assert chosen.status_code == 303
    assert "excavation" in text(ready.client.get(chosen.url))
    done = ready.post(
        "found/gone/",
        mark=marks,
        cause="excavation",
        disputed="on",
        cause_by="Operator",
        photos=[photo()],
    )
    assert done.status_code == 303, text(done)
    fact = entries(ready.record, kinds=["destroyed"])[-1].fact
    assert len(fact.listed) == 2
    assert (fact.cause, fact.cause_by, fact.disputed) == (
        "excavation",
        "Operator",
        True,
    )
    shown = ready.get(f"photos/{fact.photos[0]}/small.jpg")
    assert shown["Content-Type"] == "image/jpeg"
    assert "Entry" in text(ready.get(f"photos/{fact.photos[0]}/"))
    page = text(ready.get(f"marks/{ready.marks['101']}/"))
    assert f"photos/{fact.photos[0]}/small.jpg" in page
    number, sha256 = ready.record.number, fact.photos[0]
    for who, status in ((cast.auditor, 200), (cast.contractor, 403)):
        seen = signed_in(who).get(f"/jobs/{number}/photos/{sha256}/large.jpg")
        assert seen.status_code == status


def test_a_photo_survives_a_form_that_came_back(ready: Field) -> None:
    put(ready, "101")
    mark = str(ready.marks["101"])
    back = ready.post("found/gone/", mark=mark, at="soon", photos=[photo()])
    assert back.status_code == 422
    kept = re.search(r'name="kept" value="([^"]+)"', back.content.decode())
    assert kept is not None
    ready.post("found/gone/", mark=mark, kept=kept.group(1))
    assert entries(ready.record, kinds=["destroyed"])[-1].fact.photos
    put_back = ready.post(
        "found/hit/", mark=mark, components="p", kept="0" * 64 + ":forged"
    )
    assert put_back.status_code == 303
    assert not entries(ready.record, kinds=["seen"])[-1].fact.photos


def test_what_is_no_photo_is_refused_and_a_photo_of_another_job_is_not_shown(
    ready: Field,
) -> None:
    put(ready, "101")
    bad = SimpleUploadedFile("virus.jpg", b"MZ" * 500, "image/jpeg")
    answer = ready.post("found/hit/", mark=str(ready.marks["101"]), photos=[bad])
    assert answer.status_code == 422
    assert "no JPEG, PNG or WebP" in text(answer)
    assert ready.get(f"photos/{'a' * 64}/").status_code == 404
    assert ready.get("photos/nonsense/large.jpg").status_code == 404


@pytest.mark.parametrize("what", ["lath-down", "leaning", "hit", "put-back"])
def test_every_condition_has_its_page_and_its_entry(ready: Field, what: str) -> None:
    put(ready, "101")
    mark = str(ready.marks["101"])
    assert ready.get(f"found/{what}/", mark=mark).status_code == 200
    done = ready.post(
        f"found/{what}/",
        mark=mark,
        components="p",
        cause="other",
        other_cause="truck",
        told_by="Mason",
    )
    assert done.status_code == 303, text(done)
    assert entries(ready.record)[-1].known == "told"


def test_marks_that_are_none_lead_back_and_nothing_is_said(ready: Field) -> None:
    head = ready.head
    assert ready.get("found/gone/").status_code == 303
    assert ready.get("found/gone/", mark="x").status_code == 303
    assert ready.post("found/gone/", mark=str(uuid.uuid4())).status_code == 303
    assert ready.get("found/nonsense/").status_code == 404
    assert ready.get(f"marks/{uuid.uuid4()}/").status_code == 404
    assert ready.get(f"setups/{uuid.uuid4()}/").status_code == 404
    assert ready.get(f"checks/{uuid.uuid4()}/").status_code == 404
    assert ready.head == head


def test_a_foreign_mark_is_recorded_from_its_page(ready: Field) -> None:
    done = ready.post("foreign/", label="F1", set_by="Mason", northing="1", easting="2")
    assert done.status_code == 303
    assert Mark.objects.get(record=ready.record, label="F1").purpose == "foreign"
    again = ready.post("foreign/", label="F1")
    assert "a mark F1 already" in text(again)
