"""Spreads of instruments, and tolerances that grow with a length."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.decide import (
    accuracy_horizontal,
    fixed_and_ppm,
    growing,
    is_zero,
    position_factor,
    rooted,
    spread_agrees,
    spreads_agree,
)
from geometry.errors import GeometryError, OutOfRange
from geometry.verdicts import Verdict


@pytest.mark.parametrize(("dof", "limit"), [(32, 1.2015), (14, 1.3007), (38, 1.1853)])
def test_a_spread_may_exceed_the_claim_by_what_the_field_tests_allow(dof, limit):
    # ISO 17123-3, -4, -2 full tests: 1.20, 1.30, 1.19 (designs from memory).
    assert spread_agrees(1, 1, dof).high == pytest.approx(limit, abs=1e-4)
    assert spread_agrees(limit * 1.01, 1, dof).verdict is Verdict.FAIL
    assert spread_agrees(limit * 0.99, 1, dof).verdict is Verdict.PASS


@pytest.mark.parametrize(
    ("dof", "low", "high"), [(32, 0.4939, 2.0247), (14, 0.3357, 2.9786)]
)
def test_two_spreads_are_compared_by_the_f_test(dof, low, high):
    # ISO 17123-3 and -4 (designs from memory), quantiles computed.
    answer = spreads_agree(1, dof, 1, dof)
    assert [answer.low, answer.high] == pytest.approx([low, high], abs=1e-4)
    assert spreads_agree(math.sqrt(high * 1.01), dof, 1, dof).verdict is Verdict.FAIL


def test_a_zero_error_is_judged_by_its_own_spread():
    # ISO 17123-4: s / sqrt 5 with 14 degrees of freedom, |delta| <= 0.96 s.
    limit = is_zero(0.0, 1 / math.sqrt(5), 14).high
    assert limit == pytest.approx(0.9592, abs=1e-4)
    assert is_zero(-0.97, 1 / math.sqrt(5), 14).verdict is Verdict.FAIL


@pytest.mark.parametrize(
    ("dof", "quantile"), [(5, 2.571), (10, 2.228), (20, 2.086), (30, 2.042)]
)
def test_a_zero_error_is_allowed_the_published_quantile_of_its_spread(dof, quantile):
    # NIST/SEMATECH e-Handbook 1.3.6.7.2, two-sided 95 %.
    assert is_zero(0.0, 1.0, dof).high == pytest.approx(quantile, abs=5e-4)
    assert is_zero(quantile + 0.001, 1.0, dof).verdict is Verdict.FAIL


def test_the_ellipse_factor_is_the_published_one():
    # NIST/SEMATECH chi-square and F tables: 5.991, F(2,10) 4.103, F(2,20) 3.493.
    assert position_factor() ** 2 == pytest.approx(5.991, abs=1e-3)
    assert position_factor(10) ** 2 / 2 == pytest.approx(4.103, abs=1e-3)
    assert position_factor(20) == pytest.approx(2.643, abs=1e-3)
    assert position_factor(probability=0.3935) == pytest.approx(1.0, abs=1e-3)


def test_the_national_standard_for_horizontal_accuracy_is_followed():
    # FGDC-STD-007.3-1998 app. 3-A: 1.7308 RMSE_r when both are equal.
    assert accuracy_horizontal(0.03, 0.03) == pytest.approx(
        1.7308 * 0.03 * math.sqrt(2), rel=1e-4
    )
    with pytest.raises(OutOfRange):
        accuracy_horizontal(0.01, 0.03)


def test_the_horizontal_accuracy_holds_for_simulated_errors():
    rng = np.random.default_rng(3)
    errors = rng.normal(0, (0.02, 0.025), (200_000, 2))
    radius = accuracy_horizontal(0.02, 0.025)
    assert (np.hypot(*errors.T) < radius).mean() == pytest.approx(0.95, abs=0.005)


def test_a_column_line_may_gather_a_quarter_inch_per_hundred_feet_up_to_one():
    # AISC Code of Standard Practice 7.5.1.
    assert growing(350, 0.25, 100, 1.0) == pytest.approx(7 / 8)
    assert growing(500, 0.25, 100, 1.0) == 1.0


def test_a_column_may_be_out_of_plumb_by_one_in_five_hundred():
    # AISC 303 7.13 as published: 12 ft gives 0.288 in.
    assert growing(12 * 12, 1, 500, 10) == pytest.approx(0.288)


def test_tall_exposed_work_is_capped():
    # ACI 117-90: above 100 ft, height/1000, 6 in at most.
    assert growing(400 * 12, 1, 1000, 6) == pytest.approx(4.8)
    assert growing(900 * 12, 1, 1000, 6) == 6


def test_setting_out_tolerances_grow_with_the_root_of_the_distance():
    # ISO 4463-1 primary and secondary system (from memory; not an oracle).
    assert rooted(50, 0.75, 4) == pytest.approx(5.30, abs=0.005)
    assert rooted(50, 1.5, 8) == pytest.approx(10.6, abs=0.01)
    assert rooted(28, 0.75, 4) == 4


def test_relative_positional_precision_adds_fifty_parts_per_million():
    # ALTA/NSPS: 0.07 ft + 50 ppm gives 0.12 ft at 1,000 ft, 0.075 ft at 100 ft.
    assert fixed_and_ppm(1000, 0.07, 50) == pytest.approx(0.12)
    assert fixed_and_ppm(100, 0.07, 50) == pytest.approx(0.075)


@given(st.floats(), st.floats(), st.integers(-2, 50))
def test_any_spread_is_judged_or_a_named_error(a, b, dof):
    for call in (spread_agrees, is_zero):
        try:
            answer = call(a, b, dof)
        except GeometryError as error:
            assert str(error)
        else:
            assert answer.verdict in (Verdict.PASS, Verdict.FAIL)
