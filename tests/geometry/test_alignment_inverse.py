"""Points back to distance and offset: exact, honest about rivals and about ends."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.alignment import (
    Bend,
    alignment,
    alignment_through,
    arc,
    feet_of,
    place,
    spiral_element,
    stations_and_offsets,
    straight,
)
from geometry.errors import NotFinite, OutOfRange

ORIGIN = np.array([6.2e5, 4.21e6])


def road():
    """A road of straights, spirals and arcs, sharpest radius 150 m."""
    pieces = [
        straight(200.0),
        spiral_element(60.0, None, 150.0),
        arc(180.0, 150.0),
        spiral_element(60.0, 150.0, None),
        straight(120.0),
        arc(250.0, -300.0),
        straight(150.0),
    ]
    return alignment(ORIGIN, 0.7, pieces, start_m=1000.0)


def hairpin():
    """Two legs 60 m apart joined by half a circle."""
    return alignment(
        (0, 0), 0.0, [straight(300.0), arc(math.pi * 30, 30.0), straight(300.0)]
    )


@settings(deadline=None)
@given(
    st.lists(
        st.tuples(st.floats(1000.0, 2020.0), st.floats(-70.0, 70.0)),
        min_size=1,
        max_size=40,
    )
)
def test_there_and_back_is_the_same_station_and_offset(pairs):
    line = road()
    distance, offset = np.array(pairs).T
    back = stations_and_offsets(line, place(line, distance, offset).points)
    assert np.abs(back.distance_m - distance).max() < 1e-8
    assert np.abs(back.offset_m - offset).max() < 1e-8
    assert (back.beyond_m == 0).all()


def test_many_points_come_back_to_a_nanometre():
    line, rng = road(), np.random.default_rng(4)
    distance = rng.uniform(1000, 2020, 20_000)
    offset = rng.uniform(-60, 60, 20_000)
    back = stations_and_offsets(line, place(line, distance, offset).points)
    assert np.abs(back.distance_m - distance).max() < 2e-9
    assert np.abs(back.offset_m - offset).max() < 2e-9
    assert not back.ambiguous.any()


def test_the_answer_is_the_nearest_point_of_a_finely_drawn_line():
    line, rng = road(), np.random.default_rng(5)
    points = ORIGIN + rng.uniform(-400, 1200, (300, 2))
    drawn = place(line, np.linspace(1000, 2020, 40_001)).points
    brute = np.array([np.hypot(*(drawn - p).T).min() for p in points])
    on = stations_and_offsets(line, points)
    assert np.abs(np.hypot(on.offset_m, on.beyond_m) - brute).max() < 1e-3


def test_shift_and_rotation_of_everything_change_no_station_or_offset():
    pieces = road().elements
    moved = alignment((0, 0), 0.7 + 1.1, pieces, start_m=1000.0)
    here = road()
    points = place(here, [1100.0, 1350.0, 1800.0], [5.0, -20.0, 12.0]).points - ORIGIN
    c, s = math.cos(1.1), math.sin(1.1)
    turned = points @ np.array([[c, -s], [s, c]])
    on = stations_and_offsets(moved, turned)
    assert on.distance_m == pytest.approx([1100.0, 1350.0, 1800.0])
    assert on.offset_m == pytest.approx([5.0, -20.0, 12.0])


def test_points_past_the_ends_are_measured_on_the_tangents_and_flagged():
    line = alignment((0, 0), 0.0, [straight(100.0)], start_m=500.0)
    on = stations_and_offsets(line, [(3, -7), (3, 50), (-2, 111)])
    assert on.distance_m.tolist() == [493.0, 550.0, 611.0]
    assert on.offset_m.tolist() == [3.0, 3.0, -2.0]
    assert on.beyond_m.tolist() == [-7.0, 0.0, 11.0]


def test_a_point_between_the_legs_of_a_hairpin_is_ambiguous():
    on = stations_and_offsets(hairpin(), [(30.2, 150.0), (5.0, 150.0), (61.0, 10.0)])
    assert on.ambiguous.tolist() == [True, False, False]
    assert on.offset_m[1] == pytest.approx(5.0)
    feet = feet_of(hairpin(), (30.2, 150.0))
    assert [round(f.away_m, 1) for f in feet[:2]] == [29.8, 30.2]


def test_a_hint_chooses_the_leg_the_crew_is_on():
    first = feet_of(hairpin(), (30.2, 150.0), near_m=150.0)[0]
    second = feet_of(hairpin(), (30.2, 150.0), near_m=500.0)[0]
    assert first.offset_m == pytest.approx(30.2)
    assert second.offset_m == pytest.approx(29.8)


def test_far_inside_a_bend_the_two_tangents_are_seen_as_rivals():
    line = alignment_through([(-500, 0), (0, 0), (350, -350)], [Bend(50.0)])
    bisector = -np.array([math.sin(math.radians(22.5)), math.cos(math.radians(22.5))])
    on = stations_and_offsets(line, [400 * bisector, (0.0, 300.0), (-300.0, -100.0)])
    assert on.ambiguous.tolist() == [True, False, False]


def test_at_the_centre_of_an_arc_every_station_is_as_near():
    line = alignment((0, 0), 0.0, [arc(100.0, 50.0)])
    on = stations_and_offsets(line, [(50.0, 0.0)])
    assert on.ambiguous.tolist() == [True]
    assert on.offset_m[0] == pytest.approx(50.0)
    assert feet_of(line, (50.0, 0.0))[0].whole_arc


def test_beyond_the_centre_of_an_arc_the_nearest_part_answers():
    line = hairpin()
    on = stations_and_offsets(line, [(33.0, 299.0), (30.0, 305.0)])
    drawn = place(line, np.linspace(0, line.end_m, 200_001)).points
    for row, point in enumerate([(33.0, 299.0), (30.0, 305.0)]):
        nearest = np.hypot(*(drawn - point).T).min()
        assert abs(on.offset_m[row]) == pytest.approx(nearest, abs=1e-6)


def test_a_loop_that_crosses_itself_has_two_stations_at_the_crossing():
    line = alignment(
        (0, 0), 0.0, [straight(100.0), arc(1.5 * math.pi * 40, 40.0), straight(100.0)]
    )
    feet = feet_of(line, (0.0, 60.0))
    assert [round(f.away_m, 6) for f in feet[:2]] == [0.0, 0.0]
    assert stations_and_offsets(line, [(0.0, 60.0)]).ambiguous[0]


def test_outside_an_angle_point_the_angle_point_is_the_foot():
    line = alignment_through([(0, 0), (0, 100), (100, 100)], [Bend()])
    outside = [(-3.0, 104.0), (-5.0, 50.0), (3.0, 50.0), (20.0, 90.0)]
    on = stations_and_offsets(line, outside)
    assert on.distance_m == pytest.approx([100.0, 50.0, 50.0, 120.0])
    assert on.offset_m == pytest.approx([-5.0, -5.0, 3.0, 10.0])
    assert (on.beyond_m == 0).all()


@settings(deadline=None, max_examples=60)
@given(
    st.lists(
        st.tuples(st.floats(-3e3, 3e3), st.floats(-3e3, 3e3)), min_size=1, max_size=8
    ),
    st.sampled_from([road, hairpin]),
)
def test_no_point_of_the_plane_gives_a_number_that_is_none(points, build):
    line = build()
    on = stations_and_offsets(line, np.array(points) + line.origin)
    for values in (on.distance_m, on.offset_m, on.azimuth_rad, on.beyond_m):
        assert np.isfinite(values).all()
    there = place(line, on.distance_m, on.offset_m).points
    assert np.abs(there - line.origin - points).max() < 1e-5


def test_points_that_are_none_are_named():
    with pytest.raises(NotFinite, match="row 2"):
        stations_and_offsets(road(), [(0, 0), (math.nan, 0)])
    with pytest.raises(OutOfRange, match="plane coordinate"):
        stations_and_offsets(road(), [(1e12, 0)])
    assert stations_and_offsets(road(), np.zeros((0, 2))).distance_m.size == 0
