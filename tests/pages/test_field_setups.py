"""Setups by their forms: each sort opened, re-checked, closed, or stopped."""

from __future__ import annotations

import pytest

from stakes.models import Setup
from tests.pages.crew import Field, setup_of, text


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
