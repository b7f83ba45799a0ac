"""Level notes are reduced, loops are closed and the misclosure is shared by length."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.cogo import (
    LEVEL_LOOP_CLASSES,
    LevelClass,
    level_closure,
    level_notes,
    level_run,
)
from geometry.errors import EmptyInput, GeometryError, OutOfRange, WrongShape
from geometry.verdicts import Verdict


def test_third_order_and_second_order_class_two_over_four_kilometres() -> None:
    # FGCS 1984 section 3.5, loop misclosure (from memory)
    by_name = {by.name: by for by in LEVEL_LOOP_CLASSES}
    assert level_closure(0.0, 4000, by_name["third order"]).allowed == pytest.approx(
        0.024
    )
    second = level_closure(0.0, 4000, by_name["second order, class II"])
    assert second.allowed == pytest.approx(0.016)


def test_the_older_army_rule_of_8_4_mm() -> None:
    # Engineer course EN0593 p. 4-4: second order class II 8.4 mm per root kilometre
    by = LevelClass("second order, class II (older)", "EN0593", 8.4)
    assert level_closure(0.0168, 4000.0, by).verdict is Verdict.PASS
    failed = level_closure(-0.0169, 4000.0, by)
    assert failed.verdict is Verdict.FAIL
    assert "0.0169 m" in failed.reason


def test_notes_are_reduced_by_height_of_instrument() -> None:
    notes = level_notes(100.0, [1.500, 0.800], [0.400, 1.600])
    assert notes.instrument_m == pytest.approx([101.5, 101.9])
    assert notes.elevations_m == pytest.approx([100.0, 101.1, 100.3])
    assert notes.page_check_m == pytest.approx(notes.elevations_m[-1] - 100.0)


def test_a_loop_shares_its_misclosure_by_length() -> None:
    loop = level_run(437.596, [10.509, 5.360, -15.881], [600.0, 400.0, 1200.0])
    assert loop.misclosure_m == pytest.approx(-0.012)
    assert loop.corrections_m == pytest.approx(
        [0.012 * s / 2200 for s in (600, 400, 1200)]
    )
    assert loop.elevations_m[0] == loop.elevations_m[-1] == 437.596


def test_the_shares_are_those_of_least_squares() -> None:
    # reference: weighted least squares of the two inner elevations, weights 1/length
    rises, lengths = np.array([1.25, -0.40, 2.10]), np.array([300.0, 120.0, 500.0])
    start, end = 50.0, 52.961
    design = np.array([[1.0, 0.0], [-1.0, 1.0], [0.0, -1.0]])
    observed = rises + np.array([start, 0.0, -end])
    weight = np.diag(1 / lengths)
    normal = design.T @ weight @ design
    expected = np.linalg.solve(normal, design.T @ weight @ observed)
    run = level_run(start, rises, lengths, end)
    assert run.elevations_m[1:3] == pytest.approx(expected)
    assert run.cofactors_m[1:3] == pytest.approx(np.diag(np.linalg.inv(normal)))
    assert run.cofactors_m[[0, 3]].tolist() == [0.0, 0.0]


def test_bad_notes_are_named() -> None:
    with pytest.raises(EmptyInput):
        level_notes(0.0, [], [])
    with pytest.raises(WrongShape):
        level_notes(0.0, [1.0], [])
    with pytest.raises(EmptyInput):
        level_run(0.0, [], [])
    with pytest.raises(OutOfRange, match="section 2"):
        level_run(0.0, [1.0, -1.0], [10.0, 0.0])
    with pytest.raises(WrongShape):
        level_run(0.0, [1.0, -1.0], [10.0])
    with pytest.raises(OutOfRange, match="row 1"):
        level_run(0.0, [1e300, -1.0], [10.0, 10.0])
    with pytest.raises(OutOfRange):
        level_closure(0.0, 0.0, LEVEL_LOOP_CLASSES[0])


sections = st.lists(
    st.tuples(st.floats(-5, 5), st.floats(1.0, 1000.0)), min_size=1, max_size=15
)


@given(sections, st.floats(-1000, 1000))
def test_a_run_ends_on_its_benchmark_and_its_shift_changes_nothing(
    given_sections: list[tuple[float, float]], start: float
) -> None:
    rises, lengths = np.array(given_sections).T
    run = level_run(start, rises, lengths, start + 1.0)
    moved = level_run(start + 500.0, rises, lengths, start + 501.0)
    assert run.elevations_m[-1] == start + 1.0
    assert moved.misclosure_m == pytest.approx(run.misclosure_m, abs=1e-9)
    assert moved.elevations_m - 500.0 == pytest.approx(run.elevations_m, abs=1e-8)
    assert (run.cofactors_m >= 0).all()


@given(sections)
def test_a_loop_run_backwards_has_the_opposite_misclosure(
    given_sections: list[tuple[float, float]],
) -> None:
    rises, lengths = np.array(given_sections).T
    run = level_run(10.0, rises, lengths)
    back = level_run(10.0, -rises[::-1], lengths[::-1])
    assert back.misclosure_m == pytest.approx(-run.misclosure_m, abs=1e-12)
    assert back.elevations_m[::-1] == pytest.approx(run.elevations_m, abs=1e-9)


@given(st.lists(st.floats(allow_nan=True, allow_infinity=True), min_size=1, max_size=4))
def test_any_rises_give_finite_elevations_or_a_refusal(rises: list[float]) -> None:
    try:
        run = level_run(0.0, rises, [1.0] * len(rises))
    except GeometryError as refusal:
        assert refusal.what
    else:
        assert all(math.isfinite(value) for value in run.elevations_m)
