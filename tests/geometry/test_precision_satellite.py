"""Localisation of satellite positions on the control of a site."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from geometry.errors import (
    CoincidentPoints,
    CollinearPoints,
    EmptyInput,
    GeometryError,
    WrongShape,
)
from geometry.precision import (
    local_height,
    local_point,
    localised,
    localised_heights,
)
from geometry.verdicts import Verdict

CONTROL = np.array([(1000, 2000.0), (1180, 2040), (1150, 2190), (990, 2160)])
place = st.tuples(st.floats(-300, 300), st.floats(-300, 300))


def turned(points, turn, shift):
    c, s = math.cos(turn), math.sin(turn)
    return np.asarray(points) @ np.array([[c, -s], [s, c]]) + shift


@given(
    st.lists(place, min_size=2, max_size=7),
    st.floats(-math.pi, math.pi),
    st.tuples(st.floats(-1e6, 1e6), st.floats(-5e6, 5e6)),
    place,
)
def test_a_pure_shift_and_turn_is_recovered(points, turn, shift, extra):
    assume(np.ptp(points, axis=0).max() > 1)
    fit = localised(points, turned(points, turn, shift), 0.01)
    assert fit.residuals_m == pytest.approx(np.zeros((len(points), 2)), abs=1e-6)
    got = local_point(fit, extra, 0.01).point
    reach = np.abs(points).max() + 300
    spread = np.ptp(points, axis=0).max()
    limit = 1e-7 * max(1.0, reach / spread)
    assert got == pytest.approx(turned([extra], turn, shift)[0], abs=max(limit, 1e-6))


def test_a_scale_is_an_alarm_and_never_applied():
    fit = localised(CONTROL * 1.0002, CONTROL, 0.001)
    assert fit.scale_ppm == pytest.approx(-200, abs=1)
    assert abs(fit.scale_ppm) > 5 * fit.scale_sd_ppm
    assert fit.verdict is Verdict.FAIL


def test_a_disturbed_control_mark_stands_out_when_left_out():
    moved = CONTROL.copy()
    moved[2] += (0.06, -0.02)
    fit = localised(CONTROL, moved, 0.005)
    assert fit.verdict is Verdict.FAIL
    assert int(np.argmax(fit.left_out_m)) == 2
    assert fit.left_out_m[2] == pytest.approx(math.hypot(0.06, 0.02), rel=1e-4)


def test_what_a_mark_left_out_shows_is_what_the_others_alone_would_give():
    rng = np.random.default_rng(2)
    noisy = CONTROL + rng.normal(0, 0.01, CONTROL.shape)
    fit = localised(CONTROL, noisy, 0.01)
    others = np.delete(np.arange(4), 1)
    alone = localised(CONTROL[others], noisy[others], 0.01)
    gap = noisy[1] - local_point(alone, CONTROL[1], 0.01).point
    assert fit.left_out_m[1] == pytest.approx(np.hypot(*gap), rel=1e-3)


def test_two_marks_check_only_their_distance():
    fit = localised(CONTROL[:2], CONTROL[:2], 0.01)
    assert fit.verdict is Verdict.NOT_TESTED and fit.redundancy == 1
    assert np.isinf(fit.left_out_m).all()
    assert fit.smallest_moves_m == (math.inf, math.inf)


def test_the_predicted_covariance_agrees_with_monte_carlo():
    rng = np.random.default_rng(9)
    joint = 1e-6 * (4 * np.eye(8) + 9 * np.kron(np.ones((4, 4)), np.eye(2)))
    target = np.array((1300.0, 2100.0))
    expected = local_point(localised(CONTROL, CONTROL, 0.01, joint), target, 0.01)
    errors = []
    for _ in range(2000):
        # What is recorded of the control is off by its joint error; the satellite
        # receiver sees the true places.
        recorded = CONTROL + rng.multivariate_normal(np.zeros(8), joint).reshape(4, 2)
        seen = CONTROL + rng.normal(0, 0.01, (4, 2))
        fit = localised(seen, recorded, 0.01, joint)
        point = local_point(fit, target + rng.normal(0, 0.01, 2), 0.01).point
        errors.append(point - target)
    assert np.cov(np.array(errors).T) == pytest.approx(
        expected.covariance_m2, abs=0.1 * expected.covariance_m2[0, 0]
    )


def test_a_point_beyond_the_control_is_said_to_be_outside():
    fit = localised(CONTROL, CONTROL, 0.01)
    assert local_point(fit, CONTROL.mean(axis=0), 0.01).outside_m == 0
    assert local_point(fit, (2000, 2000), 0.01).outside_m > 500


def test_a_plane_through_heights_is_recovered():
    dz = 0.3 + 1e-4 * (CONTROL[:, 0] - 1080) - 2e-4 * (CONTROL[:, 1] - 2097.5)
    fit = localised_heights(CONTROL, dz, [0.01] * 4, tilt=True)
    assert fit.parameters == pytest.approx([0.3, 1e-4, -2e-4], abs=1e-9)
    height, variance = local_height(fit, CONTROL[0], 50.0, 0.015)
    assert height == pytest.approx(50 + dz[0])
    assert variance > 0.015**2


def test_a_shift_shows_a_benchmark_that_disagrees():
    good = localised_heights(CONTROL, [0.30, 0.31, 0.29, 0.30], [0.01] * 4)
    bad = localised_heights(CONTROL, [0.30, 0.31, 0.29, 0.40], [0.01] * 4)
    assert good.verdict is Verdict.PASS and bad.verdict is Verdict.FAIL


def test_a_plane_through_three_marks_is_not_tested_and_on_one_line_refused():
    fit = localised_heights(CONTROL[:3], [0.3, 0.3, 0.3], [0.01] * 3, tilt=True)
    assert fit.verdict is Verdict.NOT_TESTED
    line = [(0, 0), (10, 10), (20, 20)]
    with pytest.raises(CollinearPoints):
        localised_heights(line, [0.3] * 3, [0.01] * 3, tilt=True)


def test_too_few_or_coincident_marks_are_named():
    with pytest.raises(EmptyInput):
        localised([(0, 0)], [(0, 0)], 0.01)
    with pytest.raises(WrongShape):
        localised([(0, 0), (1, 1)], [(0, 0)], 0.01)
    with pytest.raises(CoincidentPoints):
        localised([(5, 5), (5, 5)], [(0, 0), (9, 9)], 0.01)


wild = st.floats() | st.sampled_from([1e7, 0.0])


@given(st.lists(st.tuples(wild, wild, wild, wild), min_size=1, max_size=4), wild)
def test_any_pairs_give_a_fit_or_a_named_error(rows, sd):
    try:
        fit = localised([r[:2] for r in rows], [r[2:] for r in rows], sd)
    except GeometryError as error:
        assert str(error)
    else:
        assert np.isfinite(fit.residuals_m).all()
