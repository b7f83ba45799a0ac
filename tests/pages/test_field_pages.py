"""The crew's pages over HTTP: what is asked, what stops, what is said after."""

from __future__ import annotations

import io
import re
import uuid
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.test import Client
from django.utils import timezone
from PIL import Image

from stakes.actions.condition import report_gone
from stakes.actions.setting import set_stake
from stakes.actions.setups import close_setup
from stakes.kinds.setting import StakeSet
from stakes.models import Check, Entry, Mark, Record, Setup, Stake
from stakes.queries.state import job_state
from stakes.record import entries
from tests.builders import CHIEF, measured
from tests.fieldwork import Marks, field_job, locate, station
from tests.jobs.cast import Cast


@dataclass
class Field:
    """A job in the field and a client signed in as its party chief."""

    record: Record
    marks: Marks
    client: Client

    def url(self, tail: str = "") -> str:
        return f"/field/{self.record.number}/{tail}"

    def get(self, tail: str = "", **query: Any):
        return self.client.get(self.url(tail), query)

    def post(self, tail: str, **data: Any):
        return self.client.post(self.url(tail), {"key": str(uuid.uuid4()), **data})

    @property
    def head(self) -> int:
        return Record.objects.get(pk=self.record.pk).head

    def stake(self, label: str):
        return job_state(self.record).marks[self.marks[label]].stake


@pytest.fixture
def field(job, cast: Cast, signed_in: Callable[..., Client]) -> Field:
    hour_ago = timezone.now() - timezone.timedelta(hours=1)
    record, marks = field_job(job.record, at=hour_ago)
    return Field(record, marks, signed_in(cast.party_chief))


@pytest.fixture
def ready(field: Field) -> Field:
    """With a valid ticket and a setup just opened."""
    now = timezone.now()
    locate(
        field.record,
        at=now - timezone.timedelta(minutes=30),
        valid_to=now + timezone.timedelta(days=5),
    )
    station(field.record, field.marks, at=now - timezone.timedelta(minutes=10))
    return field


def text(response) -> str:
    return re.sub(r"\s+", " ", response.content.decode())


def setup_of(field: Field) -> str:
    return str(Setup.objects.get(record=field.record).key)


def test_home_lists_marks_by_what_needs_doing(ready: Field) -> None:
    page = text(ready.get())
    assert "To set" in page
    assert ">101<" in page
    assert "Control" in page
    assert "Total station on a mark" in page


def test_home_finds_a_mark_by_its_label(ready: Field) -> None:
    found = ready.get(q="101")
    assert found.status_code == 303
    assert found.url.endswith(f"marks/{ready.marks['101']}/")
    assert "No mark fits" in text(ready.get(q="zzz"))
    assert ">102<" in text(ready.get(q="10"))


def test_the_visit_is_kept_in_every_link(ready: Field) -> None:
    visit = uuid.uuid4()
    assert f"visit={visit}" not in text(ready.get(visit=str(visit)))
    station(ready.record, ready.marks, occasion=visit, at=timezone.now())
    page = text(ready.get(visit=str(visit)))
    assert f"marks/{ready.marks['101']}/?visit={visit}" in page


def test_a_stake_is_set_from_the_open_setup_and_its_label_shown(ready: Field) -> None:
    tail = f"marks/{ready.marks['101']}/set/"
    assert ready.get(tail).status_code == 200
    done = ready.post(
        tail,
        setup=setup_of(ready),
        holds="hub and tack",
        elevation="499.57",
        off_north="0.01",
        off_north_side="south",
        off_east="0.005",
        off_east_side="east",
    )
    assert done.status_code == 303, text(done)
    page = text(ready.client.get(done.url))
    assert "C 1.07 ft to top of footing" in page
    assert "LEVEL toward wall line A" in page
    assert "0.010 south, 0.005 east" in page
    fact = entries(ready.record, kinds=["set"])[-1].fact
    assert isinstance(fact, StakeSet)
    assert (fact.off_north.text, fact.northing.text) == ("-0.01", "1079.99")


def test_no_stake_is_driven_without_a_locate_and_the_page_says_what_to_do(
    field: Field,
) -> None:
    station(field.record, field.marks, at=timezone.now())
    tail = f"marks/{field.marks['101']}/set/"
    page = text(field.get(tail))
    assert "No valid utility locate" in page
    assert "1926.651(b)" in page
    assert "competent person on site" in page
    assert "Go on, and have it held" not in page  # the one hard stop
    stopped = field.post(
        tail, setup=setup_of(field), holds="hub and tack", authorised_by="S", how="x"
    )
    assert stopped.status_code == 409
    assert not Stake.objects.filter(set_number__isnull=False).exists()


def test_a_mark_may_be_painted_without_a_locate(field: Field) -> None:
    station(field.record, field.marks, at=timezone.now())
    tail = f"marks/{field.marks['101']}/set/"
    assert "paint mark" in text(field.get(tail, surface="1"))
    done = field.post(tail, setup=setup_of(field), holds="paint mark", surface="True")
    assert done.status_code == 303


def test_what_was_done_already_is_recorded_past_the_hard_stop_and_held(
    field: Field,
) -> None:
    tail = f"marks/{field.marks['101']}/set/"
    asked = field.post(tail, gate_answer="yes", done_already="on")
    assert "It will be held" in text(asked)
    assert 'name="done_already" value="on"' in text(asked) or (
        'name="done_already" value="True"' in text(asked)
    )
    done = field.post(tail, holds="hub and tack", setup="", done_already="True")
    assert done.status_code == 303
    assert field.stake("101").held


def test_a_party_chief_goes_on_held_naming_who_and_how(field: Field) -> None:
    tail = f"marks/{field.marks['101']}/set/"
    stopped = field.post(tail, holds="paint mark", setup="", elevation="499.5")
    assert stopped.status_code == 409
    page = text(stopped)
    assert "No setup" in page
    assert 'name="elevation" value="499.5"' in page  # nothing typed is lost
    back = field.post(tail, holds="paint mark", setup="", elevation="499.5", mend="yes")
    assert back.status_code == 200
    assert 'value="499.5"' in text(back)
    assert field.stake("101") is None
    half = field.post(tail, holds="paint mark", setup="", authorised_by="Surveyor")
    assert half.status_code == 409
    assert "Say both who authorised it and how" in text(half)
    done = field.post(
        tail, holds="paint mark", setup="", authorised_by="Surveyor", how="telephone"
    )
    assert done.status_code == 303
    assert field.stake("101").held
    fact = entries(field.record, kinds=["set"])[-1].fact
    assert fact.authorised_by == "Surveyor, telephone"


def test_a_crew_member_cannot_authorise_themselves(
    field: Field, cast: Cast, signed_in
) -> None:
    field.client = signed_in(cast.crew)
    tail = f"marks/{field.marks['101']}/set/"
    sent = field.post(
        tail, holds="paint mark", setup="", authorised_by="me", how="myself"
    )
    assert sent.status_code == 409
    assert "A party chief may go on" in text(sent)
    done = field.post(tail, holds="paint mark", setup="", done_already="on")
    assert done.status_code == 303


def test_a_double_tap_sets_one_stake_and_back_with_other_numbers_is_told(
    ready: Field,
) -> None:
    tail = f"marks/{ready.marks['101']}/set/"
    sent = {
        "key": str(uuid.uuid4()),
        "setup": setup_of(ready),
        "holds": "hub and tack",
        "elevation": "499.57",
    }
    head = ready.head
    assert ready.post(tail, **sent).status_code == 303
    assert ready.post(tail, **sent).status_code == 303
    assert ready.head == head + 1
    changed = ready.post(tail, **{**sent, "elevation": "499.60", "old": "pulled"})
    assert changed.status_code == 422
    assert "sent before, with other words" in text(changed)
    assert ready.head == head + 1


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"elevation": "abc"}, "cannot be read as a length"),
        ({"elevation": "NaN"}, "cannot be read as a length"),
        ({"elevation": "inf"}, "cannot be read as a length"),
        ({"elevation": "1e9"}, "exponent"),
        ({"elevation": "9" * 39}, "larger than any on Earth"),
        ({"elevation": "1,234.5"}, "comma"),
        ({"elevation": "9" * 500}, "at most 40 characters"),
        ({"northing": "1080", "easting": ""}, "Only one of northing and easting"),
        ({"off_north": "5", "off_east": "0"}, "off the design"),
        ({"holds": "other"}, "Say what holds it"),
        ({"holds": "<script>alert(1)</script>"}, "Select a valid choice"),
        ({"setup": "not-a-setup"}, "Select a valid choice"),
        ({"setup": str(uuid.uuid4())}, "Select a valid choice"),
        ({"at": "yesterday"}, "no date and time"),
        ({"at": "2999-01-01T10:00"}, "lies in the future"),
        ({"remark": "x" * 2500}, "at most 2000 characters"),
        ({"key": "not-a-key"}, "valid UUID"),
    ],
)
def test_odd_input_gets_a_sentence_and_the_record_stays(
    ready: Field, sent: dict[str, str], sentence: str
) -> None:
    head = ready.head
    answer = ready.post(
        f"marks/{ready.marks['101']}/set/",
        **{"setup": setup_of(ready), "holds": "hub and tack", **sent},
    )
    assert answer.status_code == 422
    assert sentence in text(answer)
    assert "<script>alert" not in text(answer)
    assert ready.head == head


def test_numbers_far_off_are_asked_about_and_then_kept(ready: Field) -> None:
    tail = f"marks/{ready.marks['101']}/set/"
    sent = {
        "setup": setup_of(ready),
        "holds": "hub and tack",
        "off_north": "0.5",
        "off_east": "0",
    }
    assert "These numbers are what was measured" not in text(ready.get(tail))
    asked = ready.post(tail, **sent)
    assert "These numbers are what was measured" in text(asked)
    assert ready.post(tail, **sent, far="on").status_code == 303


def test_paper_is_keyed_in_for_a_setup_that_was_closed_since(ready: Field) -> None:
    setup, now = setup_of(ready), timezone.now()
    tail = f"marks/{ready.marks['101']}/set/"
    close_setup(record=ready.record, setup=uuid.UUID(setup), by=CHIEF, at=now)
    zone = ready.record.time_zone
    earlier = (now - timezone.timedelta(minutes=5)).astimezone(zone)
    sent = {"setup": setup, "holds": "hub and tack"}
    assert "setup closed" in text(ready.post(tail, **sent)).lower()
    done = ready.post(tail, **sent, at=f"{earlier:%Y-%m-%dT%H:%M}")
    assert done.status_code == 303, text(done)
    assert not ready.stake("101").held


def test_a_visit_of_another_job_is_not_named(ready: Field) -> None:
    ready.post(
        f"marks/{ready.marks['101']}/set/",
        setup=setup_of(ready),
        holds="hub and tack",
        visit=str(uuid.uuid4()),
    )
    assert entries(ready.record, kinds=["set"])[-1].fact.occasion is None


def test_an_empty_form_is_taken_as_sent(ready: Field) -> None:
    answer = ready.client.post(ready.url(f"marks/{ready.marks['101']}/set/"))
    assert answer.status_code == 422


def put(field: Field, *labels: str) -> None:
    for label in labels:
        set_stake(
            record=field.record,
            mark=field.marks[label],
            setup=uuid.UUID(setup_of(field)),
            elevation=measured("499.57"),
            by=CHIEF,
        )


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


def photo() -> SimpleUploadedFile:
    out = io.BytesIO()
    Image.new("RGB", (60, 40), (9, 90, 40)).save(out, "JPEG")
    return SimpleUploadedFile("lost.jpg", out.getvalue(), "image/jpeg")


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


def test_a_station_is_opened_checked_and_closed_by_forms(field: Field) -> None:
    cp = {name: str(key) for name, key in field.marks.items()}
    done = field.post(
        "setups/open/station/",
        occupied=cp["CP1"],
        oriented_on=cp["CP2"],
        backsight="200.003",
        serial="30417",
        instrument_height="5.12",
        prism_constant="-30",
        check1_mark="cp3",
        check1_by="distance",
        check1_measured="282.84",
        check2_mark="CP3",
        check2_by="elevation",
        check2_measured="500.00",
    )
    assert done.status_code == 303, text(done)
    page = text(field.client.get(done.url))
    assert "282.843 ft" in page
    assert "pass" in page
    assert "this proves nothing of the setup" in page
    setup = setup_of(field)
    again = field.post(
        f"setups/{setup}/re-check/",
        check1_mark="CP3",
        check1_by="direction",
        check1_angle="45-00-01",
    )
    assert again.status_code == 303, text(again)
    closed = field.post(
        f"setups/{setup}/close/",
        check1_mark="CP3",
        check1_by="position",
        check1_northing="1200.002",
        check1_easting="2200.001",
    )
    assert closed.status_code == 303, text(closed)
    assert Setup.objects.get().closing == "pass"
    assert "this setup" not in text(field.get("setups/")).lower()


def test_a_setup_without_a_check_is_stopped_and_nothing_typed_is_lost(
    field: Field,
) -> None:
    sent = {
        "occupied": str(field.marks["CP1"]),
        "oriented_on": str(field.marks["CP2"]),
        "serial": "30417",
    }
    stopped = field.post("setups/open/station/", **sent)
    assert stopped.status_code == 409
    assert "No opening check" in text(stopped)
    assert 'name="serial" value="30417"' in text(stopped)
    done = field.post(
        "setups/open/station/", **sent, authorised_by="Surveyor", how="telephone"
    )
    assert done.status_code == 303
    assert "Opened past a gate" in text(field.client.get(done.url))


SETUPS: dict[str, dict[str, str]] = {
    "satellite": {
        "known1": "CP1",
        "fix": "network, fixed",
        "residuals": "CP1 0.01\nCP2 0.01",
        "check1_mark": "CP4",
        "check1_by": "position",
        "check1_northing": "1000.00",
        "check1_easting": "2200.00",
    },
    "level": {"benchmark": "BM1", "check1_mark": "BM2", "check1_measured": "503.25"},
    "laser": {"benchmark": "BM1", "check1_mark": "BM2", "check1_measured": "503.25"},
    "tape": {"held1": "CP1", "check1_mark": "CP2", "check1_measured": "200.00"},
    "string": {"held1": "CP1", "held2": "CP2"},
    "free": {
        "sight1_mark": "CP1",
        "sight1_distance": "141.421",
        "sight1_direction": "225-00-00",
        "sight2_mark": "CP3",
        "sight2_distance": "141.421",
        "sight2_direction": "45-00-00",
        "check1_mark": "CP4",
        "check1_by": "distance",
        "check1_measured": "141.42",
    },
}
CHOSEN = ("known1", "benchmark", "sight1_mark", "sight2_mark")


@pytest.mark.parametrize("sort", SETUPS)
def test_each_sort_of_setup_has_its_form(field: Field, sort: str) -> None:
    assert field.get(f"setups/open/{sort}/").status_code == 200
    sent = {
        name: str(field.marks[value]) if name in CHOSEN else value
        for name, value in SETUPS[sort].items()
    }
    done = field.post(f"setups/open/{sort}/", **sent)
    assert done.status_code == 303, text(done)
    assert field.client.get(done.url).status_code == 200


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"occupied": ""}, "This field is required"),
        ({"occupied": "junk"}, "Select a valid choice"),
        ({"check1_mark": "CP99"}, "There is no mark CP99 on this job"),
        ({"check1_mark": ""}, "Say to which mark this was measured"),
        ({"check1_measured": "12..3"}, "more than one decimal mark"),
        ({"check1_by": "direction", "check1_angle": "45.1210"}, "45.1210"),
        ({"check1_by": "position"}, "nothing was measured"),
        ({"check1_by": "distance", "check1_measured": ""}, "nothing was measured"),
        ({"prism_constant": "3 ft"}, "millimetres"),
        ({"calibrated_on": "x" * 90}, "at most 40 characters"),
    ],
)
def test_odd_input_to_a_setup_gets_a_sentence(
    field: Field, sent: dict[str, str], sentence: str
) -> None:
    head = field.head
    given = {
        "occupied": str(field.marks["CP1"]),
        "oriented_on": str(field.marks["CP2"]),
        "check1_mark": "CP3",
        "check1_by": "distance",
        "check1_measured": "282.84",
        **sent,
    }
    answer = field.post("setups/open/station/", **given)
    assert answer.status_code == 422
    assert sentence in text(answer)
    assert field.head == head


CHECKS: dict[str, dict[str, str]] = {
    "distance": {"mark1": "101", "mark2": "102", "measured": "40.005"},
    "diagonal": {"mark1": "101", "mark2": "103", "measured": "72.11"},
    "angle": {"mark1": "101", "mark2": "102", "mark3": "104", "angle": "90-00-05"},
    "position": {"mark1": "101", "northing": "1080.01", "easting": "2080.00"},
    "elevation": {"mark1": "101", "measured": "499.575"},
    "line": {"mark1": "102", "mark2": "101", "mark3": "CP2", "measured": "0.0"},
    "fit": {
        "mark1": "101",
        "measured": "25.00",
        "by_sheet": "25.01",
        "against": "curb, C-3",
        "existing": "yes",
    },
}


@pytest.mark.parametrize("sort", CHECKS)
def test_each_sort_of_check_is_made_and_explains_itself(
    ready: Field, sort: str
) -> None:
    put(ready, "101", "102", "103", "104")
    assert ready.get("checks/", mark=str(ready.marks["101"])).status_code == 200
    assert ready.get(f"checks/make/{sort}/").status_code == 200
    done = ready.post(f"checks/make/{sort}/", **CHECKS[sort])
    assert done.status_code == 303, text(done)
    page = text(ready.client.get(done.url))
    for word in ("Tolerance", "Uncertainty, 95 %", "Independence", "It cannot see"):
        assert word in page
    assert Check.objects.count() == 1


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"mark2": "nobody"}, "There is no mark nobody"),
        ({"mark2": "101"}, "named twice"),
        ({"measured": ""}, "This field is required"),
        ({"measured": "-nan"}, "cannot be read"),
        ({"method": "guess"}, "Select a valid choice"),
        ({"rise": "50"}, "differ more in height"),
        ({"temperature": "NaN"}, "Enter a number"),
        ({"temperature": "900"}, "less than or equal to 160"),
        ({"pull": "-3"}, "greater than or equal to 1"),
    ],
)
def test_odd_input_to_a_check_gets_a_sentence(
    ready: Field, sent: dict[str, str], sentence: str
) -> None:
    put(ready, "101", "102")
    head = ready.head
    answer = ready.post("checks/make/distance/", **{**CHECKS["distance"], **sent})
    assert answer.status_code == 422
    assert sentence in text(answer)
    assert ready.head == head


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


def test_a_gone_mark_is_listed_as_gone_and_can_be_set_again(ready: Field) -> None:
    put(ready, "101")
    report_gone(record=ready.record, marks=[ready.marks["101"]], by=CHIEF)
    assert "Gone" in text(ready.get())
    done = ready.post(
        f"marks/{ready.marks['101']}/set/",
        setup=setup_of(ready),
        holds="hub and tack",
    )
    assert done.status_code == 303, text(done)
    assert ready.stake("101").ordinal == 2


def test_the_number_of_queries_of_the_home_does_not_grow_with_marks(
    ready: Field, django_assert_max_num_queries
) -> None:
    from tests.builders import plan, row

    plan(ready.record, *(row(f"9{n:03}", "1", str(n)) for n in range(300)))
    with django_assert_max_num_queries(40):
        page = text(ready.get())
    assert "All 304" in page
    assert Entry.objects.filter(record=ready.record).exists()
