"""Control is recovered, traversed and levelled; what disagrees stays a question."""

from __future__ import annotations

import math
import uuid

import pytest

from stakes.actions.levelling import LevelSetup, run_levels
from stakes.actions.recovering import Between, questions_of, recover_control
from stakes.actions.traversing import Leg, run_traverse
from stakes.models import Draft, Entry, Mark
from stakes.queries.control import disagreements
from stakes.queries.state import job_state
from stakes.record import Refused
from tests.builders import CHIEF, measured
from tests.fieldwork import field_job

pytestmark = pytest.mark.django_db


def recovered(record, marks, *distances, rises=(), **more):
    return recover_control(
        record=record,
        by=CHIEF,
        found=more.pop("found", {marks["CP1"]: "undisturbed"}),
        distances=[Between(marks[a], marks[b], measured(d)) for a, b, d in distances],
        rises=[Between(marks[a], marks[b], measured(d)) for a, b, d in rises],
        **more,
    )


def test_distances_between_what_is_found_are_compared_with_the_record() -> None:
    """200 ft sides; the diagonal is 282.8427 ft; tolerance 0.01 ft."""
    record, marks = field_job()
    work = recovered(record, marks, ("CP1", "CP2", "200.00"), ("CP1", "CP3", "282.84"))
    assert [c.verdict for c in work.fact.compared] == ["pass", "pass"]
    assert work.fact.compared[1].computed.text == "282.8427"
    assert work.fact.closure == "2 of 2 agree with the record."
    assert disagreements(record) == []


def test_two_benchmarks_that_disagree_are_a_question_and_nothing_changes() -> None:
    """BM1 500.00 and BM2 503.25: the rise by the record is 3.25 ft."""
    record, marks = field_job()
    work = recovered(record, marks, rises=[("BM1", "BM2", "3.35")])
    (row,) = work.fact.compared
    assert (row.computed.text, row.difference.text) == ("3.2500", "0.1000")
    assert row.verdict == "fail"
    assert "BM1 or BM2" in work.fact.results[1]
    assert Mark.objects.get(label="BM2").elevation_m == pytest.approx(503.25 * 0.3048)
    assert [d.between for d in disagreements(record)] == ["BM1 to BM2"]


def test_a_mark_every_disagreement_names_is_named_to_be_measured_again() -> None:
    record, marks = field_job()
    work = recovered(
        record,
        marks,
        ("CP1", "CP2", "200.20"),
        ("CP2", "CP3", "200.15"),
        ("CP1", "CP3", "282.84"),
    )
    assert work.fact.results[-1] == (
        "Every disagreement names CP2: measure to it again."
    )


def test_one_mark_is_never_blamed_where_two_explain_it() -> None:
    record, marks = field_job()
    work = recovered(record, marks, ("CP1", "CP2", "200.20"))
    assert work.fact.results[-1].startswith("CP1 or CP2")
    assert questions_of([], {}) == []


def test_how_a_mark_was_found_stands_in_its_own_life() -> None:
    record, marks = field_job()
    found = {marks["CP1"]: "leaning", marks["CP2"]: "not found"}
    recovered(record, marks, found=found)
    state = job_state(record)
    assert str(state.by_label["CP1"].standing) == "disturbed"
    assert str(state.by_label["CP2"].standing) == "gone"


def square(record, marks, last: str = "200.00", **more):
    """CP1 - CP4 - T1 - T2 - CP1 round the square of 200 ft, right angles inside.

    From CP1 oriented on CP2 (north): 90 degrees to the next, four times."""
    right = math.pi / 2
    legs = [
        Leg("CP4", right, measured("200.00")),
        Leg("T1", right, measured("200.00")),
        Leg("T2", right, measured("200.00")),
        Leg("CP1", right, measured(last)),
    ]
    return run_traverse(
        record=record,
        by=CHIEF,
        start=marks["CP1"],
        back=marks["CP2"],
        legs=legs,
        closing_angle_rad=more.pop("closing", math.pi),
        closing_back=more.pop("closing_back", marks["CP2"]),
        **more,
    )


def test_a_traverse_that_closes_drafts_its_new_marks() -> None:
    record, marks = field_job()
    work = square(record, marks, closing=2 * math.pi)
    assert "pass" in work.fact.closure
    assert [r["label"] for r in work.draft.rows] == ["T1", "T2"]
    assert work.draft.rows[0]["northing"]["text"] == "1200.0000"
    assert work.fact.results[0] == "Measured to CP4: 90°00'00\", 200.00 ft"
    assert [c.verdict for c in work.fact.compared] == ["pass", "pass"]
    assert not Mark.objects.filter(label="T1").exists()


def test_a_traverse_that_does_not_close_is_kept_and_drafts_nothing() -> None:
    record, marks = field_job()
    work = square(record, marks, last="201.00", closing=2 * math.pi)
    assert "fail" in work.fact.closure
    assert work.draft is None
    assert "nothing was drafted" in work.fact.results[-1]


def test_an_open_traverse_is_refused() -> None:
    record, marks = field_job()
    before = Entry.objects.count()
    with pytest.raises(Refused, match="does not end on a mark"):
        run_traverse(
            record=record,
            by=CHIEF,
            start=marks["CP1"],
            back=marks["CP2"],
            legs=[Leg("T1", 1.0, measured("10"))],
        )
    assert Entry.objects.count() == before


def levelled(record, marks, last_fore: str, end: str = "BM2", **more):
    """BM1 500.00 - NEW (up 1.50) - BM2 503.25 (up 1.75)."""
    return run_levels(
        record=record,
        by=CHIEF,
        start=marks["BM1"],
        setups=[
            LevelSetup("NEW", measured("5.00"), measured("3.50")),
            LevelSetup(end, measured("6.00"), measured(last_fore)),
        ],
        **more,
    )


def test_a_level_run_between_benchmarks_closes_and_shares_its_misclosure() -> None:
    """It misses by -0.004 ft; half of that goes to each setup: 501.502."""
    record, marks = field_job()
    work = levelled(record, marks, "4.254")
    assert "Misses by -0.0040 ft" in work.fact.closure
    assert work.fact.results == (
        "Measured to NEW: back 5.00, fore 3.50 ft",
        "Measured to BM2: back 6.00, fore 4.254 ft",
        "Adjusted NEW: 501.5020 ft",
    )
    assert work.draft.rows[0]["elevation"]["text"] == "501.5020"
    assert work.draft.rows[0]["purpose"] == "benchmark"


def test_a_level_run_that_misses_is_a_question() -> None:
    record, marks = field_job()
    work = levelled(record, marks, "4.35")
    assert work.fact.compared[0].verdict == "fail"
    assert work.draft is None
    assert [d.between for d in disagreements(record)] == ["BM1 to BM2"]


def test_a_loop_on_one_benchmark_says_what_it_does_not_prove() -> None:
    record, marks = field_job()
    work = levelled(record, marks, "7.50", end="BM1")
    assert "not the benchmark" in work.fact.closure


def test_a_class_of_levelling_needs_lengths() -> None:
    record, marks = field_job()
    with pytest.raises(Refused, match="needs the length"):
        levelled(record, marks, "4.25", class_name="third order")


def test_control_work_sent_twice_is_one_act() -> None:
    record, marks = field_job()
    key = uuid.uuid4()
    first = levelled(record, marks, "4.254", key=key)
    again = levelled(record, marks, "4.254", key=key)
    assert first.entry.number == again.entry.number
    assert first.draft == again.draft
    assert Draft.objects.count() == 1


@pytest.mark.parametrize(
    "more, words",
    [
        ({"found": {uuid.uuid4(): "undisturbed"}}, "not on this job"),
        ({"found": {}}, "Nothing was found"),
    ],
)
def test_work_that_says_nothing_is_refused(more, words) -> None:
    record, marks = field_job()
    with pytest.raises(Refused, match=words):
        recovered(record, marks, **more)
    with pytest.raises(Refused, match="to itself"):
        recovered(record, marks, ("CP1", "CP1", "1"))


def test_distances_and_rises_are_explained_apart() -> None:
    record, marks = field_job()
    work = recovered(
        record, marks, ("CP1", "CP2", "200.20"), rises=[("BM1", "BM2", "3.35")]
    )
    assert [r for r in work.fact.results if "third mark" in r] == [
        "CP1 or CP2: measure from each to a third mark to tell.",
        "BM1 or BM2: measure from each to a third mark to tell.",
    ]
