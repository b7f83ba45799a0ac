"""The offsets of a building: planned, kept as a draft, issued with their limit."""

from __future__ import annotations

import pytest

from stakes.actions.issuing import check_plan, issue_plan
from stakes.actions.layout import classify_soil, draft_layout
from stakes.actions.zones import draw_zone, read_corners
from stakes.kinds.planning import LayoutIssued
from stakes.models import Draft, Entry, Mark, Zone
from stakes.queries.layout import Asked, lay_out, soil_of
from stakes.record import Refused, reading
from tests.builders import CHIEF, SURVEYOR, make_record, measured

pytestmark = pytest.mark.django_db

RECTANGLE = "1000, 2000\n1000, 2060\n1040, 2060\n1040, 2000"


def zone(record, text: str = RECTANGLE, sort: str = "footprint", name: str = "Clinic"):
    return draw_zone(
        record=record,
        name=name,
        sort=sort,
        corners=read_corners(text, record),
        by=SURVEYOR,
    )


def asked(footprint, offset: str = "5", depth: str = "0", **more) -> Asked:
    lengths = {"step": "5", "work_space": "2", "clearance": "2"}
    return Asked(
        footprint=footprint,
        offset=measured(offset),
        depth=measured(depth),
        **{name: measured(text) for name, text in lengths.items()},
        **{"first_number": 101, **more},
    )


def test_a_rectangle_gets_two_stakes_at_each_of_four_walls() -> None:
    record = make_record()
    laid = lay_out(record, asked(zone(record)))
    assert len(laid.chosen.stakes) == 8
    assert laid.plan.offset_m == pytest.approx(5 * 0.3048)
    assert laid.label(laid.chosen.stakes[0]) == "101"
    assert laid.checks[0].first in {str(n) for n in range(101, 109)}


def test_depth_drives_the_offset_out_in_whole_steps() -> None:
    """10 ft deep at an assumed 1 1/2:1 with 2 ft to work: the limit lies 17 ft out;
    stakes stay 2 ft from it, so 19 ft rounded outward to 20."""
    record = make_record()
    laid = lay_out(record, asked(zone(record), depth="10"))
    assert laid.plan.excavation.assumed
    assert laid.plan.excavation.reach_m == pytest.approx(17 * 0.3048)
    assert laid.plan.offset_m == pytest.approx(20 * 0.3048)
    assert "not for digging" in laid.plan.excavation.caution


def test_a_classification_by_the_competent_person_moves_the_limit() -> None:
    """Type B, 1:1: 12 ft out, 14 with clearance, 15 in whole steps."""
    record = make_record()
    footprint = zone(record)
    classify_soil(
        record=record,
        footprint=footprint,
        soil="type B",
        by_whom="Superintendent",
        on="2026-03-03",
        by=CHIEF,
    )
    laid = lay_out(record, asked(footprint, depth="10"))
    assert not laid.plan.excavation.assumed
    assert laid.plan.offset_m == pytest.approx(15 * 0.3048)
    assert soil_of(record, footprint).by_whom == "Superintendent"


def test_twenty_feet_deep_asks_for_an_engineer() -> None:
    record = make_record()
    laid = lay_out(record, asked(zone(record), depth="20"))
    assert laid.plan.excavation.needs_engineer


def test_no_room_is_reported_with_what_can_be_done_instead() -> None:
    record = make_record()
    footprint = zone(record)
    zone(record, "950,2060\n950,2110\n1090,2110\n1090,2060", "haul road", "east road")
    zone(
        record, "990,1900\n990,2105\n1050,2105\n1050,1900", "property", "property line"
    )
    laid = lay_out(record, asked(footprint))
    assert laid.plan.no_room
    assert all(end.fallbacks for end in laid.plan.no_room)


def test_a_layout_kept_checked_and_issued_says_how_it_was_placed() -> None:
    record = make_record()
    footprint = zone(record)
    draft = draft_layout(
        record=record, asked=asked(footprint, depth="10"), by=CHIEF, stage="footing"
    )
    assert not Mark.objects.exists()
    check_plan(record=record, draft=draft.key, by=SURVEYOR, how="sketch by hand")
    entries = issue_plan(record=record, draft=draft.key, by=SURVEYOR)
    assert [e.kind for e in entries] == ["planned", "layout issued", "zone drawn"]
    (said,) = reading.entries(record, kinds=["layout issued"])
    assert isinstance(said.fact, LayoutIssued)
    assert said.fact.depth.text == "10"
    assert "assumed" in said.fact.soil
    assert set(said.fact.listed) == set(Mark.objects.values_list("key", flat=True))
    mark = Mark.objects.get(label="101")
    assert (mark.stage, mark.sort, mark.carries) == (
        "footing",
        "offset stake",
        "position",
    )
    limit = Zone.objects.get(sort="excavation")
    assert "not for digging" in limit.words


@pytest.mark.parametrize(
    "name, least, most",
    [("minimal", 4, 8), ("robust", 9, 16), ("pairs", 16, 16), ("frame", 4, 4)],
)
def test_other_sets_of_stakes_are_offered(name: str, least: int, most: int) -> None:
    record = make_record()
    laid = lay_out(record, asked(zone(record), stake_set=name))
    assert least <= len(laid.chosen.stakes) <= most
    labels = [laid.label(s) for s in laid.chosen.stakes]
    assert len(set(labels)) == len(labels)


def test_the_footprint_is_measured_against_its_setback() -> None:
    record = make_record()
    footprint = zone(record)
    zone(record, "990,1990\n990,2070\n1045,2070\n1045,1990", "setback", "setback")
    laid = lay_out(record, asked(footprint))
    assert laid.setback.spare_m == pytest.approx(5 * 0.3048)
    assert laid.setback.verdict == "pass"


@pytest.mark.parametrize(
    "more, words",
    [
        ({"offset": "-5"}, "offset"),
        ({"offset": "0"}, "offset"),
        ({"depth": "-1"}, "negative"),
        ({"offset": "90000000"}, "offset"),
        ({"stake_set": "golden"}, "no such set"),
    ],
)
def test_a_layout_that_cannot_be_gets_a_sentence(more, words) -> None:
    record = make_record()
    footprint = zone(record)
    before = Entry.objects.count()
    with pytest.raises(Refused, match=words):
        draft_layout(record=record, asked=asked(footprint, **more), by=CHIEF)
    assert Entry.objects.count() == before
    assert not Draft.objects.exists()


def test_a_footprint_of_another_job_is_not_planned() -> None:
    here, there = make_record("1"), make_record("2")
    with pytest.raises(Refused, match="no such footprint"):
        lay_out(here, asked(zone(there)))


@pytest.mark.parametrize(
    "more, words",
    [
        ({"soil": "mud"}, "no class"),
        ({"by_whom": " "}, "who classified"),
        ({"on": ""}, "when the soil"),
        ({"conditions": ["on fire"]}, "no class"),
    ],
)
def test_a_classification_without_its_person_or_day_is_refused(more, words) -> None:
    record = make_record()
    said = {"soil": "type B", "by_whom": "Superintendent", "on": "2026-03-03", **more}
    footprint = zone(record)
    with pytest.raises(Refused, match=words):
        classify_soil(record=record, footprint=footprint, by=CHIEF, **said)
