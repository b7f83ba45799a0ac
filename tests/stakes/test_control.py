"""Values of control: adopted with source, kept for ever, and what stood on the old."""

from __future__ import annotations

import pytest

from stakes.actions.answering import answer_doubt
from stakes.actions.condition import see_marks
from stakes.actions.control import adopt_value
from stakes.models import Entry, Mark
from stakes.queries.control import control_lines, values_of
from stakes.queries.state import job_state
from stakes.record import Refused
from tests.builders import SURVEYOR, after, make_record, measured, plan, row, set_stake
from tests.fieldwork import field_job, station

pytestmark = pytest.mark.django_db


def test_every_value_a_mark_had_is_kept() -> None:
    record, marks = field_job()
    adopt_value(
        record=record,
        mark=marks["CP1"],
        northing=measured("1000.04"),
        easting=measured("2000.00"),
        source="re-measured from CP3 and CP4",
        reason="found leaning",
        position_mm=2.0,
        by=SURVEYOR,
        at=after(600),
    )
    values = values_of(record, marks["CP1"])
    assert [v.northing.text for v in values] == ["1000.00", "1000.04"]
    assert values[1].sd == "2.0 mm in plan"
    assert Mark.objects.get(key=marks["CP1"]).value == values[1].key
    assert Mark.objects.get(key=marks["CP1"]).elevation_m is not None


def test_a_new_value_lists_the_stakes_set_on_the_old_and_how_they_differ() -> None:
    """CP1 moves 0.04 north; CP2, 200 ft north of it, holds the direction: every stake
    set from CP1 moves 0.04 north, and not east."""
    record, marks = field_job()
    setup = station(record, marks)
    set_stake(record, marks["101"], setup, after(30))
    adopted = adopt_value(
        record=record,
        mark=marks["CP1"],
        northing=measured("1000.04"),
        easting=measured("2000.00"),
        source="re-measured",
        reason="found leaning",
        by=SURVEYOR,
        at=after(600),
    )
    (old,) = adopted.stakes
    assert old.view.label == "101"
    assert (old.north.text, old.east.text) == ("0.040", "0.000")
    assert old.words == "0.04 ft north"


def test_a_moved_backsight_turns_what_was_set() -> None:
    """CP2, 200 ft north of CP1, gets a value 0.20 ft east: the setup turns by
    0.001 rad clockwise, and 101, 80 ft north and 80 ft east of CP1, moves 0.08 ft
    east and 0.08 ft south (worked by hand)."""
    record, marks = field_job()
    setup = station(record, marks)
    set_stake(record, marks["101"], setup, after(30))
    (old,) = adopt_value(
        record=record,
        mark=marks["CP2"],
        northing=measured("1200.00"),
        easting=measured("2000.20"),
        source="re-measured",
        reason="hit by a truck",
        by=SURVEYOR,
        at=after(600),
    ).stakes
    assert (old.north.text, old.east.text) == ("-0.080", "0.080")


@pytest.mark.parametrize(
    "label, more, words",
    [
        ("101", {"northing": "1"}, "stakes have a design"),
        ("CP1", {"northing": "1000"}, "Only one of"),
        ("CP1", {}, "no value"),
        ("CP1", {"elevation": "500", "source": ""}, "source of the value"),
        ("CP1", {"elevation": "500", "reason": ""}, "why it changes"),
        ("CP1", {"northing": "2000", "easting": "1000"}, "from the value it has"),
        ("MON", {"elevation": "500"}, "legal monument"),
    ],
)
def test_a_value_that_cannot_be_adopted_gets_a_sentence(label, more, words) -> None:
    record, marks = field_job()
    (marks["MON"],) = plan(
        record, row("MON", "1", "1", purpose="control", sort="legal monument")
    )
    before = Entry.objects.count()
    said = {"source": "traverse", "reason": "measured anew", **more}
    for name in ("northing", "easting", "elevation"):
        if name in said:
            said[name] = measured(said[name])
    with pytest.raises(Refused, match=words):
        adopt_value(record=record, mark=marks[label], by=SURVEYOR, **said)
    assert Entry.objects.count() == before


def test_the_control_page_knows_last_check_and_shelf_life() -> None:
    record, _ = field_job()
    state = job_state(record)
    lines = {line.view.label: line for line in control_lines(state, after(60))}
    assert set(lines) == {"CP1", "CP2", "CP3", "CP4", "BM1", "BM2"}
    assert not lines["CP1"].expired
    late = {x.view.label: x for x in control_lines(state, after(60 * 24 * 8))}
    assert late["CP1"].expired


def test_control_of_another_job_gets_no_value() -> None:
    _, marks = field_job()
    with pytest.raises(Refused, match="no such mark"):
        adopt_value(
            record=make_record("2"),
            mark=marks["CP1"],
            elevation=measured("1"),
            source="x",
            by=SURVEYOR,
        )


def test_a_new_elevation_lists_no_stake_set_by_the_place_alone() -> None:
    record, marks = field_job()
    setup = station(record, marks)
    set_stake(record, marks["101"], setup, after(30))
    adopted = adopt_value(
        record=record,
        mark=marks["CP2"],
        elevation=measured("500.10"),
        source="level loop",
        reason="levelled",
        by=SURVEYOR,
        at=after(600),
    )
    assert list(adopted.stakes) == []


def test_the_surveyor_answers_a_doubt_in_writing_and_it_is_lifted() -> None:
    record, marks = field_job()
    see_marks(
        record=record,
        marks=[marks["CP1"]],
        condition="leaning",
        by=SURVEYOR,
        at=after(30),
    )
    assert job_state(record).by_label["CP1"].trust.trust == "in question"
    said = {"record": record, "marks": [marks["CP1"]], "by": SURVEYOR}
    with pytest.raises(Refused, match="reason"):
        answer_doubt(reason=" ", **said)
    answer_doubt(reason="only the guard leans, the hub is firm", at=after(40), **said)
    assert job_state(record).by_label["CP1"].trust.trust == "checked"
    with pytest.raises(Refused, match="which doubt"):
        answer_doubt(record=record, reason="x", by=SURVEYOR)
