"""Marks are retired by stage, once, and what was doubtful stays so."""

from __future__ import annotations

import uuid

import pytest

from stakes.actions.retiring import retire_marks, supersede_marks
from stakes.actions.sheets import receive_sheet
from stakes.models import Entry, Mark
from stakes.queries.state import job_state
from stakes.record import Refused
from tests.builders import SURVEYOR, after, make_record, plan, row, set_stake

pytestmark = pytest.mark.django_db


def test_a_stage_is_retired_and_the_next_one_stays() -> None:
    record = make_record()
    plan(record, row("1", "1", "1", stage="rough"), row("2", "1", "2", stage="finish"))
    entry = retire_marks(record=record, stage="rough", by=SURVEYOR, reason="graded")
    assert entry.kind == "retired"
    found = dict(Mark.objects.values_list("label", "standing"))
    assert found == {"1": "retired", "2": "planned"}


def test_retiring_twice_is_one_act_and_a_stage_done_is_said_to_be() -> None:
    record, key = make_record(), uuid.uuid4()
    plan(record, row("1", "1", "1", stage="rough"))
    for _ in range(2):
        retire_marks(record=record, stage="rough", by=SURVEYOR, key=key)
    assert Entry.objects.filter(kind="retired").count() == 1
    with pytest.raises(Refused, match="left to retire"):
        retire_marks(record=record, stage="rough", by=SURVEYOR)


def test_marks_of_another_job_are_not_retired() -> None:
    here, there = make_record("1"), make_record("2")
    (mark,) = plan(there, row("1", "1", "1"))
    with pytest.raises(Refused, match="not on this job"):
        retire_marks(record=here, marks=[mark], by=SURVEYOR)
    with pytest.raises(Refused, match="what is retired"):
        retire_marks(record=here, by=SURVEYOR)


def test_a_stake_the_design_left_behind_is_superseded_with_its_sheet() -> None:
    record = make_record()
    (mark,) = plan(record, row("1", "1", "1"))
    set_stake(record, mark, None, after(10))
    sheet = receive_sheet(
        record=record,
        number="A-1",
        revision="2",
        status="for construction",
        by=SURVEYOR,
        at=after(20),
    )
    entry = supersede_marks(
        record=record,
        marks=[mark],
        sheet=sheet,
        reason="wall left out",
        by=SURVEYOR,
        at=after(30),
    )
    assert entry.kind == "superseded"
    assert job_state(record).marks[mark].stake.superseded
    for more, words in (({"marks": []}, "No mark"), ({"reason": " "}, "reason")):
        with pytest.raises(Refused, match=words):
            supersede_marks(
                record=record,
                by=SURVEYOR,
                **{"marks": [mark], "reason": "wall left out", **more},
            )
