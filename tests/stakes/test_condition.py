"""What crews find: seen, lath down, leaning, gone, set by others."""

from __future__ import annotations

import uuid

import pytest

from stakes.actions.condition import (
    find_foreign_mark,
    note_built_from,
    report_gone,
    see_marks,
)
from stakes.models import Mark, Stake
from stakes.queries.state import job_state
from stakes.record import Refused, entries
from tests.builders import CHIEF, after, make_record, measured, plan, row, set_stake

pytestmark = pytest.mark.django_db


@pytest.fixture
def job():
    record = make_record()
    marks = plan(record, row("101", "1", "2"), row("102", "1", "5"))
    for mark in marks:
        set_stake(record, mark, None, after(1))
    return record, marks


def stake(mark) -> Stake:
    return Stake.objects.get(mark=mark)


def test_a_sighting_extends_last_seen_for_several_marks_at_once(job) -> None:
    record, marks = job
    see_marks(
        record=record, marks=marks, condition="undisturbed", by=CHIEF, at=after(50)
    )
    assert [stake(m).last_seen for m in marks] == [after(50)] * 2
    assert entries(record)[-1].entry.kind == "seen"


def test_a_lath_down_with_the_hub_there_is_no_loss(job) -> None:
    record, marks = job
    see_marks(
        record=record,
        marks=marks[:1],
        condition="lath down, hub there",
        by=CHIEF,
        at=after(5),
    )
    assert (stake(marks[0]).standing, stake(marks[0]).lath_down) == ("standing", True)


@pytest.mark.parametrize("condition", ["leaning", "hit", "put back by others"])
def test_what_disturbed_a_stake_puts_it_in_question(job, condition) -> None:
    record, marks = job
    see_marks(
        record=record,
        marks=marks[:1],
        condition=condition,
        components="p",
        cause="equipment passed",
        told_by="Superintendent",
        by=CHIEF,
        at=after(5),
    )
    view = job_state(record).marks[marks[0]]
    assert view.standing == "disturbed"
    assert view.position.trust == "in question"
    assert view.elevation.trust == "not checked"
    assert entries(record)[-1].known == "told"


def test_a_loss_is_bounded_by_last_seen_and_first_missing(job) -> None:
    record, marks = job
    report_gone(
        record=record,
        marks=marks,
        last_seen=after(30),
        cause="excavation",
        cause_by="Operator",
        disputed=True,
        by=CHIEF,
        at=after(90),
    )
    lost = stake(marks[0])
    assert (lost.last_seen, lost.first_missing) == (after(30), after(90))
    assert lost.standing == "gone"
    fact = entries(record, kinds=["destroyed"])[0].fact
    assert (fact.cause, fact.cause_by, fact.disputed) == (
        "excavation",
        "Operator",
        True,
    )


def test_seen_after_they_were_found_gone_is_refused(job) -> None:
    record, marks = job
    with pytest.raises(Refused, match="after they were found gone"):
        report_gone(
            record=record, marks=marks, last_seen=after(9), by=CHIEF, at=after(8)
        )


def test_a_foreign_mark_is_kept_and_is_a_basis_for_nothing(job) -> None:
    record, _ = job
    mark = find_foreign_mark(
        record=record,
        label="F1",
        words="hub with orange paint",
        set_by="mason",
        northing=measured("3"),
        easting=measured("4"),
        by=CHIEF,
        at=after(5),
    )
    row_ = Mark.objects.get(key=mark)
    assert (row_.purpose, row_.carries) == ("foreign", "position")
    assert not job_state(record).marks[mark].is_usable


def test_a_foreign_mark_needs_a_name_of_its_own(job) -> None:
    record, _ = job
    for label, sentence in ((" ", "no name"), ("101", "a mark 101 already")):
        with pytest.raises(Refused, match=sentence):
            find_foreign_mark(record=record, label=label, by=CHIEF)
    with pytest.raises(Refused, match="Only one of northing"):
        find_foreign_mark(record=record, label="F", northing=measured("1"), by=CHIEF)


def test_work_built_from_a_stake_is_noted(job) -> None:
    record, marks = job
    note_built_from(record=record, marks=marks[:1], what="footing poured", by=CHIEF)
    assert stake(marks[0]).built_from


def test_no_mark_a_strange_mark_or_too_many_are_refused_and_nothing_is_kept(
    job,
) -> None:
    record, marks = job
    head = record.head
    for named, sentence in (
        ([], "No mark is named"),
        ([uuid.uuid4()], "not on this job"),
        ([uuid.uuid4() for _ in range(300)], "300 marks"),
    ):
        with pytest.raises(Refused, match=sentence):
            report_gone(record=record, marks=named, by=CHIEF)
    with pytest.raises(Refused, match="letters"):
        see_marks(
            record=record, marks=marks, condition="hit", cause="x" * 500, by=CHIEF
        )
    with pytest.raises(Refused, match="letters"):
        report_gone(record=record, marks=marks, remark="x" * 5000, by=CHIEF)
    record.refresh_from_db()
    assert record.head == head


def test_a_double_tap_says_it_once(job) -> None:
    record, marks = job
    key = uuid.uuid4()
    first = report_gone(record=record, marks=marks, by=CHIEF, key=key)
    assert report_gone(record=record, marks=marks, by=CHIEF, key=key) == first
    assert record.entries.filter(kind="destroyed").count() == 1
