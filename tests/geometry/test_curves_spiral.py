"""Spirals against the Fresnel integrals, series and closure of the whole curve."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.special import fresnel

from geometry.curves import path, spiral, spiraled_curve
from geometry.errors import NotFinite, OutOfRange


def test_a_spiral_ends_where_the_fresnel_integrals_end():
    # scipy.special.fresnel as the oracle
    radius, length = 150.0, 60.0
    scale = math.sqrt(math.pi * radius * length)
    right, along = (float(scale * x) for x in fresnel(length / scale))
    ours = spiral(radius, length)
    assert ours.along_m == pytest.approx(along, abs=4e-13)
    assert ours.across_m == pytest.approx(right, abs=4e-13)


def test_a_spiral_agrees_with_the_first_terms_of_the_series():
    # L - L³/40R² + L⁵/3456R⁴, route-surveying texts (from memory)
    series = 60 - 60**3 / (40 * 150**2) + 60**5 / (3456 * 150**4)
    assert spiral(150.0, 60.0).along_m == pytest.approx(series, abs=1e-6)
    assert spiral(150.0, 60.0).throw_m == pytest.approx(60**2 / (24 * 150), rel=2e-3)


@given(st.floats(-0.02, 0.02), st.floats(-0.02, 0.02), st.floats(0.1, 400.0))
def test_a_path_agrees_with_plain_quadrature(k0, k1, length):
    def turn(s: float) -> float:
        return k0 * s + (k1 - k0) * s * s / (2 * length)

    along = quad(lambda s: math.cos(turn(s)), 0, length, epsabs=1e-10)[0]
    right = quad(lambda s: math.sin(turn(s)), 0, length, epsabs=1e-10)[0]
    end = path(k0, k1, length, length)
    assert float(end.along_m) == pytest.approx(along, abs=1e-8)
    assert float(end.right_m) == pytest.approx(right, abs=1e-8)
    assert float(end.turn_rad) == pytest.approx(turn(length), abs=1e-12)


def test_an_arc_of_many_turns_closes_on_itself():
    ring = path(0.01, 0.01, 1e4, 2 * math.pi * 100 * np.arange(5))
    assert np.abs(ring.along_m).max() < 1e-9
    assert np.abs(ring.right_m).max() < 1e-9


def test_a_spiral_of_many_turns_is_still_exact():
    along = quad(lambda s: math.cos(s * s / 2), 0, 10, epsabs=1e-12, limit=500)[0]
    assert float(path(0.0, 10.0, 10.0, 10.0).along_m) == pytest.approx(along, abs=1e-9)


@given(
    st.floats(20.0, 2000.0),
    st.floats(0.3, 2.6),
    st.floats(0.0, 0.14),
    st.floats(0.0, 0.14),
)
def test_spiral_arc_spiral_ends_on_the_second_tangent(
    radius, turn, angle_in, angle_out
):
    lengths = 2 * radius * angle_in, 2 * radius * angle_out
    curve = spiraled_curve(radius, turn, *lengths)
    place, azimuth = np.zeros(2), 0.0
    bend = 1 / radius
    for k0, k1, length in (
        (0.0, bend, curve.entry.length_m),
        (bend, bend, curve.arc_m),
        (bend, 0.0, curve.exit.length_m),
    ):
        if length == 0.0:
            continue
        step = path(k0, k1, length, length)
        u = np.array([math.sin(azimuth), math.cos(azimuth)])
        n = np.array([math.cos(azimuth), -math.sin(azimuth)])
        place = place + float(step.along_m) * u + float(step.right_m) * n
        azimuth += float(step.turn_rad)
    corner = np.array([0.0, curve.tangent_in_m])
    end = corner + curve.tangent_out_m * np.array([math.sin(turn), math.cos(turn)])
    assert azimuth == pytest.approx(turn, abs=1e-12)
    assert np.abs(place - end).max() < 1e-9 * radius


def test_the_tangents_of_a_spiral_meet_at_its_angle():
    s = spiral(150.0, 60.0)
    assert s.long_tangent_m + s.short_tangent_m * math.cos(s.angle_rad) == (
        pytest.approx(s.along_m)
    )
    assert s.short_tangent_m * math.sin(s.angle_rad) == pytest.approx(s.across_m)


def test_spirals_that_turn_more_than_the_tangents_are_refused():
    with pytest.raises(OutOfRange, match="turn more than the tangents"):
        spiraled_curve(100.0, math.radians(10), 60.0, 60.0)


def test_impossible_spirals_are_refused():
    with pytest.raises(OutOfRange, match="right angle"):
        spiral(10.0, 40.0)
    with pytest.raises(OutOfRange, match="negative"):
        spiral(10.0, -1.0)
    with pytest.raises(OutOfRange, match="half a circle"):
        spiraled_curve(100.0, math.pi, 0.0, 0.0)


def test_a_path_of_no_length_goes_nowhere_and_a_missing_number_is_named():
    nowhere = path(0.0, 0.1, 0.0, 0.0)
    assert (nowhere.along_m, nowhere.right_m, nowhere.turn_rad) == (0.0, 0.0, 0.0)
    with pytest.raises(NotFinite, match="curvature"):
        path(0.0, math.nan, 10.0, 5.0)
