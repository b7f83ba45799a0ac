"""A traverse closes, is balanced by the compass rule, and is judged by its class."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.cogo import (
    TRAVERSE_CLASSES,
    TraverseClass,
    angular_closure,
    area,
    balanced_link_angles,
    balanced_loop_angles,
    carried_azimuths,
    linear_closure,
    traverse,
)
from geometry.errors import EmptyInput, GeometryError, NotFinite, OutOfRange, WrongShape
from geometry.units import Angle
from geometry.verdicts import Verdict


def az(text: str) -> float:
    return Angle.parse_direction(text).radians


FIVE = [
    ("S 6°15' W", 189.53),
    ("S 29°38' E", 175.18),
    ("N 81°18' W", 197.78),
    ("N 12°24' W", 142.39),
    ("N 42°59' E", 234.58),
]
FOUR = [("N 76 E", 80.40), ("S 36 E", 46.30), ("S 61 W", 72.80), ("N 38 W", 68.00)]


def test_a_closed_traverse_balances_by_the_compass_rule() -> None:
    # Univ. of Memphis, CIVL 1112 notes: course, closure and balanced positions
    loop = traverse((0, 0), [az(b) for b, _ in FIVE], [d for _, d in FIVE])
    assert loop.latitudes_m == pytest.approx(
        [-188.403, -152.268, 29.916, 139.068, 171.607], abs=1.5e-3
    )
    assert loop.departures_m[0] == pytest.approx(-20.634, abs=1.5e-3)
    assert loop.misclosure_m == pytest.approx((-0.163, -0.079), abs=1.5e-3)
    assert loop.linear_misclosure_m == pytest.approx(0.182, abs=1e-3)
    assert loop.length_m == pytest.approx(939.46)
    assert loop.ratio == pytest.approx(5175, abs=10)
    expected = [
        (-20.601, -188.388),
        (66.047, -340.641),
        (-129.423, -310.708),
        (-159.974, -171.628),
    ]
    assert loop.points_m[1:5] == pytest.approx(np.array(expected), abs=1.5e-3)
    assert area(loop.points_m).area_m2 == pytest.approx(36320.4, abs=0.5)


def test_corrections_are_shared_by_length() -> None:
    # published four-course example, recomputed
    loop = traverse((0, 0), [az(b) for b, _ in FOUR], [d for _, d in FOUR])
    assert loop.latitudes_m == pytest.approx(
        [19.451, -37.457, -35.294, 53.585], abs=1.5e-3
    )
    assert loop.misclosure_m[1] == pytest.approx(0.2845, abs=1e-3)
    assert -loop.corrections_m[:, 1] == pytest.approx(
        [0.0857, 0.0493, 0.0776, 0.0724], abs=5e-4
    )
    assert loop.balanced_m[:3, 0] == pytest.approx(
        [78.1055, 27.2678, -63.5874], abs=5e-4
    )


def test_washington_allows_angles_by_the_root_of_their_number() -> None:
    # Washington WAC 332-130-090: n = 9 gives 30 and 90 seconds
    city, other = TRAVERSE_CLASSES[:2]
    for seconds, by in ((30.0, city), (90.0, other)):
        closure = angular_closure(math.radians(seconds / 3600), 9, by)
        assert math.degrees(closure.allowed) * 3600 == pytest.approx(seconds)
        assert closure.verdict is Verdict.PASS
        worse = angular_closure(-math.radians((seconds + 0.1) / 3600), 9, by)
        assert worse.verdict is Verdict.FAIL


def test_a_traverse_of_1_to_5175_passes_one_class_and_fails_the_other() -> None:
    # Washington WAC 332-130-090
    city, other = TRAVERSE_CLASSES[:2]
    assert linear_closure(0.1816, 939.46, other).verdict is Verdict.PASS
    failed = linear_closure(0.1816, 939.46, city)
    assert failed.verdict is Verdict.FAIL
    assert "0.1816 m" in failed.reason
    assert "0.0939 m" in failed.reason


def test_a_class_without_a_rule_for_angles_says_so() -> None:
    by = TraverseClass("firm's own", "firm", 5000, None)
    assert angular_closure(0.1, 4, by).verdict is Verdict.NOT_TESTED
    with pytest.raises(EmptyInput):
        angular_closure(0.1, 0, by)


def test_interior_and_exterior_angles_close_alike() -> None:
    interior = np.radians([90.0, 90.0, 90.0, 90.004])
    exterior = 2 * math.pi - interior
    for angles, sign in ((interior, 1), (exterior, -1)):
        balanced = balanced_loop_angles(angles)
        assert math.degrees(balanced.misclosure_rad) == pytest.approx(sign * 0.004)
        assert balanced_loop_angles(
            balanced.angles_rad
        ).misclosure_rad == pytest.approx(0.0, abs=1e-12)


def test_a_link_closes_on_its_known_azimuth() -> None:
    angles = np.radians([170.0, 195.0, 182.0])
    last = carried_azimuths(1.0, angles)[-1]
    measured = angles + np.array([0.0002, -0.0001, 0.0002])
    balanced = balanced_link_angles(1.0, measured, float(last))
    assert balanced.misclosure_rad == pytest.approx(0.0003)
    closed = carried_azimuths(1.0, balanced.angles_rad)[-1]
    assert closed == pytest.approx(last, abs=1e-12)


def test_a_link_traverse_ends_on_its_known_mark() -> None:
    link = traverse((10, 20), [0.5, 0.7], [100.0, 150.0], (154.6, 222.4))
    assert link.points_m[-1].tolist() == [154.6, 222.4]
    assert link.points_m[0].tolist() == [10, 20]
    assert link.redundancy == 2


def test_an_exact_closure_has_no_ratio_instead_of_an_infinite_one() -> None:
    assert traverse((0, 0), np.radians([0, 120, 240]), [50.0, 50.0, 50.0]).ratio is None


def test_bad_courses_are_named() -> None:
    with pytest.raises(EmptyInput):
        traverse((0, 0), [], [])
    with pytest.raises(OutOfRange, match="course 2"):
        traverse((0, 0), [0.0, 1.0], [1.0, 0.0])
    with pytest.raises(WrongShape):
        traverse((0, 0), [0.0, 1.0], [1.0])
    with pytest.raises(NotFinite):
        traverse((0, 0), [0.0, math.nan], [1.0, 1.0])
    with pytest.raises(EmptyInput):
        balanced_loop_angles([1.0, 2.0])
    with pytest.raises(EmptyInput):
        balanced_link_angles(0.0, [], 0.0)
    with pytest.raises(OutOfRange, match="angle 2"):
        carried_azimuths(0.0, [1.0, 90.0])


courses = st.lists(
    st.tuples(st.floats(0, 2 * math.pi), st.floats(0.1, 1000.0)),
    min_size=1,
    max_size=20,
)


@given(courses, st.floats(-1e6, 1e6), st.floats(0, 2 * math.pi))
def test_shift_and_rotation_change_no_closure(
    given_courses: list[tuple[float, float]], shift: float, turn: float
) -> None:
    azimuths, distances = np.array(given_courses).T
    here = traverse((0, 0), azimuths, distances)
    there = traverse((shift, shift), azimuths + turn, distances)
    assert there.linear_misclosure_m == pytest.approx(
        here.linear_misclosure_m, abs=1e-8
    )
    assert here.corrections_m.sum(axis=0) == pytest.approx(-here.misclosure_m, abs=1e-9)
    assert here.points_m[-1].tolist() == [0.0, 0.0]
    assert there.distances_m == pytest.approx(here.distances_m, abs=1e-7)


@given(courses)
def test_feet_and_metres_balance_alike(
    given_courses: list[tuple[float, float]],
) -> None:
    azimuths, distances = np.array(given_courses).T
    metres = traverse((0, 0), azimuths, distances * 0.3048)
    feet = traverse((0, 0), azimuths, distances)
    assert metres.points_m == pytest.approx(feet.points_m * 0.3048, abs=1e-9)


@given(
    st.lists(st.floats(allow_nan=True, allow_infinity=True), max_size=5),
    st.lists(st.floats(allow_nan=True, allow_infinity=True), max_size=5),
)
def test_any_courses_give_finite_points_or_a_refusal(
    azimuths: list[float], distances: list[float]
) -> None:
    try:
        answer = traverse((0, 0), azimuths, distances)
    except GeometryError as refusal:
        assert refusal.what
    else:
        assert np.isfinite(answer.points_m).all()
