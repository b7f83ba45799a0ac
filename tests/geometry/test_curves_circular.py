"""Circular curves against printed examples and against plane geometry."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.curves import (
    chord_for_ordinate,
    circular_curve,
    curve_stakes,
    middle_ordinate,
    radius_of_degree,
)
from geometry.errors import NotFinite, OutOfRange


def degrees(whole: float, minutes: float = 0.0) -> float:
    return math.radians(whole + minutes / 60)


def test_a_two_degree_curve_has_the_printed_elements():
    # Ghilani & Wolf, Elementary Surveying, examples 24.1 and 24.2 (from memory)
    radius = radius_of_degree(degrees(2), 100.0)
    curve = circular_curve(radius, degrees(8, 24))
    printed = (2864.79, 420.00, 210.38, 7.71, 7.69, 419.62)
    computed = (
        radius,
        curve.length_m,
        curve.tangent_m,
        curve.external_m,
        curve.middle_ordinate_m,
        curve.long_chord_m,
    )
    assert [round(x, 2) for x in computed] == list(printed)


def test_deflections_at_full_stations_are_the_printed_ones():
    # Ghilani & Wolf, Elementary Surveying, examples 24.1 and 24.2 (from memory)
    curve = circular_curve(radius_of_degree(degrees(2), 100.0), degrees(8, 24))
    stakes = curve_stakes(curve, 6427.46 - curve.tangent_m, 100.0)
    assert [round(x, 2) for x in stakes.distance_m.tolist()] == [
        6217.08,
        6300.00,
        6400.00,
        6500.00,
        6600.00,
        6637.08,
    ]
    # printed to the quarter minute
    minutes = [60 * math.degrees(x) for x in stakes.deflection_rad.tolist()]
    assert minutes == pytest.approx([0, 49.75, 109.75, 169.75, 229.75, 252.0], abs=0.01)


def test_a_chord_definition_curve_has_the_printed_first_stake():
    # FM 5-233 ch. 3: I 45, D 15 (chord), PI 18+00 -> PC 16+41.33, first stake 16+50
    radius = radius_of_degree(degrees(15), 100.0, chord=True)
    curve = circular_curve(radius, degrees(45))
    pc = 1800.0 - curve.tangent_m
    stakes = curve_stakes(curve, pc, 50.0)
    assert round(radius, 3) == 383.065
    assert round(curve.tangent_m, 3) == 158.671
    assert round(pc, 2) == 1641.33
    assert stakes.distance_m[1] == 1650.0
    assert round(float(stakes.subchord_m[1]), 2) == 8.67


def test_a_left_curve_turns_its_deflections_left():
    stakes = curve_stakes(circular_curve(100.0, -0.4), 0.0, 10.0)
    assert stakes.deflection_rad[-1] == pytest.approx(-0.2)
    assert (stakes.chord_m >= 0).all()


def test_stakes_count_full_stations_from_the_given_zero():
    stakes = curve_stakes(circular_curve(100.0, 0.5), 12.0, 20.0, zero_m=5.0)
    assert stakes.distance_m.tolist() == [12.0, 25.0, 45.0, 62.0]


@given(
    st.floats(1.0, 1e5),
    st.floats(1e-3, 3.0),
    st.sampled_from([-1.0, 1.0]),
)
def test_the_elements_fit_the_triangle_of_tangents_and_chord(radius, turn, side):
    curve = circular_curve(radius, side * turn)
    half = turn / 2
    assert curve.long_chord_m == pytest.approx(2 * curve.tangent_m * math.cos(half))
    to_chord = curve.tangent_m * math.sin(half)
    assert curve.external_m + curve.middle_ordinate_m == pytest.approx(to_chord)
    stakes = curve_stakes(curve, 0.0, max(curve.length_m / 7.3, 1e-3))
    assert stakes.chord_m[-1] == pytest.approx(curve.long_chord_m)
    assert abs(stakes.deflection_rad[-1]) == pytest.approx(half)


@given(st.floats(0.5, 1e4), st.floats(1e-4, 0.4))
def test_the_longest_chord_just_reaches_its_middle_ordinate(radius, ordinate):
    chord = chord_for_ordinate(radius, ordinate)
    arc = 2 * radius * math.asin(min(chord / (2 * radius), 1.0))
    assert middle_ordinate(radius, arc) == pytest.approx(ordinate, rel=1e-6)


@pytest.mark.parametrize("turn", [0.0, math.pi, 4.0, -math.pi])
def test_tangents_that_never_meet_are_refused(turn):
    with pytest.raises(OutOfRange, match="deflection"):
        circular_curve(100.0, turn)


@pytest.mark.parametrize("radius", [0.0, -5.0])
def test_a_radius_must_be_positive(radius):
    with pytest.raises(OutOfRange, match="radius"):
        circular_curve(radius, 0.3)


def test_numbers_that_are_not_finite_are_named():
    with pytest.raises(NotFinite, match="radius"):
        circular_curve(math.nan, 0.3)
    with pytest.raises(NotFinite, match="deflection"):
        circular_curve(100.0, math.inf)


def test_an_interval_too_small_for_the_curve_is_refused():
    with pytest.raises(OutOfRange, match="interval"):
        curve_stakes(circular_curve(1e6, 1.0), 0.0, 1e-3)
    with pytest.raises(OutOfRange, match="ordinate"):
        chord_for_ordinate(1.0, 3.0)
    with pytest.raises(OutOfRange, match="half a circle"):
        radius_of_degree(4.0)
