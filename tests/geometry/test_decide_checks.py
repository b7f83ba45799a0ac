"""What a check is worth: independence, reach, and the smallest move it could see."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import chi2

from geometry.decide import (
    Against,
    Component,
    Means,
    Reach,
    could_have_seen,
    independence,
    missing,
    noncentrality,
    reach,
    smallest_move,
    smallest_seen,
)
from geometry.errors import GeometryError

SETTING = Means("S1", {"CP1", "CP2"}, "total station", "1001", "A")


def grade(**changes):
    base = {
        "setup": "S2",
        "control": {"CP1", "CP2"},
        "method": "total station",
        "instrument": "1001",
        "person": "A",
    }
    return independence(SETTING, Means(**{**base, **changes})).grade


def test_the_same_setup_is_no_independent_check():
    assert grade(setup="S1", control={"CP8", "CP9"}, person="B") == 0


def test_a_new_setup_on_the_same_control_is_grade_one():
    assert grade() == 1
    assert grade(instrument="2002", person="B") == 1


def test_other_control_or_another_method_is_grade_two():
    assert grade(control={"CP3", "CP4"}) == 2
    assert grade(method="tape", control=()) == 2


def test_other_control_and_another_person_is_grade_three():
    assert grade(control={"CP3", "CP4"}, person="B") == 3


def test_one_shared_control_mark_is_the_same_control():
    answer = independence(
        SETTING, Means("S2", {"CP2", "CP5"}, "total station", "1001", "B")
    )
    assert answer.grade == 1
    assert answer.shared_control == ("CP2",)


def test_what_is_not_recorded_counts_as_shared():
    assert grade(setup=None, control={"CP3"}, person="B") == 0
    assert grade(control={"CP3"}, person=None) == 2
    assert independence(Means(), Means()).shared == (
        "setup",
        "method",
        "instrument",
        "person",
    )


@given(st.sets(st.sampled_from("abcd")), st.sets(st.sampled_from("abcd")))
def test_independence_of_two_means_is_mutual(one, two):
    a, b = Means("1", one, "tape", "x", "A"), Means("2", two, "level", "y", "B")
    assert independence(a, b).grade == independence(b, a).grade


def test_a_diagonal_sees_shape_and_never_place():
    seen = reach(Component.POSITION, [Against.STAKE, Against.STAKE])
    assert seen.reaches == {Reach.SHAPE}


def test_only_control_not_used_for_setting_shows_place():
    used = {"CP1", "CP2"}
    same = reach(
        Component.POSITION,
        [Against.CONTROL],
        check_control=used,
        setting_control=used,
    )
    other = reach(
        Component.POSITION,
        [Against.CONTROL],
        check_control={"CP2", "CP3"},
        setting_control=used,
    )
    assert same.reaches == frozenset() and "only on the control" in same.reason
    assert other.reaches == {Reach.PLACE}


def test_the_boundary_or_existing_work_shows_fit():
    for thing in (Against.BOUNDARY, Against.EXISTING_WORK):
        assert reach(Component.POSITION, [thing]).reaches == {Reach.FIT}


def test_a_height_check_needs_another_benchmark_or_built_work():
    same = reach(
        Component.ELEVATION,
        [Against.BENCHMARK],
        check_control={"BM1"},
        setting_control={"BM1"},
    )
    other = reach(
        Component.ELEVATION,
        [Against.BENCHMARK],
        check_control={"BM2"},
        setting_control={"BM1"},
    )
    assert same.reaches == frozenset()
    assert other.reaches == {Reach.HEIGHT}
    assert reach(Component.ELEVATION, [Against.STAKE]).reaches == frozenset()


def test_a_building_with_shape_only_is_not_ready():
    needs = {Reach.SHAPE: 1, Reach.PLACE: 2, Reach.FIT: 1}
    passed = [(Reach.SHAPE, 3)] * 9
    assert missing(needs, passed) == {Reach.PLACE: 2, Reach.FIT: 1}
    assert missing(needs, [*passed, (Reach.PLACE, 2), (Reach.FIT, 1)]) == {}


@pytest.mark.parametrize(
    ("alpha", "power", "delta", "lam"),
    [
        (0.001, 0.80, 4.132, 17.075),
        (0.05, 0.80, 2.8016, 7.849),
        (0.01, 0.80, 3.4175, 11.679),
        (0.001, 0.90, 4.572, None),
        (0.001, 0.95, 4.935, None),
    ],
)
def test_the_noncentrality_is_baardas(alpha, power, delta, lam):
    # Baarda 1968; Ghilani, Adjustment Computations, ch. 21 (both from memory).
    got = noncentrality(1, alpha, power)
    assert math.sqrt(got) == pytest.approx(delta, abs=5e-4)
    if lam is not None:
        assert got == pytest.approx(lam, abs=1e-3)


def test_the_noncentrality_of_more_dimensions_agrees_with_computed_values():
    # Computed from the noncentral chi-square distribution.
    got = [noncentrality(q, a) for a in (0.001, 0.05) for q in (2, 3)]
    assert got == pytest.approx([19.6624, 21.5450, 9.6347, 10.9026], abs=5e-4)


def test_the_least_detectable_errors_of_two_published_networks():
    # Ghilani ex. 12.6 observation A-C (12 mm, r .886); Strang & Borre ex. 10.1 line 1-P
    # (10 mm, r .5), data in Krumm 2020; a difference with sigma/sqrt(r) stands for it.
    assert smallest_seen(12 / math.sqrt(0.886)) == pytest.approx(52.7, abs=0.05)
    assert smallest_seen(10 / math.sqrt(0.5)) == pytest.approx(58.4, abs=0.05)


def test_a_move_square_to_the_line_is_not_seen():
    assert smallest_seen(0.002, 0.0) == math.inf
    assert not could_have_seen((0.05, 0), (0, 1), 0.002)


def test_a_tolerance_hides_more_than_a_statistical_test():
    assert smallest_seen(0.002, limit=0.02) > smallest_seen(0.002)


def test_the_stated_smallest_move_is_found_four_times_in_five():
    rng = np.random.default_rng(11)
    for limit in (None, 0.02):
        move = smallest_seen(0.003, 0.6, limit=limit)
        seen = 0.6 * move + rng.normal(0, 0.003, 200_000)
        bar = 3.290527 * 0.003 if limit is None else limit
        assert (np.abs(seen) > bar).mean() == pytest.approx(0.80, abs=0.004)


def test_two_checks_together_find_the_smallest_move_four_times_in_five():
    rng = np.random.default_rng(12)
    g = np.array([[0.8, 0.6], [-0.3, math.sqrt(0.91)]])
    c = np.array([[4e-6, 1e-6], [1e-6, 9e-6]])
    answer = smallest_move(g, c)
    blind = np.array([math.sin(answer.blind_rad), math.cos(answer.blind_rad)])
    shifts = g @ (answer.any_m * blind)
    draws = rng.multivariate_normal(shifts, c, 200_000)
    test = np.einsum("ni,ij,nj->n", draws, np.linalg.inv(c), draws)
    assert (test > chi2.isf(0.001, 2)).mean() == pytest.approx(0.80, abs=0.004)


def test_checks_in_one_direction_leave_the_other_unseen():
    answer = smallest_move([[0, 1], [0, 1]], np.diag([1e-6, 1e-6]))
    assert answer.any_m == math.inf
    assert answer.best_azimuth_rad % math.pi == pytest.approx(0, abs=1e-9)


def test_no_check_sees_no_move():
    assert smallest_move(np.empty((0, 2)), np.empty((0, 0))).any_m == math.inf


@given(st.lists(st.tuples(st.floats(), st.floats()), max_size=4), st.floats())
def test_any_gradients_give_an_answer_or_a_named_error(gradients, variance):
    try:
        answer = smallest_move(gradients, np.diag([variance] * len(gradients)))
    except GeometryError as error:
        assert str(error)
    else:
        assert answer.best_m >= 0 and answer.any_m >= answer.best_m
