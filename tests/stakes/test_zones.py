"""Zones and lines from lists of corners."""

from __future__ import annotations

import uuid

import pytest

from stakes.actions.zones import draw_zone, read_corners, remove_zone
from stakes.models import Entry, Zone
from stakes.record import Refused
from tests.builders import SURVEYOR, make_record, plan, row

pytestmark = pytest.mark.django_db

SQUARE = "1000, 2000\n1000, 2040\n1060, 2040\n1060, 2000"


def drawn(record, text: str = SQUARE, **more):
    said = {"name": "Clinic", "sort": "footprint", "by": SURVEYOR, **more}
    return draw_zone(record=record, corners=read_corners(text, record), **said)


def test_a_footprint_is_drawn_from_its_corners() -> None:
    record = make_record()
    drawn(record, SQUARE + "\n1000, 2000")
    zone = Zone.objects.get()
    assert len(zone.corners_m) == 4
    assert zone.corners_m[1] == pytest.approx([2040 * 0.3048, 1000 * 0.3048])


def test_a_corner_may_be_the_number_of_a_mark() -> None:
    record = make_record()
    plan(record, row("P1", "1000", "2000"))
    drawn(record, "P1\n1000 2040\n1060;2040")
    assert Zone.objects.get().corners_m[0] == pytest.approx([609.6, 304.8])


def test_drawing_again_replaces_and_taking_off_removes() -> None:
    record = make_record()
    zone = drawn(record)
    drawn(record, "1,1\n1,9\n9,9", zone=zone, name="Clinic, wing")
    assert Zone.objects.get().name == "Clinic, wing"
    remove_zone(record=record, zone=zone, by=SURVEYOR)
    assert not Zone.objects.exists()
    assert Entry.objects.filter(kind="zone drawn").count() == 3


def test_a_form_sent_twice_draws_once() -> None:
    record, key = make_record(), uuid.uuid4()
    assert drawn(record, key=key) == drawn(record, key=key)
    assert Entry.objects.count() == 1


@pytest.mark.parametrize(
    "text, more, words",
    [
        ("1,1\n9,9\n1,9\n9,1", {}, "crosses itself"),
        ("1,1\n1,9", {}, "2 different corners"),
        ("1,1\n1,1\n1,1", {}, "1 different corners"),
        ("1,1\n1,9\n1,5", {}, "no"),
        ("1,1\n1,9,4\n2,2", {}, "Line 2 has 3 values"),
        ("1,1\nx,9\n2,2", {}, "Line 2 cannot be read"),
        ("1,1\nP9\n2,2", {}, "Line 2: there is no mark"),
        ("1,1\n" * 2001, {}, "2001 corners"),
        (SQUARE, {"sort": "moat"}, "no sort of zone"),
        (SQUARE, {"name": " "}, "no name"),
        (SQUARE, {"zone": uuid.uuid4()}, "no such zone"),
        ("", {}, "0 different corners"),
    ],
)
def test_what_is_no_shape_gets_a_sentence(text, more, words) -> None:
    record = make_record()
    with pytest.raises(Refused, match=words):
        drawn(record, text, **more)
    assert not Entry.objects.exists()
