"""A resected point is where the three marks say, and the danger circle is named."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from geometry.cogo import Resection, inverse, resection
from geometry.errors import (
    CoincidentPoints,
    DangerCircle,
    GeometryError,
    NoIntersection,
    NotFinite,
    WrongShape,
)
from geometry.units import Angle

P, Q = (1303.599, 1458.615), (1636.436, 1310.468)
R, S = (1503.395, 888.362), (1506.262, 785.061)
TRIANGLE = [(0.0, 0.0), (100.0, 0.0), (0.0, 100.0)]

coordinate = st.floats(-500.0, 500.0)
place = st.tuples(coordinate, coordinate)


def from_angles(marks: list[tuple[float, float]], *angles: str) -> Resection:
    turned = np.cumsum([0.0, *(Angle.parse(angle).radians for angle in angles)])
    return resection(marks, turned)


def seen(marks: list[tuple[float, float]], at: tuple[float, float]) -> np.ndarray:
    return np.array([inverse(at, mark).azimuth_rad for mark in marks])


def test_a_resection_from_the_first_three_of_a_published_net() -> None:
    # Krumm 2020, Ghilani 2010 Ex. 15.5 (data); exact three-point answer recomputed
    at = from_angles([P, Q, R], "30-29-33", "38-30-31")
    assert at.point_m == pytest.approx((1000.02855, 999.96117), abs=2e-5)


def test_a_resection_from_the_last_three_of_a_published_net() -> None:
    # Krumm 2020, Ghilani 2010 Ex. 15.5 (data); exact three-point answer recomputed
    at = from_angles([Q, R, S], "38-30-31", "10-29-57")
    assert at.point_m == pytest.approx((999.97943, 1000.04295), abs=2e-5)


@given(st.floats(0.01, 2 * math.pi - 0.01))
def test_on_the_danger_circle_there_is_no_answer(turn: float) -> None:
    at = (
        50 + 50 * math.sqrt(2) * math.sin(turn),
        50 + 50 * math.sqrt(2) * math.cos(turn),
    )
    assume(min(math.dist(at, mark) for mark in TRIANGLE) > 1.0)
    with pytest.raises(DangerCircle, match="another mark"):
        resection(TRIANGLE, seen(TRIANGLE, at))


def test_on_the_line_through_its_marks_there_is_no_answer() -> None:
    marks = [(0.0, 0.0), (10.0, 0.0), (30.0, 0.0)]
    with pytest.raises(DangerCircle):
        resection(marks, seen(marks, (50.0, 0.0)))
    assert resection(marks, seen(marks, (50.0, 8.0))).point_m == pytest.approx((50, 8))


def test_near_the_danger_circle_the_answer_is_called_weak() -> None:
    assert resection(TRIANGLE, seen(TRIANGLE, (105.0, 100.0))).weak
    assert not resection(TRIANGLE, seen(TRIANGLE, (30.0, 30.0))).weak


def test_directions_that_fit_no_place_are_refused() -> None:
    readings = seen(TRIANGLE, (30.0, 30.0))
    readings[0] += math.pi
    with pytest.raises(NoIntersection):
        resection(TRIANGLE, readings)
    with pytest.raises(NoIntersection, match="far beyond"):
        resection(TRIANGLE, [1.0, 1.0, 1.0])


def test_marks_that_are_the_same_and_points_on_a_mark_are_refused() -> None:
    with pytest.raises(CoincidentPoints):
        resection([(0, 0), (0, 0), (1, 1)], [0.0, 1.0, 2.0])
    with pytest.raises(WrongShape):
        resection(TRIANGLE[:2], [0.0, 1.0])
    with pytest.raises(NotFinite):
        resection(TRIANGLE, [0.0, math.nan, 1.0])


@given(st.tuples(place, place, place), place, st.floats(0, 2 * math.pi))
def test_the_point_is_found_wherever_it_stands(
    marks: tuple[tuple[float, float], ...], at: tuple[float, float], zero: float
) -> None:
    known = list(marks)
    assume(min(math.dist(known[i], known[i - 1]) for i in range(3)) > 10)
    assume(min(math.dist(at, mark) for mark in known) > 10)
    readings = seen(known, at)
    try:
        found = resection(known, readings - zero)
    except DangerCircle:
        return
    assume(math.sqrt(np.trace(found.cofactor_m2)) < 1e5)
    assert found.point_m == pytest.approx(at, abs=1e-5)
    assert math.cos(found.orientation_rad - zero) == pytest.approx(1.0, abs=1e-9)
    assert found.distances_m == pytest.approx(
        [math.dist(at, mark) for mark in known], abs=1e-5
    )


@given(place, st.floats(-1e7, 1e7), st.permutations(range(3)))
def test_shift_and_order_of_marks_change_nothing(
    at: tuple[float, float], shift: float, order: list[int]
) -> None:
    assume(min(math.dist(at, mark) for mark in TRIANGLE) > 5)
    readings = seen(TRIANGLE, at)
    try:
        there = resection(TRIANGLE, readings)
    except GeometryError:
        return
    assume(math.sqrt(np.trace(there.cofactor_m2)) < 1e4)
    marks = np.array(TRIANGLE)[order] + shift
    other = resection(marks, readings[order])
    assert other.point_m - shift == pytest.approx(there.point_m, abs=1e-4)
    assert other.circle_clearance == pytest.approx(there.circle_clearance, abs=1e-5)


def test_the_covariance_is_what_simulation_finds() -> None:
    at, sd = (180.0, 60.0), math.radians(5 / 3600)
    readings = seen(TRIANGLE, at)
    rng = np.random.default_rng(20240311)
    runs = [
        resection(TRIANGLE, readings + rng.normal(0.0, sd, 3)).point_m
        for _ in range(3000)
    ]
    expected = resection(TRIANGLE, readings).covariance(sd)
    assert np.cov(np.array(runs).T) == pytest.approx(expected, rel=0.12)


anything = st.floats(allow_nan=True, allow_infinity=True)


@settings(max_examples=200)
@given(
    st.lists(st.tuples(anything, anything), min_size=3, max_size=3),
    st.lists(anything, min_size=3, max_size=3),
)
def test_any_numbers_give_a_finite_point_or_a_refusal(
    marks: list[tuple[float, float]], readings: list[float]
) -> None:
    try:
        at = resection(marks, readings)
    except GeometryError as refusal:
        assert refusal.what
    else:
        assert np.isfinite(at.point_m).all()
        assert np.isfinite(at.cofactor_m2).all()


@given(
    st.lists(st.tuples(st.integers(-3, 3), st.integers(-3, 3)), min_size=3, max_size=3),
    st.lists(
        st.sampled_from([k * math.pi / 4 for k in range(8)]), min_size=3, max_size=3
    ),
)
def test_special_positions_give_a_finite_point_or_a_refusal(
    marks: list[tuple[int, int]], readings: list[float]
) -> None:
    try:
        at = resection(marks, readings)
    except GeometryError as refusal:
        assert refusal.do or refusal.what
    else:
        assert np.isfinite(at.cofactor_m2).all()
        for mark, reading in zip(marks, readings, strict=True):
            sight = inverse(at.point_m, mark).azimuth_rad
            assert math.cos(sight - reading - at.orientation_rad) == pytest.approx(1.0)
