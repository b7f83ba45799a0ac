"""The designed surface across a line, cuts and ladders."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.alignment import profile, pvi
from geometry.errors import EmptyInput, NotFinite, OutOfRange, WrongShape
from geometry.section import (
    breaks_at,
    cut_fill,
    ladder,
    roadway,
    strip,
    strip_table,
    surface_at,
)


def crowned():
    grade = profile([pvi(0, 100.0), pvi(200, 104.0)])
    lanes = [strip(3.6, -0.02), strip(1.5, -0.04)]
    return roadway(grade, lanes, lanes)


def test_a_crown_falls_the_same_to_both_sides():
    z = surface_at(crowned(), [100.0, 100.0, 100.0], [-3.6, 0.0, 3.6]).elevation_m
    assert z == pytest.approx([102 - 0.072, 102.0, 102 - 0.072])


def test_the_shoulder_falls_from_the_edge_of_the_lane():
    s = surface_at(crowned(), [100.0], [4.6])
    assert s.elevation_m[0] == pytest.approx(102 - 0.072 - 0.04)
    assert (s.strip[0], s.cross_slope[0]) == (1, -0.04)


def test_superelevation_runs_evenly_between_its_stations():
    grade = profile([pvi(0, 100.0), pvi(200, 100.0)])
    outer = strip_table([(50.0, 3.5, -0.02), (100.0, 3.5, 0.06)])
    road = roadway(grade, [outer], [strip(3.5, -0.02)])
    at = [0.0, 50.0, 62.5, 75.0, 100.0, 150.0]
    z = surface_at(road, at, [-3.5] * 6).elevation_m - 100
    assert z == pytest.approx([-0.07, -0.07, 0.0, 0.07, 0.21, 0.21])


def test_a_widening_moves_the_edge():
    wide = strip_table([(0.0, 3.0, -0.02), (100.0, 4.0, -0.02)])
    grade = profile([pvi(0, 100.0), pvi(200, 100.0)])
    road = roadway(grade, [], [wide, strip(1.0, -0.05)])
    assert breaks_at(road, 50.0, right=True).offset_m.tolist() == [0.0, 3.5, 4.5]
    assert surface_at(road, [50.0], [4.0]).elevation_m[0] == pytest.approx(
        100 - 0.07 - 0.025
    )


def test_beyond_the_edge_the_surface_says_it_is_an_extension():
    s = surface_at(crowned(), [100.0, 100.0, 250.0], [7.1, 5.0, 0.0])
    assert s.beyond_edge_m == pytest.approx([2.0, 0.0, 0.0])
    assert s.beyond_profile_m.tolist() == [0.0, 0.0, 50.0]


def test_a_side_without_strips_has_no_surface_off_the_line():
    grade = profile([pvi(0, 100.0), pvi(200, 100.0)])
    s = surface_at(roadway(grade, [], []), [10.0], [3.0])
    assert s.beyond_edge_m[0] == pytest.approx(3.0)


def test_a_lower_layer_lies_below_by_its_thickness():
    top = surface_at(crowned(), [30.0], [2.0]).elevation_m
    below = surface_at(crowned(), [30.0], [2.0], below_m=0.45).elevation_m
    assert top - below == pytest.approx([0.45])


@given(st.floats(0, 200), st.booleans())
def test_breaks_lie_on_the_surface(at, right):
    breaks = breaks_at(crowned(), at, right=right)
    s = surface_at(crowned(), np.full(3, at), breaks.offset_m)
    assert s.elevation_m == pytest.approx(breaks.elevation_m)


@given(st.floats(0, 200), st.floats(-6, 6), st.floats(-1e-6, 1e-6))
def test_the_surface_has_no_step(at, offset, nudge):
    z = surface_at(crowned(), [at, at], [offset, offset + nudge]).elevation_m
    assert abs(z[1] - z[0]) <= 0.05 * abs(nudge) + 1e-12


def test_cut_is_positive_and_within_the_label_it_is_grade():
    c = cut_fill([101.25, 98.75, 100.0004], 100.0)
    assert c.cut_m == pytest.approx([1.25, -1.25, 0.0004])
    assert c.word == ("cut", "fill", "grade")


def test_a_ladder_reads_the_same_on_the_left():
    left = ladder(-12.0, 103.5, [-9.0, -6.0], [102.0, 100.5])
    right = ladder(12.0, 103.5, [9.0, 6.0], [102.0, 100.5])
    assert left.in_m.tolist() == right.in_m.tolist() == [3.0, 6.0]


def test_bad_surfaces_are_named():
    with pytest.raises(OutOfRange, match="one to one"):
        strip(3.5, 2.0)
    with pytest.raises(OutOfRange, match="negative width"):
        strip(-1.0, 0.02)
    with pytest.raises(OutOfRange, match="in order"):
        strip_table([(5.0, 1.0, 0.0), (5.0, 1.0, 0.0)])
    with pytest.raises(EmptyInput):
        strip_table([])
    with pytest.raises(WrongShape):
        strip_table([(5.0, 1.0)])
    with pytest.raises(NotFinite):
        strip(math.nan, 0.02)
    with pytest.raises(WrongShape):
        surface_at(crowned(), [1.0, 2.0], [0.0])
    with pytest.raises(WrongShape):
        cut_fill([1.0, 2.0, 3.0], [1.0, 2.0])
    with pytest.raises(NotFinite):
        cut_fill([math.nan], [1.0])
    with pytest.raises(WrongShape):
        ladder(1.0, 2.0, [1.0], [1.0, 2.0])
