"""Curved walls, gridlines, obstacles and the other ways to stake the same lines."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely.geometry import LineString, Point, Polygon

from geometry.errors import CoincidentPoints, EmptyInput, GeometryError, OutOfRange
from geometry.layout import (
    Fallback,
    FallbackKind,
    KeepOut,
    Status,
    arc,
    chord_for,
    column_grid,
    near_and_far,
    plain_set,
    plan_offsets,
)
from geometry.layout.arcs import chords_needed, mid_ordinate
from geometry.layout.gridlines import Gridline
from geometry.layout.lines import LineKind
from geometry.layout.stakes import Role

BARN = [(0.0, 0.0), (24.0, 0.0), (24.0, 12.0), (0.0, 12.0)]
FT = 0.3048


def barn(**words):
    return plan_offsets(BARN, **({"offset_m": 5 * FT, "step_m": 5 * FT} | words))


# Curves


@given(
    st.floats(0.05, 3.0), st.sampled_from([-1, 1]), st.floats(0, 6.28), st.floats(2, 80)
)
def test_an_arc_keeps_its_radius_from_end_to_end(bulge, side, azimuth, chord) -> None:
    end = (chord * math.sin(azimuth), chord * math.cos(azimuth))
    wall = arc((0.0, 0.0), end, side * bulge)
    points = wall.points(17)
    radii = np.hypot(*(points - np.asarray(wall.centre)).T)
    assert radii == pytest.approx(wall.radius_m, rel=1e-9)
    assert np.hypot(*np.diff(points, axis=0).T).sum() < wall.length_m + 1e-9
    middle = wall.points(2)[1]
    turn = float(end[0] * middle[1] - end[1] * middle[0])
    assert turn * side < 0


@given(st.floats(1.0, 500.0), st.floats(0.002, 0.2))
def test_a_chord_at_the_tolerance_misses_its_arc_by_just_that(
    radius, tolerance
) -> None:
    assert mid_ordinate(radius, chord_for(radius, tolerance)) == pytest.approx(
        tolerance
    )


def test_chords_of_a_curved_wall_stay_within_the_tolerance() -> None:
    wall = arc((0.0, 0.0), (20.0, 0.0), 0.6)
    points = wall.points(chords_needed(wall, 0.02))
    steps = np.hypot(*np.diff(points, axis=0).T)
    assert max(mid_ordinate(wall.radius_m, c) for c in steps) <= 0.02 + 1e-9


def test_a_curved_wall_gets_radial_stakes_and_the_straight_ones_keep_theirs() -> None:
    plan = plan_offsets(
        BARN, offset_m=5 * FT, step_m=5 * FT, bulges=[0.0, 0.4, 0.0, 0.0]
    )
    curved = next(w for w in plan.lines if w.kind is LineKind.CURVED_WALL)
    assert curved.arc is not None
    radial = [s for s in plan.stakes if s.role is Role.RADIAL]
    assert len(radial) >= 2
    centre = np.asarray(curved.arc.centre)
    for stake in radial:
        away = np.hypot(*(np.array([stake.e_m, stake.n_m]) - centre))
        assert away == pytest.approx(curved.arc.radius_m + stake.to_wall_m, abs=1e-6)


@pytest.mark.parametrize(
    ("end", "bulge", "error"),
    [((0.0, 0.0), 0.5, CoincidentPoints), ((4.0, 0.0), 0.0, OutOfRange)],
)
def test_an_arc_that_is_none_is_refused_by_name(end, bulge, error) -> None:
    with pytest.raises(error):
        arc((0.0, 0.0), end, bulge)


def test_a_tolerance_too_fine_for_a_wall_is_refused() -> None:
    with pytest.raises(OutOfRange, match="too fine"):
        chords_needed(arc((0.0, 0.0), (200.0, 0.0), 1.0), 1e-6)


# Gridlines


@given(st.floats(-3, 3), st.floats(-0.9, 0.9), st.floats(-1e5, 1e5))
def test_crossings_of_a_grid_lie_on_both_their_lines(azimuth, skew, far) -> None:
    lines, points = column_grid(
        (far, -far),
        azimuth,
        [("A", 0.0), ("B", 6.1), ("C", 12.2)],
        [("1", 0.0), ("2", 7.3)],
        skew_rad=skew,
    )
    by_name = {line.name: LineString([line.start, line.end]) for line in lines}
    assert len(points) == 6
    for point in points:
        letter, number = point.name.split("/")
        place = Point(point.e_m, point.n_m)
        assert by_name[letter].distance(place) < 1e-6
        assert by_name[number].distance(place) < 1e-6


def test_a_grid_without_lines_or_with_one_direction_is_refused() -> None:
    with pytest.raises(EmptyInput):
        column_grid((0, 0), 0.0, [], [("1", 0.0)])
    with pytest.raises(OutOfRange, match="nearly the same"):
        column_grid((0, 0), 0.0, [("A", 0.0)], [("1", 0.0)], skew_rad=1.5)


def test_a_gridline_across_the_building_is_held_at_both_ends_outside() -> None:
    plan = barn(gridlines=[Gridline("B", (6.0, -3.0), (6.0, 20.0))])
    held = [s for s in plan.stakes if s.line_id == "B"]
    assert len(held) == 2
    assert {round(s.e_m, 9) for s in held} == {6.0}
    assert all(not Polygon(BARN).covers(Point(s.e_m, s.n_m)) for s in held)


def test_a_gridline_on_a_wall_adds_its_name_and_no_stake() -> None:
    with_one = barn(gridlines=[Gridline("A", (0.0, -3.0), (0.0, 20.0))])
    assert len(with_one.stakes) == len(barn().stakes)
    assert any("A" in line.also for line in with_one.lines)


def test_a_gridline_without_length_is_named() -> None:
    with pytest.raises(CoincidentPoints, match="Gridline Q"):
        barn(gridlines=[Gridline("Q", (3.0, 3.0), (3.0, 3.0))])


# Obstacles, and what else can be done


def test_no_stake_stands_in_a_keep_out_or_within_its_clearance() -> None:
    road = [(-30.0, -4.0), (60.0, -4.0), (60.0, -0.9), (-30.0, -0.9)]
    plan = barn(keep_outs=[KeepOut("haul road", road, clearance_m=0.5)])
    zone = Polygon(road)
    assert all(zone.distance(Point(s.e_m, s.n_m)) >= 0.5 - 1e-6 for s in plan.stakes)
    assert plan.offset_m > 5 * FT or any(s.differs for s in plan.stakes)


def test_a_line_end_closed_in_by_a_structure_says_what_else_can_be_done() -> None:
    shed = [(-40.0, -40.0), (-1.0, -40.0), (-1.0, 60.0), (-40.0, 60.0)]
    plan = barn(keep_outs=[KeepOut("neighbour", shed, is_structure=True)])
    closed = plan.no_room
    assert closed
    for end in closed:
        assert end.status is Status.NO_ROOM
        assert "neighbour" in end.reason
        ways: tuple[Fallback, ...] = end.fallbacks
        assert ways[-1].kind is FallbackKind.POLAR
        assert FallbackKind.TARGET in {way.kind for way in ways}
        assert all(way.sentence.endswith(".") for way in ways)


def test_near_and_far_stand_on_one_line_the_distance_apart() -> None:
    plan = barn()
    line = plan.stakes[0].line_id
    near = {s.end: s for s in plan.stakes if s.line_id == line}
    far = near_and_far(plan, line, 3.0)
    assert len(far) == 2
    for stake in far:
        own = near[stake.end]
        assert math.hypot(stake.e_m - own.e_m, stake.n_m - own.n_m) == pytest.approx(
            3.0
        )
        string = LineString([(s.e_m, s.n_m) for s in far])
        assert string.distance(Point(own.e_m, own.n_m)) < 1e-6


def test_the_plain_set_is_the_plan_itself() -> None:
    plan = barn()
    assert plain_set(plan).stakes == plan.stakes


def test_a_courtyard_has_walls_and_is_no_ground_for_a_blunder() -> None:
    yard = [(8.0, 4.0), (16.0, 4.0), (16.0, 8.0), (8.0, 8.0)]
    plan = barn(courtyards=[yard])
    assert plan.area_m2 == pytest.approx(24 * 12 - 8 * 4)
    assert len(plan.lines) > len(barn().lines)


@given(
    st.lists(
        st.tuples(st.floats(allow_nan=True, allow_infinity=True), st.floats(-1e9, 1e9)),
        max_size=7,
    ),
    st.floats(allow_nan=True),
    st.floats(allow_nan=True),
)
def test_whatever_is_drawn_is_planned_or_refused_by_name(points, offset, step) -> None:
    try:
        plan = plan_offsets(points, offset_m=offset, step_m=step)
    except GeometryError as error:
        assert str(error)
    else:
        assert all(math.isfinite(s.e_m) and math.isfinite(s.n_m) for s in plan.stakes)
