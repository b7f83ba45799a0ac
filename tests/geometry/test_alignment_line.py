"""Alignments: strung from elements or through PIs, and points placed on them."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.alignment import (
    Bend,
    alignment,
    alignment_through,
    arc,
    main_points,
    place,
    sharpest_radius_m,
    spiral_element,
    straight,
    total_turn_rad,
)
from geometry.errors import (
    CoincidentPoints,
    EmptyInput,
    NotFinite,
    OutOfRange,
    WrongShape,
)


def test_an_arc_ends_at_its_long_chord():
    # chord of a 100 m radius over 80 m of arc: 2 R sin(L / 2R)
    line = alignment((5e5, 4.2e6), 0.3, [arc(80.0, 100.0)])
    chord = float(np.hypot(*line.end))
    assert chord == pytest.approx(200 * math.sin(0.4), abs=1e-11)


def test_a_left_arc_mirrors_a_right_one():
    right = place(alignment((0, 0), 0.0, [arc(80.0, 100.0)]), [30.0], 5.0).points[0]
    left = place(alignment((0, 0), 0.0, [arc(80.0, -100.0)]), [30.0], -5.0).points[0]
    assert left == pytest.approx([-right[0], right[1]])


def test_points_beyond_the_ends_stand_on_the_tangents_and_say_so():
    line = alignment((0, 0), 0.0, [straight(100.0)], start_m=1000.0)
    placed = place(line, [990.0, 1050.0, 1107.0], [0.0, 1.0, 2.0])
    assert placed.points.round(9).tolist() == [[0, -10], [1, 50], [2, 107]]
    assert placed.beyond_m.tolist() == [-10.0, 0.0, 7.0]


def test_a_line_through_intersections_ends_at_the_last_one():
    rows = [(0, 0), (400, 50), (700, 500), (1200, 450), (1500, 900)]
    points = np.array(rows, float) + np.array([5e5, 4.2e6])
    bends = [Bend(180.0, 50.0, 40.0), Bend(150.0), Bend(200.0, 0.0, 60.0)]
    line = alignment_through(points, bends)
    assert (line.origin + line.end) == pytest.approx(points[-1])
    names = [p.name for p in main_points(line)]
    assert names == (
        ["start", "TS", "SC", "CS", "ST", "PC", "PT", "PC", "CS", "ST", "end"]
    )


@given(
    st.lists(
        st.tuples(st.floats(-1.2, 1.2), st.floats(30.0, 120.0), st.floats(0.0, 40.0)),
        min_size=1,
        max_size=6,
    ),
    st.floats(-math.pi, math.pi),
)
def test_any_rounded_polyline_keeps_its_ends_and_its_last_direction(corners, azimuth):
    points, az = [np.zeros(2)], azimuth
    bends = []
    for turn, radius, spiral in corners:
        points.append(points[-1] + 600 * np.array([math.sin(az), math.cos(az)]))
        az += turn
        spiral = min(spiral, 0.9 * radius * abs(turn))
        bends.append(Bend(radius, spiral, spiral))
    points.append(points[-1] + 600 * np.array([math.sin(az), math.cos(az)]))
    line = alignment_through(points, bends)
    assert np.abs(line.origin + line.end - points[-1]).max() < 1e-8
    turned = line.end_azimuth_rad - az
    assert abs(math.remainder(turned, 2 * math.pi)) < 1e-9


def test_an_angle_point_turns_without_a_curve():
    line = alignment_through([(0, 0), (0, 100), (100, 100)], [Bend()])
    assert line.end_m == pytest.approx(200.0)
    assert [p.name for p in main_points(line)] == ["start", "AP", "end"]
    assert place(line, [150.0], 3.0).points[0] == pytest.approx([50.0, 97.0])


def test_compound_and_reverse_curves_are_named():
    line = alignment((0, 0), 0.0, [arc(10, 50), arc(10, 80), arc(10, -60)])
    assert [p.name for p in main_points(line)] == ["start", "PCC", "PRC", "end"]
    assert total_turn_rad(line) == pytest.approx(10 / 50 + 10 / 80 - 10 / 60)
    assert sharpest_radius_m(line) == pytest.approx(50.0)
    assert sharpest_radius_m(alignment((0, 0), 0, [straight(5)])) == math.inf


def test_curves_that_overlap_say_where_and_by_how_much():
    with pytest.raises(OutOfRange, match=r"points 2 and 3, by 100.000 m"):
        alignment_through(
            [(0, 0), (0, 300), (100, 300), (100, 600)], [Bend(100.0), Bend(100.0)]
        )


def test_spirals_too_long_for_their_corner_name_the_point():
    with pytest.raises(OutOfRange, match="curve at point 2"):
        alignment_through([(0, 0), (0, 300), (20, 600)], [Bend(100.0, 60.0, 60.0)])


def test_bad_lines_are_named():
    with pytest.raises(CoincidentPoints, match="points 2 and 3"):
        alignment_through([(0, 0), (5, 5), (5, 5)], [Bend()])
    with pytest.raises(OutOfRange, match="back on itself"):
        alignment_through([(0, 0), (0, 9), (0, 0)], [Bend()])
    with pytest.raises(WrongShape, match="one bend"):
        alignment_through([(0, 0), (0, 9), (5, 20)], [])
    with pytest.raises(EmptyInput):
        alignment_through([(0, 0)], [])
    with pytest.raises(EmptyInput):
        alignment((0, 0), 0.0, [])
    with pytest.raises(NotFinite):
        place(alignment((0, 0), 0.0, [straight(5)]), [math.nan])
    with pytest.raises(WrongShape, match="one offset"):
        place(alignment((0, 0), 0.0, [straight(5)]), [1.0, 2.0, 3.0], [1.0, 2.0])


def test_bad_elements_are_named():
    with pytest.raises(OutOfRange, match="too small"):
        arc(10.0, 0.0)
    with pytest.raises(OutOfRange, match="length"):
        straight(0.0)
    with pytest.raises(OutOfRange, match="another curvature"):
        spiral_element(10.0, 50.0, 50.0)
    with pytest.raises(OutOfRange, match="round and round"):
        alignment((0, 0), 0.0, [arc(1e7, 1.0)])
    with pytest.raises(OutOfRange, match="back on itself"):
        straight(5.0, bend_rad=math.pi)
