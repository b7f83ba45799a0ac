"""Matching: number and place must agree, and every disagreement has its word."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import NotFinite, OutOfRange, WrongShape
from geometry.match import (
    Status,
    collisions,
    look_alike,
    match_shots,
    nearest_marks,
    normal_number,
    number_shift,
    sentence,
)

NUMBERS = ["CP-1", "CP-2", "A 101", "A 102", "007"]
PLACES = [(0, 0), (50, 0), (10, 20), (20, 20), (80, 80)]
PLAN = np.array(PLACES, float) + np.array([5e5, 4e6])


def statuses(numbers, places):
    m = match_shots(NUMBERS, PLAN, numbers, np.asarray(places, float))
    return [Status(s) for s in m.status], m


def test_number_and_place_together_are_a_match_however_it_is_written():
    found, m = statuses(["cp1", "A101"], PLAN[[0, 2]] + 0.01)
    assert found == [Status.MATCHED, Status.MATCHED]
    assert m.planned.tolist() == [0, 2]
    assert m.distance_m == pytest.approx([math.hypot(0.01, 0.01)] * 2, abs=1e-8)
    assert m.unshot.tolist() == [1, 3, 4]


def test_a_planned_number_far_from_its_place_is_far():
    found, m = statuses(["CP-1"], PLAN[[0]] + [3.0, 4.0])
    assert found == [Status.FAR]
    assert m.distance_m == pytest.approx([5.0])
    assert (m.planned[0], m.rival[0]) == (0, -1)


def test_two_shots_at_each_others_marks_are_swapped():
    found, m = statuses(["A 101", "A 102", "CP-2"], PLAN[[3, 2, 1]])
    assert found == [Status.SWAPPED, Status.SWAPPED, Status.MATCHED]
    assert m.rival.tolist() == [3, 2, -1]


def test_a_shot_at_another_marks_place_is_no_swap_without_its_partner():
    found, m = statuses(["A 101"], PLAN[[3]])
    assert found == [Status.OTHER_PLACE]
    assert (m.planned[0], m.rival[0]) == (2, 3)


def test_an_unknown_number_is_matched_by_place_and_says_so():
    found, m = statuses(["99", "", "1234"], [PLAN[0], PLAN[1], PLAN[0] + 30])
    assert found == [Status.BY_PLACE, Status.BY_PLACE, Status.UNPLANNED]
    assert m.planned.tolist() == [0, 1, -1]
    assert m.distance_m[2] == pytest.approx(
        np.hypot(*(PLAN - PLAN[0] - 30).T).min(), abs=1e-8
    )


def test_leading_zeros_are_never_dropped_in_silence():
    found, m = statuses(["7", "07"], [PLAN[4], PLAN[4] + 40])
    assert found == [Status.LOOK_ALIKE, Status.LOOK_ALIKE_FAR]
    assert (m.planned[0], m.rival[1]) == (4, 4)


def test_two_marks_too_close_to_tell_are_ambiguous_by_place_alone():
    plan = [(0.0, 0.0), (0.2, 0.0)]
    m = match_shots(["A", "B"], plan, ["", "A"], [(0.09, 0.0), (0.09, 0.0)])
    assert [Status(s) for s in m.status] == [Status.AMBIGUOUS, Status.MATCHED]
    assert (m.planned[0], m.rival[0]) == (0, 1)


def test_close_marks_with_exchanged_numbers_are_still_seen():
    plan = [(0.0, 0.0), (0.3, 0.0)]
    m = match_shots(["A", "B"], plan, ["B", "A"], [(0.005, 0.0), (0.302, 0.0)])
    assert [Status(s) for s in m.status] == [Status.SWAPPED, Status.SWAPPED]


def test_of_two_shots_of_one_mark_the_nearer_stands():
    found, _ = statuses(["CP-1", "CP-1"], [PLAN[0] + 0.1, PLAN[0] + 0.01])
    assert found == [Status.REPEATED, Status.MATCHED]


def test_numbers_that_normalising_would_merge_are_told_and_settled_by_place():
    numbers, plan = ["CP-1", "CP1", "X"], [(0, 0), (50, 0), (90, 0)]
    assert collisions(numbers)[0].rows == (0, 1)
    m = match_shots(numbers, plan, ["cp 1", "cp 1", "CP1"], [(50, 0), (25, 0), (50, 0)])
    assert [Status(s) for s in m.status] == [
        Status.MATCHED,
        Status.AMBIGUOUS,
        Status.REPEATED,
    ]
    assert m.collisions == collisions(numbers)


def test_a_run_of_numbers_one_ahead_is_one_finding():
    plan = np.column_stack([10.0 * np.arange(12), np.zeros(12)])
    names = [f"S{i}" for i in range(100, 112)]
    shot = [f"S{i + (1 if i >= 104 else 0)}" for i in range(100, 112)]
    found = number_shift(names, plan, shot, plan + 0.01)
    assert (found.shift, found.shots, found.placed) == (1, 8, 12)
    assert found.rows == tuple(range(4, 12))
    assert number_shift(names, plan, names, plan) is None


def test_ten_thousand_honest_shots_all_match():
    rng = np.random.default_rng(3)
    plan = rng.uniform(0, 5000, (10_000, 2)) + np.array([5e5, 4e6])
    names = [f"ST-{i:05d}" for i in range(10_000)]
    order = rng.permutation(10_000)
    shots = plan[order] + rng.normal(0, 0.005, (10_000, 2))
    m = match_shots(names, plan, [names[i].lower() for i in order], shots)
    assert m.counts() == {Status.MATCHED: 10_000}
    assert (m.planned == order).all()
    assert m.unshot.size == 0


@given(
    st.lists(
        st.tuples(
            st.sampled_from(["CP-1", "cp2", "A101", "7", "", "zz", "A 102"]),
            st.integers(0, 4),
            st.floats(-3, 3),
        ),
        max_size=12,
    ),
    st.floats(-1e5, 1e5),
)
def test_matching_does_not_depend_on_order_or_on_where_the_job_lies(rows, shift):
    names = [name for name, _, _ in rows]
    places = np.array([PLAN[i] + off for _, i, off in rows]).reshape(-1, 2)
    a = match_shots(NUMBERS, PLAN, names, places)
    b = match_shots(NUMBERS, PLAN + shift, names, places + shift)
    assert a.status.tolist() == b.status.tolist()
    back = match_shots(NUMBERS, PLAN, names[::-1], places[::-1])
    assert sorted(back.status.tolist()) == sorted(a.status.tolist())
    assert len(a.status) == len(rows)
    assert ((a.planned >= -1) & (a.rival >= -1)).all()


def test_every_status_has_a_sentence_with_its_number():
    for status in Status:
        text = sentence(status, shot="A2", planned="A2", rival="A3", away="0.41 ft")
        assert text.startswith("A2: ") and text.endswith(".")


def test_numbers_are_normalised_without_losing_what_tells_marks_apart():
    assert normal_number("cp-001") == "CP001" != normal_number("CP1")
    assert look_alike("cp-001") == look_alike("CP1")
    assert look_alike("S07") == look_alike("s-7") != look_alike("S8")
    assert look_alike("l0") == look_alike("1O") == "10"


def test_bad_input_is_named():
    with pytest.raises(WrongShape, match="one number for each point"):
        match_shots(["A"], [(0, 0), (1, 1)], [], [])
    with pytest.raises(NotFinite, match="shots"):
        match_shots(["A"], [(0, 0)], ["A"], [(math.nan, 0)])
    with pytest.raises(OutOfRange, match="near_m"):
        match_shots(["A"], [(0, 0)], ["A"], [(0, 0)], near_m=0)
    with pytest.raises(OutOfRange, match="clearly"):
        match_shots(["A"], [(0, 0)], ["A"], [(0, 0)], clearly=0.5)
    empty = match_shots([], [], ["A"], [(0, 0)])
    assert Status(empty.status[0]) is Status.UNPLANNED
    assert empty.distance_m[0] == math.inf
    assert nearest_marks([], [], near_m=1.0).row.size == 0
