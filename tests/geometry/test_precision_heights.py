"""Heights: trigonometric, by level, combined from benchmarks."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import EmptyInput, GeometryError, OutOfRange, WrongShape
from geometry.precision import (
    Level,
    TotalStation,
    combined_height,
    curvature_refraction,
    level_run_variance,
    one_setup_variance,
    trigonometric_height,
)
from geometry.verdicts import Verdict


@pytest.mark.parametrize(
    ("refraction", "expected"), [(0.14, 0.067493), (0.13, 0.068278), (0.0, 0.07848)]
)
def test_curvature_and_refraction_over_a_kilometre_are_the_published_ones(
    refraction, expected
):
    # Ghilani & Wolf eq. 4.3-4.5 (from memory) and public copies: 0.0675, 0.0683, 0.0785.
    assert curvature_refraction(1000, refraction) == pytest.approx(expected, abs=2e-5)


def test_curvature_and_refraction_over_a_mile_are_half_a_foot():
    # Ghilani & Wolf: 0.574 M^2 in feet and miles (from memory).
    feet = curvature_refraction(1609.344, 0.14) / 0.3048
    assert feet == pytest.approx(0.574, abs=2e-3)


def test_a_sight_of_1200_metres_is_low_by_ten_centimetres():
    # Public worked example: 1.2 km, 0.0673 x 1.44 = 0.0969 m (refraction 1/7).
    assert curvature_refraction(1200, 1 / 7) == pytest.approx(0.0969, abs=2e-4)


def test_trigonometric_heights_have_the_simulated_spread():
    rng, n = np.random.default_rng(4), 100_000
    station = TotalStation()
    s, z = 250.0, math.radians(84)
    got = trigonometric_height(s, z, 1.55, 1.80, station)
    slope = s + rng.normal(0, math.sqrt(station.distance_variance(s)), n)
    zenith = z + rng.normal(0, station.zenith_sd_rad, n)
    k = 0.13 + rng.normal(0, 0.05, n)
    flat = slope * np.sin(zenith)
    heights = (
        slope * np.cos(zenith)
        + (1 - k) * flat**2 / (2 * 6_372_000)
        + rng.normal(0, station.height_sd_m, n)
        - rng.normal(0, station.height_sd_m, n)
        - 0.25
    )
    assert heights.mean() == pytest.approx(got.difference_m, abs=2e-4)
    assert heights.var() == pytest.approx(got.variance_m2, rel=0.02)


def test_there_and_back_by_zenith_angles_cancels_curvature():
    there = trigonometric_height(500, math.radians(88), 1.5, 1.5, TotalStation())
    back = trigonometric_height(500, math.radians(92) + 0, 1.5, 1.5, TotalStation())
    mean = (there.difference_m - back.difference_m) / 2
    assert mean == pytest.approx(500 * math.cos(math.radians(88)), abs=1e-9)


def test_a_level_line_grows_with_the_root_of_its_length():
    one, four = (level_run_variance(x, Level()) for x in (1000, 4000))
    assert math.sqrt(four) == pytest.approx(2 * math.sqrt(one))


def test_unequal_sights_carry_the_collimation_error():
    even, uneven = (
        one_setup_variance(*x, Level(reading_sd_m=0, collimation_rad=1e-4))
        for x in ((30, 30), (10, 50))
    )
    assert even == 0
    assert math.sqrt(uneven) == pytest.approx(0.004)


def test_benchmarks_that_disagree_are_a_question_and_not_averaged_silently():
    # The value of one benchmark is 0.10 ft off: a common find on a site.
    answer = combined_height([100.000, 100.0305], [1e-6, 1e-6])
    assert answer.verdict is Verdict.FAIL
    assert combined_height([100.0, 100.001], [1e-6, 1e-6]).verdict is Verdict.PASS


def test_one_benchmark_alone_is_not_tested():
    assert combined_height([100.0], [1e-6]).verdict is Verdict.NOT_TESTED


@given(
    st.lists(
        st.tuples(st.floats(-500, 5000), st.floats(1e-8, 1e-2)), min_size=1, max_size=6
    ),
    st.floats(-1000, 1000),
)
def test_a_combined_height_lies_between_and_shifts_with_its_datum(rows, shift):
    heights, variances = zip(*rows, strict=True)
    one = combined_height(heights, variances)
    assert min(heights) - 1e-6 <= one.height_m <= max(heights) + 1e-6
    two = combined_height([h + shift for h in heights], variances)
    assert two.height_m == pytest.approx(one.height_m + shift, abs=1e-6)
    assert one.variance_m2 <= min(variances) * (1 + 1e-9)


def test_wrong_height_input_is_named():
    with pytest.raises(EmptyInput):
        combined_height([], [])
    with pytest.raises(WrongShape):
        combined_height([1.0], [1e-6, 1e-6])
    with pytest.raises(OutOfRange):
        combined_height([1.0], [0.0])
    with pytest.raises(OutOfRange):
        trigonometric_height(100, math.radians(270), 1, 1, TotalStation())


@given(st.floats(), st.floats(), st.floats(), st.floats())
def test_any_sight_gives_a_height_or_a_named_error(s, z, hi, ht):
    try:
        got = trigonometric_height(s, z, hi, ht, TotalStation())
    except GeometryError as error:
        assert str(error)
    else:
        assert not math.isnan(got.difference_m)


@given(st.lists(st.tuples(st.floats(), st.floats()), max_size=4))
def test_any_heights_are_combined_or_a_named_error(rows):
    try:
        got = combined_height([r[0] for r in rows], [r[1] for r in rows])
    except GeometryError as error:
        assert str(error)
    else:
        assert math.isfinite(got.height_m) and math.isfinite(got.misfit)


@given(st.floats(), st.floats(), st.floats())
def test_an_instrument_with_impossible_figures_is_named(a, b, c):
    try:
        tool = TotalStation(a, b, c)
        level = Level(a, b, c)
    except GeometryError as error:
        assert str(error)
    else:
        assert math.isfinite(tool.distance_variance(100.0))
        assert math.isfinite(one_setup_variance(10, 50, level))
