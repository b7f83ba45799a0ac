"""What may be trusted: doubt travels from control to setups to stakes, and is cleared."""

from __future__ import annotations

import uuid

import pytest

from stakes.kinds.checking import Judgement, StakeChecked
from stakes.kinds.control import ValueAdopted
from stakes.models import Record
from stakes.queries.state import job_state
from stakes.record import append
from tests.builders import (
    CHIEF,
    SURVEYOR,
    after,
    make_record,
    measured,
    open_setup,
    plan,
    row,
    set_stake,
)

pytestmark = pytest.mark.django_db


def check(
    record: Record, mark: uuid.UUID, verdict: str, minutes: float, **more: object
):
    fact = StakeChecked(
        check=uuid.uuid4(),
        sort="position",
        listed=(mark,),
        judgement=Judgement(verdict=verdict),  # type: ignore[arg-type]
        **{"grade": 2, "reaches": ("place",), **more},  # type: ignore[arg-type]
    )
    append(record, fact, by=CHIEF, at=after(minutes))


@pytest.fixture
def job():
    """Four control marks with adopted values, one stake set from the first two."""
    record = make_record()
    control = plan(
        record, *(row(f"CP{i}", "1", "2", purpose="control") for i in "1234")
    )
    for mark in control:
        fact = ValueAdopted(
            value=uuid.uuid4(),
            mark=mark,
            carries="position",
            northing=measured("1"),
            easting=measured("2"),
            source="traverse",
        )
        append(record, fact, by=SURVEYOR, at=after(1))
    [stake] = plan(record, row("101", "5", "5", carries="position"))
    setup = open_setup(record, control[:2], check=control[2], at=after(10))
    set_stake(record, stake, setup, after(20), carries="position")
    return record, control, stake, setup


def trust(record: Record, mark: uuid.UUID, **at: object) -> str:
    return str(job_state(record, **at).marks[mark].position.trust)  # type: ignore[arg-type]


def test_a_stake_is_not_checked_until_an_independent_check_passes(job) -> None:
    record, _, stake, setup = job
    assert trust(record, stake) == "not checked"
    check(record, stake, "pass", 21, grade=0, setup=setup)
    assert trust(record, stake) == "not checked"
    check(record, stake, "pass", 22, grade=1)
    assert trust(record, stake) == "checked"


def test_control_that_fails_puts_the_setups_made_in_the_doubt_in_question(job) -> None:
    record, control, stake, _ = job
    check(record, control[0], "fail", 60)
    state = job_state(record)
    judged = state.marks[stake].position
    assert (str(judged.trust), judged.marks) == ("in question", (control[0],))
    assert judged.reason == "control it was set from is in question"


def test_a_check_passed_after_the_setting_ends_the_reach_of_a_later_doubt(job) -> None:
    record, control, stake, _ = job
    check(record, control[0], "pass", 40)
    check(record, control[0], "fail", 60)
    assert trust(record, stake) == "not checked"


def test_doubt_survives_the_loss_of_the_stake(job) -> None:
    from stakes.kinds.condition import MarksGone

    record, control, stake, _ = job
    append(record, MarksGone(listed=(stake,)), by=CHIEF, at=after(50))
    check(record, control[0], "fail", 60)
    assert trust(record, stake) == "in question"


def test_an_independent_check_that_rests_on_nothing_in_question_clears(job) -> None:
    record, control, stake, _ = job
    check(record, control[0], "fail", 60)
    tainted = open_setup(record, control[:2], check=control[2], at=after(70))
    check(record, stake, "pass", 71, setup=tainted)
    assert trust(record, stake) == "in question"
    clean = open_setup(record, control[2:], at=after(80))
    check(record, stake, "pass", 81, setup=clean)
    assert trust(record, stake) == "checked"


def test_a_new_value_leaves_what_was_set_on_the_old_in_question(job) -> None:
    record, control, stake, _ = job
    check(record, control[0], "fail", 60)
    fact = ValueAdopted(
        value=uuid.uuid4(), mark=control[0], carries="position", source="re-observed"
    )
    append(record, fact, by=SURVEYOR, at=after(90))
    later = open_setup(record, control[:2], check=control[2], at=after(100))
    [other] = plan(record, row("102", "6", "6", carries="position"))
    set_stake(record, other, later, after(101), carries="position")
    assert trust(record, stake) == "in question"
    assert trust(record, other) == "not checked"


def test_as_of_gives_what_was_known_then_and_what_is_known_now_of_then(job) -> None:
    record, control, stake, _ = job
    known = record.head
    check(record, control[0], "fail", 60)
    assert trust(record, stake, known=known) == "not checked"
    assert trust(record, stake, at=after(59)) == "not checked"
    assert trust(record, stake, at=after(61)) == "in question"


def test_the_number_of_queries_does_not_grow_with_the_marks(
    django_assert_num_queries,
) -> None:
    record = make_record()
    plan(record, *(row(str(n), "1", "2") for n in range(300)))
    with django_assert_num_queries(5):
        job_state(record)
