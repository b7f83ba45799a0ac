"""Curb returns: tangent to both curbs, staked in equal parts."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.curves import curb_return
from geometry.errors import NoIntersection, OutOfRange


def distance_to_line(point, line) -> float:
    azimuth = line[1]
    normal = np.array([math.cos(azimuth), -math.sin(azimuth)])
    return float((point - np.asarray(line[0])) @ normal)


@given(
    st.floats(-math.pi, math.pi),
    st.floats(0.1, 2.9),
    st.sampled_from([-1.0, 1.0]),
    st.floats(1.0, 50.0),
    st.floats(-1e6, 1e6),
)
def test_a_return_touches_both_curbs_at_its_ends(azimuth, turn, side, radius, east):
    curb_in = ((east, 4.2e6), azimuth)
    out = azimuth + side * turn
    curb_out = ((east + 3.0, 4.2e6 + 7.0), out)
    r = curb_return(curb_in, curb_out, radius, parts=8)
    assert r.turn_rad == pytest.approx(side * turn, abs=1e-9)
    assert distance_to_line(r.centre, curb_in) == pytest.approx(side * radius, abs=1e-6)
    assert distance_to_line(r.centre, curb_out) == pytest.approx(
        side * radius, abs=1e-6
    )
    assert np.hypot(*(r.curb - r.centre).T) == pytest.approx(np.full(9, radius))
    assert r.curb[0] == pytest.approx(r.begin, abs=1e-6)
    assert r.curb[-1] == pytest.approx(r.end, abs=1e-6)
    assert distance_to_line(r.end, curb_out) == pytest.approx(0.0, abs=1e-6)


def test_quarter_points_of_a_square_corner_are_22_and_a_half_degrees_apart():
    r = curb_return(((0, 0), 0.0), ((0, 50), math.pi / 2), 10.0)
    steps = np.diff(r.along_m)
    assert steps == pytest.approx(np.full(4, 10 * math.radians(22.5)))
    chords = np.hypot(*np.diff(r.curb, axis=0).T)
    assert chords == pytest.approx(np.full(4, r.chord_m))
    assert r.middle_ordinate_m == pytest.approx(
        10 * (1 - math.cos(math.radians(11.25)))
    )


def test_offset_stakes_stand_on_the_radius_lines():
    r = curb_return(((0, 0), 0.0), ((0, 50), math.pi / 2), 10.0, offset_m=-1.0)
    assert np.hypot(*(r.stakes - r.centre).T) == pytest.approx(np.full(5, 9.0))
    assert np.hypot(*(r.stakes - r.curb).T) == pytest.approx(np.full(5, 1.0))


def test_the_grade_around_a_return_is_even():
    r = curb_return(
        ((0, 0), 0.0), ((0, 50), math.pi / 2), 10.0, elevations_m=(100.0, 100.4)
    )
    assert r.elevation_m == pytest.approx([100.0, 100.1, 100.2, 100.3, 100.4])


def test_returns_that_cannot_be_are_named():
    with pytest.raises(NoIntersection, match="parallel"):
        curb_return(((0, 0), 0.0), ((5, 0), 0.0), 10.0)
    with pytest.raises(NoIntersection, match="parallel"):
        curb_return(((0, 0), 0.0), ((5, 0), math.pi), 10.0)
    with pytest.raises(OutOfRange, match="radius point"):
        curb_return(((0, 0), 0.0), ((0, 50), 1.0), 10.0, offset_m=-10.0)
    with pytest.raises(OutOfRange, match="parts"):
        curb_return(((0, 0), 0.0), ((0, 50), 1.0), 10.0, parts=0)
