"""Vertical curves against a printed example and the definition of a parabola."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from geometry.curves import elevations_on_curve, length_through, vertical_curve
from geometry.errors import NotFinite, OutOfRange

grades = st.floats(-0.15, 0.15)


def test_a_sag_curve_has_the_printed_stations_and_elevations():
    # Indiana Design Manual ch. 44, example 44-3.1. Its low elevation 580.33 is known
    # to be a slip; 579.961 is computed from its own parabola.
    c = vertical_curve(1380.0, 577.50, -0.0175, 0.0225, 500.0)
    assert (c.bvc_m, c.evc_m) == (1130.0, 1630.0)
    assert c.bvc_elevation_m == pytest.approx(581.875)
    assert c.evc_elevation_m == pytest.approx(583.125)
    assert c.rate_m == pytest.approx(125.0)
    assert c.turning_m == pytest.approx(1348.75)
    assert round(c.turning_elevation_m, 3) == 579.961


def test_the_middle_ordinate_is_an_eighth_of_grade_change_times_length():
    c = vertical_curve(50.0, 106.0, 0.03, -0.03, 100.0)
    assert c.middle_ordinate_m == pytest.approx(-0.75)
    assert elevations_on_curve(c, [50.0])[0] == pytest.approx(105.25)


def test_a_curve_between_two_rising_grades_has_no_turning_point():
    assert vertical_curve(0.0, 10.0, 0.01, 0.04, 80.0).turning_m is None


@given(grades, grades, st.floats(1.0, 2000.0), st.floats(-1e4, 1e4))
def test_the_turning_point_is_the_highest_or_lowest_on_the_curve(g1, g2, length, pvi):
    assume(abs(g2 - g1) > 1e-6)
    c = vertical_curve(pvi, 50.0, g1, g2, length)
    z = elevations_on_curve(c, np.linspace(c.bvc_m, c.evc_m, 41))
    if c.turning_elevation_m is None:
        assert (np.diff(z) > -1e-9).all() or (np.diff(z) < 1e-9).all()
    elif g1 > 0:
        assert c.turning_elevation_m >= z.max() - 1e-9
    else:
        assert c.turning_elevation_m <= z.min() + 1e-9


@given(grades, grades, st.floats(1.0, 2000.0), st.floats(-0.49, 0.49))
def test_the_curve_through_one_of_its_own_points_is_itself(g1, g2, length, part):
    assume(abs(g2 - g1) > 1e-4)
    c = vertical_curve(0.0, 50.0, g1, g2, length)
    z = float(elevations_on_curve(c, [part * length])[0])
    assert length_through(50.0, g1, g2, z, part * length) == pytest.approx(
        length, rel=1e-6
    )


def test_a_point_beyond_the_tangents_has_no_curve():
    with pytest.raises(OutOfRange, match="No vertical curve"):
        length_through(106.0, 0.03, -0.03, 106.5, 0.0)


def test_bad_vertical_curves_are_named():
    with pytest.raises(OutOfRange, match="equal"):
        vertical_curve(0.0, 10.0, 0.02, 0.02, 50.0)
    with pytest.raises(OutOfRange, match="length"):
        vertical_curve(0.0, 10.0, 0.02, 0.03, 0.0)
    with pytest.raises(NotFinite, match="grade in"):
        vertical_curve(0.0, 10.0, math.nan, 0.03, 50.0)
    with pytest.raises(OutOfRange, match="row 2"):
        elevations_on_curve(vertical_curve(0.0, 10.0, 0.02, 0.03, 50.0), [0.0, 99.0])
