"""Predicted precision of points: polar, free station, setting-out numbers."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.optimize import least_squares

from geometry.ellipse import ellipse
from geometry.errors import CoincidentPoints, EmptyInput, GeometryError, Singular
from geometry.precision import (
    Grade,
    TotalStation,
    cut_fill,
    free_station,
    one_face,
    polar,
    resected,
    setting_out,
    shown_cut_fill,
    sighted,
)
from geometry.precision.free_station import design, solved
from geometry.verdicts import Verdict

SECOND = math.pi / 648000
MM2 = 1e-6
S, B, T = (1000.0, 2000.0), (1080.0, 2030.0), (985.0, 2055.0)
C_S = MM2 * np.array([[9, 2], [2, 4.0]])
C_B = MM2 * np.array([[6, -1], [-1, 8.0]])
C_SB = MM2 * np.array([[2, 0.5], [0.3, 1.0]])
SEVEN = TotalStation(
    direction_sd_rad=7 * SECOND / math.sqrt(2),
    distance_sd_m=0.002,
    distance_ppm=2,
    station_centring_m=0.0015,
    backsight_centring_m=0.001,
    target_centring_m=0.003,
)
PLAIN = TotalStation(
    direction_sd_rad=5 * SECOND,
    station_centring_m=0,
    backsight_centring_m=0,
    target_centring_m=0,
)
coordinate = st.floats(-300, 300)
place = st.tuples(coordinate, coordinate)


def predicted(shift=(0.0, 0.0)):
    s, b, t = (np.add(p, shift) for p in (S, B, T))
    return polar(
        s,
        b,
        t,
        SEVEN,
        station_covariance=C_S,
        backsight_covariance=C_B,
        station_backsight_covariance=C_SB,
    )


def test_a_polar_point_has_the_worked_covariance():
    # Computed with correlated control; Monte-Carlo of 400,000 agreed to 0.5 %.
    c = predicted().covariance_m2 / MM2
    assert [c[0, 0], c[0, 1], c[1, 1]] == pytest.approx(
        [27.1257, 5.8845, 21.1689], abs=5e-4
    )
    e = predicted().ellipse_95
    assert [1000 * e.semi_major_m, 1000 * e.semi_minor_m] == pytest.approx(
        [13.572, 10.255], abs=1e-3
    )
    assert math.degrees(e.azimuth_rad) == pytest.approx(58.42, abs=0.01)


def test_the_polar_covariance_and_coverage_agree_with_monte_carlo():
    rng, count = np.random.default_rng(3), 120_000
    joint = np.block([[C_S, C_SB], [C_SB.T, C_B]])
    marks = rng.multivariate_normal(np.zeros(4), joint, count)
    # The instrument stands over the true station less centring, and turns the angle it
    # computed from the recorded values from where the backsight prism really is.
    at = np.array(S) + marks[:, :2] + rng.normal(0, 0.0015, (count, 2))
    back = np.array(B) + marks[:, 2:] + rng.normal(0, 0.001, (count, 2))
    numbers = setting_out(S, B, T)
    reached = back - at
    azimuth = (
        np.arctan2(reached[:, 0], reached[:, 1])
        + numbers.angle_right_rad
        + rng.normal(0, 7 * SECOND, count)
    )
    sd = math.sqrt(SEVEN.distance_variance(numbers.distance_m))
    d = numbers.distance_m + rng.normal(0, sd, count)
    point = at + (d * np.array([np.sin(azimuth), np.cos(azimuth)])).T
    error = point + rng.normal(0, 0.003, (count, 2)) - T
    expected = predicted().covariance_m2
    assert np.cov(error.T) == pytest.approx(expected, abs=0.03 * expected[0, 0])
    size = np.einsum("ni,ij,nj->n", error, np.linalg.inv(expected), error)
    assert (size < 5.991465).mean() == pytest.approx(0.95, abs=0.003)


def test_a_point_a_hundred_metres_off_has_the_standard_error_of_the_error_model():
    # Azimuth 0, 100 m, 2 mm + 2 ppm, 5" (formula of Ghilani ch. 7, from memory); the
    # direction is that of one pointing, the angle of two.
    one = TotalStation(
        direction_sd_rad=5 * SECOND / math.sqrt(2),
        station_centring_m=0,
        backsight_centring_m=0,
        target_centring_m=0,
    )
    c = polar((0, 0), (1e6, 0), (0, 100), one).covariance_m2
    assert 1000 * np.sqrt(np.diag(c)) == pytest.approx([2.424, 2.010], abs=5e-4)


def test_edm_of_3_mm_and_3_ppm_over_100_feet_is_a_hundredth_of_a_foot():
    # Published worked example: +-(3 mm + 3 ppm) at 100 ft gives 0.009847 ft.
    edm = TotalStation(distance_sd_m=0.003, distance_ppm=3)
    sd = math.sqrt(edm.distance_variance(30.48)) / 0.3048
    assert sd == pytest.approx(0.0098471, abs=1e-6)


def test_target_centring_turns_an_angle_by_the_published_amount():
    # Ghilani, Adjustment Computations, ch. 7 example (from memory): 0.003 ft at 250 and
    # 450 ft turns the angle by 2.8"; here as the lateral error it makes at the target.
    quiet = TotalStation(
        direction_sd_rad=0,
        distance_sd_m=0,
        distance_ppm=0,
        station_centring_m=0,
        backsight_centring_m=0.003,
        target_centring_m=0.003,
    )
    c = polar((0, 0), (250, 0), (0, 450), quiet).covariance_m2
    assert math.sqrt(c[0, 0]) / 450 / SECOND == pytest.approx(2.8315, abs=1e-3)


def test_an_ellipse_of_a_published_propagation_has_its_half_axes():
    # Mikhail & Ackermann ex. 4.3: A [[2, 1], [1, 2]], Cyy [[3, 1], [1, 3]].
    a = np.linalg.inv([[2.0, 1.0], [1.0, 2.0]])
    e = ellipse(a @ np.array([[3.0, 1.0], [1.0, 3.0]]) @ a.T, factor=1.0)
    assert e.semi_major_m == pytest.approx(math.sqrt(2))
    assert e.semi_minor_m == pytest.approx(2 / 3)


@given(place, place, place, st.floats(0, 6.28), place)
def test_polar_precision_does_not_depend_on_origin_or_north(s, b, t, turn, shift):
    assume(min(math.dist(s, b), math.dist(s, t)) > 1)
    c, n = math.cos(turn), math.sin(turn)
    r = np.array([[c, n], [-n, c]])
    one = polar(s, b, t, SEVEN, station_covariance=C_S).covariance_m2
    moved = [r @ np.array(p) + 1000 * np.array(shift) for p in (s, b, t)]
    two = polar(*moved, SEVEN, station_covariance=r @ C_S @ r.T).covariance_m2
    assert r @ one @ r.T == pytest.approx(two, rel=1e-4, abs=1e-12)


def test_polar_precision_holds_at_state_plane_coordinates():
    far = predicted((500_000.0, 4_200_000.0)).covariance_m2
    assert far == pytest.approx(predicted().covariance_m2, rel=1e-7)


@given(place, st.lists(place, min_size=3, max_size=8), place)
def test_a_free_station_is_carried_by_its_jacobians(p, marks, t):
    """Covariance = gain C gain' + noise, and marks shifted together shift it."""
    assume(min(math.dist(p, m) for m in marks) > 1 and math.dist(p, t) > 1)
    assume(np.linalg.svd(np.array(marks) - np.mean(marks, 0))[1][1] > 5)
    joint = MM2 * (9 * np.eye(2 * len(marks)) + 4)
    free = free_station(p, marks, SEVEN, joint)
    whole = free.gain @ joint @ free.gain.T + free.noise
    assert whole == pytest.approx(free.covariance, rel=1e-6, abs=1e-15)
    common = np.tile(np.eye(2), (len(marks), 1))
    assert free.gain[:2] @ common == pytest.approx(np.eye(2), abs=1e-6)
    target = sighted(free, t, SEVEN)
    assert target.to_marks @ common == pytest.approx(np.eye(2), abs=1e-6)
    total = target.to_marks @ joint @ target.to_marks.T + target.noise_m2
    assert total == pytest.approx(target.covariance_m2, rel=1e-6, abs=1e-15)


def test_a_free_station_agrees_with_monte_carlo_of_its_own_solution():
    rng = np.random.default_rng(5)
    marks = np.array([(0, 60.0), (55, 10), (-40, -30), (20, -50)])
    p, t = np.array((3.0, 4.0)), np.array((30.0, 25.0))
    joint = MM2 * (4 * np.eye(8) + 5 * np.kron(np.ones((4, 4)), np.eye(2)))
    free = free_station(p, marks, SEVEN, joint)
    expected = sighted(free, t, SEVEN).covariance_m2
    errors = []
    for _ in range(1500):
        true = marks + rng.multivariate_normal(np.zeros(8), joint).reshape(4, 2)
        sight = true + rng.normal(0, 0.003, (4, 2)) - p
        d = np.hypot(*sight.T) + rng.normal(0, 0.002, 4)
        r = np.arctan2(*sight.T) + rng.normal(0, SEVEN.direction_sd_rad, 4)
        fix = resected(marks, d, r, SEVEN, joint)
        ray = t - p
        a = math.atan2(*ray) + fix.orientation_rad + rng.normal(0, 0)
        a += rng.normal(0, SEVEN.direction_sd_rad)
        e = np.hypot(*ray) + rng.normal(0, 0.002)
        point = fix.station + e * np.array([math.sin(a), math.cos(a)])
        errors.append(point - t + rng.normal(0, 0.003, 2))
    assert np.cov(np.array(errors).T) == pytest.approx(
        expected, abs=0.12 * expected[0, 0]
    )


def test_the_smallest_move_of_a_mark_is_found_four_times_in_five():
    """In its worst direction, by the test of that mark at 0.001."""
    rng = np.random.default_rng(6)
    marks = np.array([(0, 60.0), (55, 10), (-40, -30), (20, -50)])
    joint = MM2 * np.eye(8)
    free = free_station((3, 4), marks, PLAIN, joint)
    rows, noise = design(marks - (3.0, 4.0), PLAIN)
    _, _, weight = solved(rows, noise + joint)
    block = weight[2:4, 2:4]
    worst = np.linalg.eigh(block)[1][:, 0]
    gaps = rng.multivariate_normal(np.zeros(8), noise + joint, 100_000)
    gaps[:, 2:4] += free.smallest_moves_m[1] * worst
    pull = (gaps @ weight)[:, 2:4]
    test = np.einsum("ni,ij,nj->n", pull, np.linalg.inv(block), pull)
    assert (test > 13.8155).mean() == pytest.approx(0.80, abs=0.01)


def test_two_marks_cannot_tell_which_of_them_moved():
    free = free_station((0, 0), [(0, 50), (40, 0)], PLAIN)
    assert free.redundancy == 1
    assert free.smallest_moves_m == (math.inf, math.inf)


def test_a_measured_free_station_agrees_with_scipy():
    marks = np.array(
        [(500_000.0, 4_200_060), (500_055, 4_200_010), (499_960, 4_199_970)]
    )
    rng = np.random.default_rng(8)
    p = np.array((500_003.0, 4_200_004.0))
    sight = marks - p
    d = np.hypot(*sight.T) + rng.normal(0, 0.002, 3)
    r = np.arctan2(*sight.T) - 1.0 + rng.normal(0, 5 * SECOND, 3)
    fix = resected(marks, d, r, PLAIN)

    def gaps(x):
        ray = marks - p - x[:2]
        sd = np.sqrt([PLAIN.distance_variance(v) for v in d])
        turn = np.arctan2(*ray.T) - r - x[2]
        turn = (turn + np.pi) % (2 * np.pi) - np.pi
        return np.concatenate(
            [(np.hypot(*ray.T) - d) / sd, turn / PLAIN.direction_sd_rad]
        )

    best = least_squares(
        gaps, [0, 0, 1.0], x_scale=[1, 1, 1e-3], xtol=1e-15, ftol=1e-15
    )
    assert fix.station - p == pytest.approx(best.x[:2], abs=2e-6)
    assert fix.orientation_rad == pytest.approx(best.x[2], abs=1e-7)
    assert fix.misfit == pytest.approx(2 * best.cost, rel=1e-2)


def test_a_mark_recorded_wrong_makes_the_fix_fail():
    marks = np.array([(0, 50.0), (50, 0), (-40, -40)])
    d, r = np.hypot(*marks.T), np.arctan2(*marks.T) % (2 * math.pi)
    assert resected(marks, d, r, PLAIN).verdict is Verdict.PASS
    bad = marks + np.array([(0, 0), (0.05, 0), (0, 0)])
    assert resected(bad, d, r, PLAIN).verdict is Verdict.FAIL


def test_marks_at_one_place_do_not_fix_a_station():
    with pytest.raises(Singular):
        free_station((0, 0), [(0, 50), (0, 50)], PLAIN)
    with pytest.raises(CoincidentPoints):
        resected([(0, 50), (0, 50)], [50, 50], [0, 0], PLAIN)
    with pytest.raises(EmptyInput):
        free_station((0, 0), [(0, 50)], PLAIN)
    with pytest.raises(CoincidentPoints):
        free_station((0, 50), [(0, 50), (50, 0)], PLAIN)


def test_the_angle_right_is_turned_clockwise_from_the_backsight():
    numbers = setting_out((0, 0), (0, 100), (-30, 40))
    assert math.degrees(numbers.angle_right_rad) == pytest.approx(323.1301, abs=1e-4)
    assert numbers.distance_m == 50 and numbers.backsight_m == 100


def test_inverse_of_published_courses_gives_their_azimuth_and_distance():
    # Open Access Surveying Library, COGO chapter: N 480.951, E 1811.082 from
    # N 1000, E 2000 at az 200-00-00, 552.360; the printed point is rounded.
    numbers = setting_out((2000, 1000), (2000, 2000), (1811.082, 480.951))
    assert math.degrees(numbers.azimuth_rad) == pytest.approx(200.0, abs=1e-4)
    assert numbers.distance_m == pytest.approx(552.360, abs=5e-4)


@given(place, place, place)
def test_setting_out_numbers_lead_back_to_the_point(s, b, t):
    assume(min(math.dist(s, b), math.dist(s, t)) > 1e-3)
    n = setting_out(s, b, t)
    a = n.backsight_azimuth_rad + n.angle_right_rad
    back = s + n.distance_m * np.array([math.sin(a), math.cos(a)])
    assert back == pytest.approx(t, abs=1e-9)
    assert 0 <= n.angle_right_rad <= 2 * math.pi


def test_a_stake_above_design_is_a_cut():
    # Caltrans and FM 5-233 convention (from memory): C is above design, F below.
    assert cut_fill(101.25, 100).grade is Grade.CUT
    assert cut_fill(99.7, 100).grade is Grade.FILL
    assert cut_fill(100, 100).grade is Grade.ON_GRADE
    assert shown_cut_fill(-0.0049, 2) == (Grade.ON_GRADE, "0.00")


def test_one_face_is_worse_than_two_by_the_square_root_of_two():
    # ISO 17123-3 (from memory): the figure holds for two faces.
    assert one_face(5 * SECOND) == pytest.approx(7.0711 * SECOND, rel=1e-4)


wild = st.floats() | st.sampled_from([0.0, 1e7, -1e7, 1e-9])


@given(*(st.tuples(wild, wild) for _ in range(4)))
def test_any_points_give_numbers_or_a_named_error(s, b, t, extra):
    for call in (
        lambda: polar(s, b, t, SEVEN).covariance_m2,
        lambda: free_station(s, [b, t, extra], SEVEN).covariance,
        lambda: [setting_out(s, b, t).angle_right_rad],
    ):
        try:
            answer = np.asarray(call())
        except GeometryError as error:
            assert str(error)
        else:
            assert np.isfinite(answer).all()


def test_an_ellipse_has_the_axes_of_a_published_propagation() -> None:
    # Mikhail & Ackermann, example 4.3: y = A x, worked by hand as C_xx = A^-1 C_yy A^-T.
    a = np.linalg.inv(np.array([[2.0, 1.0], [1.0, 2.0]]))
    covariance = a @ np.array([[3.0, 1.0], [1.0, 3.0]]) @ a.T
    assert np.ones(2) @ covariance @ np.ones(2) == pytest.approx(8 / 9)
    axes = ellipse(covariance, factor=1.0)
    assert axes.semi_major_m == pytest.approx(math.sqrt(2))
    assert axes.semi_minor_m == pytest.approx(2 / 3)
    assert math.degrees(axes.azimuth_rad) == pytest.approx(135.0)
