"""A lost stake goes back by a computed way, with its check, and says what it rests on."""

from __future__ import annotations

import uuid

import pytest

from geometry.units import Length
from stakes.actions.passing import Passage
from stakes.actions.putting_back import put_back
from stakes.kinds.checking import Judgement, StakeChecked
from stakes.kinds.condition import MarksGone
from stakes.kinds.control import ValueAdopted
from stakes.kinds.setting import StakeSet
from stakes.models import Entry, Mark, Record
from stakes.queries import ways
from stakes.queries.state import job_state
from stakes.record import Refused, append
from stakes.record.lengths import Measured
from tests.builders import CHIEF, SURVEYOR, after, make_record, plan, row

pytestmark = pytest.mark.django_db

PASSAGE_DONE = {"passage": Passage(done=True)}
CONTROL = {
    "CP1": ("1130", "5000"),
    "CP2": ("1135", "5210"),
    "CP3": ("1010", "5215"),
    "CP4": ("1000", "5005"),
}


@pytest.fixture
def job() -> tuple[Record, dict[str, uuid.UUID]]:
    """Four control marks with values, one stake that was set and is gone."""
    record = make_record()
    rows = [
        row(c, n, e, purpose="control", carries="position")
        for c, (n, e) in CONTROL.items()
    ]
    control = plan(record, *rows)
    for mark in control:
        fact = ValueAdopted(
            value=uuid.uuid4(), mark=mark, carries="position", source="traverse"
        )
        append(record, fact, by=SURVEYOR, at=after(1))
    [stake] = plan(record, row("106", "1020", "5130", carries="position"))
    append(record, StakeSet(mark=stake), by=CHIEF, at=after(5))
    append(record, MarksGone(listed=(stake,)), by=CHIEF, at=after(90))
    labels = dict(Mark.objects.values_list("label", "key"))
    return record, labels


def best(record: Record, mark: uuid.UUID) -> ways.WaysBack:
    return ways.ways_for(job_state(record), mark)


def test_the_best_way_is_polar_or_free_from_control_and_its_check_shares_no_mark(
    job,
) -> None:
    record, labels = job
    found = best(record, labels["106"])
    way = found.way(1)
    assert way.offered
    check = ways.own_check(way)
    assert not {check.at, check.to} & set(way.marks)


def test_putting_back_with_its_check_makes_a_new_stake_that_is_checked(job) -> None:
    record, labels = job
    mark = labels["106"]
    found = best(record, mark)
    check = ways.own_check(found.way(1))
    value = Length.from_metres(check.expected, record.length_unit, 2)
    put_back(
        record=record,
        mark=mark,
        by=CHIEF,
        rank=1,
        reason="on site",
        measured=Measured.of(value),
        old="not found",
        **PASSAGE_DONE,
    )
    view = job_state(record).marks[mark]
    assert (view.standing, view.stake.ordinal) == ("standing", 2)
    assert Entry.objects.filter(kind="checked").count() == 1
    assert str(view.position.trust) == "checked"


def test_a_check_that_fails_is_kept_and_the_mark_stays_in_question(job) -> None:
    record, labels = job
    mark = labels["106"]
    check = ways.own_check(best(record, mark).way(1))
    wrong = Length.from_metres(check.expected + 0.3, record.length_unit, 2)
    put_back(
        record=record,
        mark=mark,
        by=CHIEF,
        rank=1,
        reason="on site",
        measured=Measured.of(wrong),
        old="not found",
        **PASSAGE_DONE,
    )
    assert str(job_state(record).marks[mark].position.trust) == "in question"


def test_the_same_key_twice_puts_back_once(job) -> None:
    record, labels = job
    said = {
        "record": record,
        "mark": labels["106"],
        "by": CHIEF,
        "rank": 1,
        "reason": "x",
        "old": "not found",
        "key": uuid.uuid4(),
        "at": after(100),
        **PASSAGE_DONE,
    }
    put_back(**said)
    head = record.entries.count()
    put_back(**said)
    assert record.entries.count() == head


def test_control_is_never_set_back_to_old_values(job) -> None:
    record, labels = job
    append(record, MarksGone(listed=(labels["CP3"],)), by=CHIEF, at=after(95))
    with pytest.raises(Refused, match="never set back"):
        put_back(record=record, mark=labels["CP3"], by=CHIEF, rank=1)


def test_a_mark_in_question_is_no_basis_and_the_way_says_so(job) -> None:
    record, labels = job
    bad = StakeChecked(
        check=uuid.uuid4(),
        sort="position",
        listed=(labels["CP2"],),
        grade=2,
        judgement=Judgement(verdict="fail"),
    )
    append(record, bad, by=CHIEF, at=after(95))
    found = best(record, labels["106"])
    for way in found.ways:
        assert str(labels["CP2"]) not in way.marks or not way.offered
    reasons = [w.reason for w in found.ways if not w.offered]
    assert any("in question" in reason for reason in reasons)


def test_what_was_done_otherwise_can_be_described_but_not_left_unsaid(job) -> None:
    record, labels = job
    said = {"record": record, "mark": labels["106"], "by": CHIEF, "old": "not found"}
    before = record.entries.count()
    with pytest.raises(Refused, match="not said"):
        put_back(**said, **PASSAGE_DONE)
    assert record.entries.count() == before
    put_back(**said, described="string between two fence posts", **PASSAGE_DONE)
    entry = Entry.objects.filter(kind="set").latest("number")
    assert "string between two fence posts" in entry.body
