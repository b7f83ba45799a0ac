"""Verdicts by both rules, conformance, repeats and the digits shown."""

from __future__ import annotations

import math
from decimal import ROUND_HALF_UP, Decimal

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import ncx2, norm

from geometry.decide import (
    FACTOR_ONE_SIDED_95,
    Reason,
    Rule,
    conformance,
    conformance_radial,
    decide,
    decide_radial,
    repeats,
    shown,
    shown_apart,
    worst_uncertainty,
)
from geometry.errors import GeometryError, NotFinite, OutOfRange
from geometry.verdicts import Verdict

lengths = st.floats(-0.2, 0.2, allow_nan=False)
tolerances = st.floats(0.001, 0.3)
uncertainties = st.floats(0.0, 0.1)


def test_the_limit_itself_passes_even_where_binary_numbers_miss_it():
    assert decide(100.02 - 100.04, 0.02).verdict is Verdict.PASS
    assert decide(5_000_000.02 - 5_000_000.0, 0.02).verdict is Verdict.PASS


def test_simple_acceptance_passes_or_fails_whatever_the_uncertainty():
    decision = decide(0.015, 0.02, 0.02)
    assert decision.verdict is Verdict.PASS
    assert decision.well_measured is False


def test_a_check_is_well_measured_when_its_uncertainty_is_a_third_of_the_tolerance():
    # Common practice: 95 % uncertainty at most a third of the tolerance.
    assert decide(0.0, 0.006, 0.002 / 1.96).well_measured
    assert not decide(0.0, 0.006, 0.0011).well_measured
    assert not decide(0.0, 0.006).well_measured


def test_a_guard_band_asks_for_proof_on_both_sides():
    answers = [
        decide(d, 0.006, 0.001, rule=Rule.GUARDED).verdict
        for d in (0.004, 0.0045, 0.0076, 0.0077)
    ]
    assert answers == ["pass", "undecided", "undecided", "fail"]


def test_an_instrument_that_cannot_prove_the_tolerance_is_told_so():
    # JCGM 106 with T / u = 1.5 < 1.645 (from memory): no reading can pass.
    decision = decide(0.0, 0.006, 0.004, rule=Rule.GUARDED)
    assert decision.verdict is Verdict.UNDECIDED
    assert decision.reason is Reason.NOT_CAPABLE
    radial = decide_radial((0.0, 0.0), 0.006, 0.004, rule=Rule.GUARDED)
    assert radial.reason is Reason.NOT_CAPABLE


def test_a_guard_band_without_uncertainty_is_undecided_and_says_why():
    for decision in (
        decide(0.0, 0.01, rule=Rule.GUARDED),
        decide_radial((0.0, 0.0), 0.01, rule=Rule.GUARDED),
    ):
        assert decision.verdict is Verdict.UNDECIDED
        assert decision.reason is Reason.NOT_KNOWN


def test_a_footing_may_be_two_inches_low_but_half_an_inch_high():
    # ACI 117, top of footing +1/2 in, -2 in (from memory).
    high, low = 0.5 * 0.0254, 2 * 0.0254
    assert decide(-0.05, high, tolerance_below=low).verdict is Verdict.PASS
    assert decide(0.02, high, tolerance_below=low).verdict is Verdict.FAIL
    assert decide(-0.05, high, tolerance_below=low).tolerance == low


@given(lengths, tolerances, uncertainties)
def test_a_guarded_pass_is_always_a_simple_pass_and_a_fail_a_simple_fail(d, t, u):
    guarded = decide(d, t, u, rule=Rule.GUARDED).verdict
    simple = decide(d, t, u).verdict
    assert guarded in (simple, Verdict.UNDECIDED)


@given(lengths, lengths, tolerances, uncertainties, st.floats(0, 6.3))
def test_a_radial_verdict_does_not_change_when_the_axes_are_turned(e, n, t, u, turn):
    c, s = math.cos(turn), math.sin(turn)
    one = decide_radial((e, n), t, u, rule=Rule.GUARDED)
    two = decide_radial((c * e - s * n, s * e + c * n), t, u, rule=Rule.GUARDED)
    near = min(
        abs(one.difference - one.accept_to), abs(one.difference - one.reject_from)
    )
    assert one.verdict == two.verdict or abs(near) < 2e-8


@given(
    st.floats(2.7, 40),
    st.floats(0.02, 1),
    st.floats(0, math.pi),
    st.floats(0, 2 * math.pi),
)
def test_a_position_just_passed_lies_inside_with_95_percent(t, ratio, turn, way):
    """For any ellipse and any direction, as the docstring says."""
    c, s = math.cos(turn), math.sin(turn)
    r = np.array([[c, s], [-s, c]])
    cov = r @ np.diag([1.0, ratio**2]) @ r.T
    edge = decide_radial((0, 0), t, worst_uncertainty(cov), rule=Rule.GUARDED)
    d = edge.accept_to * np.array([math.sin(way), math.cos(way)])
    assert conformance_radial(d, t, cov) > 0.9499
    out = edge.reject_from * np.array([math.sin(way), math.cos(way)])
    assert conformance_radial(out, t, cov) < 0.0501


def test_the_conformance_probability_agrees_with_the_worked_values():
    # Normal quantiles, and the noncentral chi-square with Monte Carlo beside it.
    assert conformance(4, 6, 1.5) == pytest.approx(0.90879, abs=5e-6)
    assert conformance_radial((6, 0), 10, 4 * np.eye(2)) == pytest.approx(
        0.969322, abs=5e-7
    )


@given(st.floats(0, 30), st.floats(0.5, 20), st.floats(0.05, 10))
def test_a_round_covariance_gives_the_noncentral_chi_square(r, t, s):
    expected = ncx2.cdf((t / s) ** 2, 2, (r / s) ** 2)
    # scipy loses digits where the noncentrality is next to nothing.
    if math.isfinite(expected) and r / s > 1e-3:
        got = conformance_radial((0.6 * r, 0.8 * r), t, s * s * np.eye(2))
        assert got == pytest.approx(expected, abs=2e-7)


def test_a_flat_covariance_gives_the_one_dimensional_probability():
    got = conformance_radial((4, 0), 6, np.diag([2.25, 0.0]))
    assert got == pytest.approx(conformance(4, 6, 1.5), abs=1e-7)


def test_no_uncertainty_makes_the_probability_zero_or_one():
    assert conformance(5, 6, 0) == 1 and conformance(7, 6, 0) == 0
    assert conformance_radial((5, 0), 6, np.zeros((2, 2))) == 1


def test_simulated_verdicts_have_the_published_rates():
    """Process sigma 4 mm, tolerance 6 mm, u 2 mm: simulated rates, 10^6 draws."""
    rng = np.random.default_rng(7)
    true = rng.normal(0, 4, 100_000)
    seen = true + rng.normal(0, 2, true.size)
    limits = decide(0, 6, 2, rule=Rule.GUARDED)
    passed = np.abs(seen) <= limits.accept_to
    undecided = ~passed & (np.abs(seen) < limits.reject_from)
    assert passed.mean() == pytest.approx(0.456, abs=0.006)
    assert undecided.mean() == pytest.approx(0.507, abs=0.006)
    assert (np.abs(true[passed]) > 6).mean() == pytest.approx(0.0045, abs=0.002)


@given(lengths, tolerances, st.floats(1e-5, 0.05), st.floats(0, 0.02))
def test_the_repeats_asked_for_settle_it_and_one_fewer_does_not(d, t, s, fixed):
    answer = repeats(d, t, s, fixed)
    if answer.total is None or answer.total > 10**9:
        return

    def verdict(n):
        u = math.sqrt(fixed**2 + s**2 / n)
        return decide(d, t, u, rule=Rule.GUARDED).verdict

    assert verdict(answer.total) is answer.towards
    if answer.total > 1:
        margin = abs(t - abs(d))
        fewer = math.sqrt(fixed**2 + s**2 / (answer.total - 1))
        assert FACTOR_ONE_SIDED_95 * fewer > margin * (1 - 1e-9)


def test_no_number_of_repeats_settles_what_stands_on_the_limit():
    assert repeats(0.02, 0.02, 0.001).total is None
    assert repeats(0.02, 0.02, 0.001).towards is Verdict.UNDECIDED


@given(st.decimals(-9_000_000, 9_000_000, places=5, allow_nan=False), st.integers(0, 4))
def test_shown_digits_are_those_of_exact_decimals(value, places):
    exact = value.quantize(Decimal(1).scaleb(-places), rounding=ROUND_HALF_UP)
    text = f"{exact:f}"
    assert shown(float(value), places) == (
        text.lstrip("-") if Decimal(text) == 0 else text
    )


@given(lengths, tolerances)
def test_shown_digits_never_contradict_the_verdict(d, t):
    value, limit = shown_apart(d, t, 2)
    if abs(abs(d) - t) > 1e-4:
        assert (abs(float(value)) > float(limit)) == (abs(d) > t)


@pytest.mark.parametrize("bad", [math.nan, math.inf, -math.inf])
def test_a_number_that_is_none_is_named(bad):
    calls = (
        lambda: decide(bad, 0.01),
        lambda: decide(0, bad),
        lambda: decide(0, 0.01, bad),
        lambda: decide_radial((bad, 0), 0.01),
        lambda: conformance(bad, 1, 1),
        lambda: repeats(0, bad, 1),
        lambda: shown(bad, 2),
    )
    for call in calls:
        with pytest.raises(NotFinite):
            call()


def test_a_tolerance_of_nothing_is_refused():
    for tolerance in (0.0, -0.01):
        with pytest.raises(OutOfRange):
            decide(0.0, tolerance)
    with pytest.raises(OutOfRange):
        decide(0.0, 0.01, -0.001)
    with pytest.raises(OutOfRange):
        shown(1e12, 6)


@given(st.floats(), st.floats(), st.none() | st.floats(), st.sampled_from(list(Rule)))
def test_any_input_gives_a_decision_or_a_named_error(d, t, u, rule):
    try:
        decision = decide(d, t, u, rule=rule)
    except GeometryError as error:
        assert str(error)
    else:
        assert math.isfinite(decision.difference)


def test_the_guard_factor_is_the_quantile_of_the_normal_distribution():
    assert pytest.approx(norm.ppf(0.95), abs=1e-12) == FACTOR_ONE_SIDED_95


@given(*(st.floats() for _ in range(4)))
def test_any_repeats_are_counted_or_a_named_error(d, t, s, fixed):
    try:
        answer = repeats(d, t, s, fixed)
    except GeometryError as error:
        assert str(error)
    else:
        assert answer.total is None or answer.total >= 1


@given(*(st.floats() for _ in range(5)))
def test_any_probability_is_a_probability_or_a_named_error(d, e, t, u, v):
    for call in (
        lambda: conformance(d, t, u),
        lambda: conformance_radial((d, e), t, np.diag([u, v])),
    ):
        try:
            assert 0 <= call() <= 1
        except GeometryError as error:
            assert str(error)
