"""Tape, curvature, prism and ppm against published numbers."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.corrections import (
    Pulled,
    SteelTape,
    atmospheric_ppm,
    curvature_and_refraction_m,
    curvature_m,
    edm_distance,
    edm_sigma_m,
    length_to_lay_out,
    measured_length,
    normal_tension_n,
    refraction_m,
    slope_to_level,
    tape_corrections,
)
from geometry.errors import GeometryError

FOOT = 0.3048
POUND = 4.4482216


def test_a_worked_layout_example_in_feet() -> None:
    """529.81 ft; 100.010 ft tape at 68 °F, 12 lb; field 95 °F, 20 lb, supported
    (a published training example; formulas of Ghilani & Wolf ch. 6)."""
    tape = SteelTape(
        nominal_m=100 * FOOT,
        true_m=100.010 * FOOT,
        standard_n=12 * POUND,
        area_mm2=0.0075 * 25.4**2,
        modulus_gpa=29e6 * 6894.757 / 1e9,
    )
    used = Pulled(temperature_c=35.0, tension_n=20 * POUND)
    found = tape_corrections(529.81 * FOOT, tape, used)
    assert found.standard_m / FOOT == pytest.approx(0.053, abs=5e-4)
    assert found.temperature_m / FOOT == pytest.approx(0.092, abs=5e-4)
    assert found.pull_m / FOOT == pytest.approx(0.0195, abs=5e-5)


def test_fifteen_fahrenheit_is_a_hundredth_of_a_foot_in_a_hundred() -> None:
    """Rule of the trade: 0.01 ft per 15 °F per 100 ft (common practice)."""
    used = Pulled(temperature_c=20 + 15 / 1.8)
    found = tape_corrections(100 * FOOT, SteelTape(), used).temperature_m
    assert found / FOOT == pytest.approx(0.0097, abs=5e-5)


@pytest.mark.parametrize(
    "tension, catenary_mm", [(50, -24.996), (30, -69.775), (100, -6.236)]
)
def test_sag_is_that_of_a_catenary_to_within_a_hundredth(
    tension: float, catenary_mm: float
) -> None:
    """Exact catenary: chord of an arc of 30 m under its weight and end tension."""
    used = Pulled(tension_n=tension, span_m=30.0)
    found = tape_corrections(30.0, SteelTape(), used).sag_m * 1000
    assert found == pytest.approx(catenary_mm, rel=0.01)


def test_sag_of_three_spans_is_three_times_that_of_one() -> None:
    one = tape_corrections(10.0, SteelTape(), Pulled(span_m=10.0)).sag_m
    three = tape_corrections(30.0, SteelTape(), Pulled(span_m=10.0)).sag_m
    assert three == pytest.approx(3 * one)


def test_at_the_normal_tension_stretch_and_sag_cancel() -> None:
    tension = normal_tension_n(30.0, SteelTape())
    used = Pulled(tension_n=tension, span_m=30.0)
    found = tape_corrections(30.0, SteelTape(), used)
    assert found.pull_m + found.sag_m == pytest.approx(0.0, abs=1e-9)
    assert tension == pytest.approx(127.12, abs=0.02)


@given(
    st.floats(1, 200),
    st.floats(-20, 50),
    st.floats(40, 150),
    st.floats(-0.5, 0.5),
    st.floats(29.97, 30.03),
)
def test_laying_out_undoes_measuring(
    level: float, temperature: float, tension: float, rise: float, true: float
) -> None:
    tape = SteelTape(true_m=true)
    used = Pulled(temperature, tension, span_m=10.0, rise_m=rise)
    reading = length_to_lay_out(level, tape, used)
    assert measured_length(reading, tape, used) == pytest.approx(level, abs=1e-8)


def test_a_tape_too_long_reads_too_little_and_sets_too_far() -> None:
    long = SteelTape(true_m=30.01)
    assert measured_length(30.0, long, Pulled()) > 30.0
    assert length_to_lay_out(30.0, long, Pulled()) < 30.0


def test_the_earth_curves_by_the_published_amounts() -> None:
    """Ghilani & Wolf ch. 4 (from memory): 0.0785, 0.0112, 0.0675 m at 1 km; 0.574 ft
    at one mile with refraction."""
    assert curvature_m(1000) == pytest.approx(0.0785, abs=5e-5)
    assert refraction_m(1000, 1 / 7) == pytest.approx(0.01121, abs=5e-6)
    assert curvature_and_refraction_m(1000) == pytest.approx(0.0675, abs=5e-5)
    assert curvature_and_refraction_m(1000, 0.13) == pytest.approx(0.0683, abs=5e-5)
    mile = 5280 * FOOT
    assert curvature_and_refraction_m(mile) / FOOT == pytest.approx(0.574, abs=2e-3)


def test_a_wrong_prism_constant_is_the_same_at_any_distance() -> None:
    short = edm_distance(10, prism_set_m=0, prism_true_m=-0.034) - 10
    far = edm_distance(900, prism_set_m=0, prism_true_m=-0.034) - 900
    assert short == pytest.approx(-0.034)
    assert far == pytest.approx(-0.034)


def test_a_wrong_ppm_grows_with_the_distance() -> None:
    assert edm_distance(1000, ppm_true=20.0) - 1000 == pytest.approx(0.020)


def test_the_air_adds_about_one_ppm_a_degree() -> None:
    assert atmospheric_ppm(22, 1013.25) == pytest.approx(10, abs=1)
    assert atmospheric_ppm(12, 1000.0) == pytest.approx(3.7, abs=0.2)


def test_the_deviation_of_a_short_distance_is_its_constant_part() -> None:
    """±(3 mm + 3 ppm) at 100 ft is 0.0098 ft (published class notes)."""
    assert edm_sigma_m(100 * FOOT, 0.003, 3) / FOOT == pytest.approx(
        0.0098471, abs=1e-7
    )


@pytest.mark.parametrize(
    "ask",
    [
        lambda: tape_corrections(-1, SteelTape(), Pulled()),
        lambda: tape_corrections(math.nan, SteelTape(), Pulled()),
        lambda: tape_corrections(30, SteelTape(), Pulled(tension_n=0)),
        lambda: tape_corrections(30, SteelTape(), Pulled(tension_n=1, span_m=30)),
        lambda: tape_corrections(30, SteelTape(area_mm2=0), Pulled()),
        lambda: slope_to_level(10, 10),
        lambda: edm_distance(100, prism_true_m=-30),
        lambda: edm_distance(math.inf),
        lambda: curvature_m(1e7),
        lambda: atmospheric_ppm(-300, 1000),
    ],
)
def test_numbers_no_tape_and_no_weather_has_are_refused(ask) -> None:
    with pytest.raises(GeometryError):
        ask()
