"""Sight lines over obstacles, and the best place to set up."""

from __future__ import annotations

import math

import numpy as np
import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from geometry.ellipse import ellipse
from geometry.errors import BadOutline, EmptyInput, GeometryError, WrongShape
from geometry.precision import (
    TotalStation,
    best_occupied,
    best_setup,
    clear,
    finer,
    free_station,
    grid,
    inside_any,
    obstacle,
    polar,
    seen_from,
    sighted,
    visibility,
)

WALL = obstacle([(4, -1), (5, -1), (5, 1), (4, 1)], 2.0)
BENT = [(0, 0), (12, 0), (12, 3), (3, 3), (3, 12), (0, 12)]


def yard(seed, count=12):
    """Skewed sheds and one L-shaped building, with tops about head height."""
    rng = np.random.default_rng(seed)
    things = [obstacle(np.add(BENT, (40, 40)), 5.0)]
    for centre in rng.uniform(0, 100, (count, 2)):
        corners = np.array([(0, 0), (7, 1), (6, 6), (-1, 5)])
        things.append(obstacle(centre + corners, float(rng.uniform(2, 8))))
    return things, rng


@pytest.mark.parametrize(
    "heights", [(None, None), (6.5, 1.0), (1.0, 6.5), (4.0, 4.5), (9.0, 9.0)]
)
def test_shadows_agree_with_testing_every_edge(heights):
    """Whatever the heights: the lookup is the same answer, only faster."""
    up, at = heights
    things, rng = yard(1)
    places = rng.uniform(0, 100, (150, 2))
    places = places[~inside_any(places, things)]
    marks = rng.uniform(0, 100, (5, 2))
    table = visibility(
        places,
        marks,
        things,
        instrument_elevation_m=up,
        mark_elevations_m=None if at is None else [at] * 5,
    )
    slow = [
        [clear(p, m, things, start_elevation_m=up, end_elevation_m=at) for m in marks]
        for p in places
    ]
    assert (table == np.array(slow)).all()


def test_without_heights_a_sight_is_clear_when_shapely_finds_no_crossing():
    things, rng = yard(2)
    shapes = shapely.union_all([shapely.Polygon(t.outline) for t in things])
    for a, b in zip(
        rng.uniform(0, 100, (200, 2)), rng.uniform(0, 100, (200, 2)), strict=True
    ):
        if not inside_any([a, b], things).any():
            crossing = shapely.LineString([a, b]).intersects(shapes)
            assert clear(a, b, things) is not crossing


def test_a_line_over_a_low_wall_is_clear_and_a_falling_one_is_not():
    level = {"start_elevation_m": 3.0, "end_elevation_m": 3.0}
    falling = {"start_elevation_m": 3.0, "end_elevation_m": 0.5}
    assert clear((0, 0), (9, 0), [WALL], **level)
    assert not clear((0, 0), (9, 0), [WALL], **falling)
    assert not clear((0, 0), (9, 0), [WALL])


def test_behind_a_wall_a_higher_instrument_sees_only_from_close_by():
    """A prism on the ground behind a fence: near the fence one looks down on it."""
    fence = obstacle([(10, -50), (10.2, -50), (10.2, 50), (10, 50)], 2.0, margin_m=0)
    seen = seen_from(
        [(12, 0), (60, 0)],
        (8, 0),
        [fence],
        instrument_elevation_m=6.0,
        mark_elevation_m=0.2,
    )
    assert seen.tolist() == [True, False]


def test_a_prism_on_the_face_of_a_wall_is_seen_from_its_own_side_only():
    wall = obstacle([(0, 0), (10, 0), (10, 1), (0, 1)])
    assert seen_from([(5, -20), (5, 20)], (5, 0), [wall]).tolist() == [True, False]
    assert clear((5, -20), (5, 0), [wall]) and not clear((5, 20), (5, 0), [wall])


def test_a_mark_inside_an_obstacle_is_not_seen_from_outside():
    shed = obstacle([(0, 0), (10, 0), (10, 10), (0, 10)])
    places = grid((-20, -20), (30, 30), 5)
    outside = places[~inside_any(places, [shed])]
    assert not seen_from(outside, (5, 5), [shed]).any()


@given(st.floats(0, 6.28), st.floats(-1e6, 1e6))
def test_what_is_seen_does_not_change_when_the_site_is_turned(turn, shift):
    c, s = math.cos(turn), math.sin(turn)

    def put(points):
        return np.asarray(points) @ np.array([[c, -s], [s, c]]) + shift

    things = [[(4, -1), (5, -1), (5, 1), (4, 1)], np.add(BENT, (20.0, 3.0))]
    places = np.array([(9, 0), (9, 9), (1, 0), (40, 8), (18, 30)])
    one = seen_from(places, (0, 0), [obstacle(t) for t in things])
    two = seen_from(put(places), put([(0, 0)])[0], [obstacle(put(t)) for t in things])
    assert (one == two).all()


def test_an_outline_that_crosses_itself_is_named():
    for bad in ([(0, 0), (5, 5), (5, 0), (0, 5)], [(0, 0), (1, 1)], [(0, 0)] * 4):
        with pytest.raises(BadOutline):
            obstacle(bad)


MARKS = np.array([(0, 0.0), (90, 5), (85, 80), (5, 95), (45, 110)])
BLOCKS = np.tile(4e-6 * np.eye(2), (5, 1, 1))
TARGETS = np.array([(40, 40.0), (60, 40), (60, 60), (40, 60)])


def test_the_score_of_every_place_is_that_of_the_full_prediction():
    places = grid((10, 10), (80, 80), 17)
    setups = best_setup(places, MARKS, TARGETS, 0.01, TotalStation(), BLOCKS)
    for place, score in zip(setups.places, setups.score, strict=True):
        free = free_station(place, MARKS, TotalStation(), BLOCKS)
        worst = max(
            ellipse(sighted(free, t, TotalStation()).covariance_m2).semi_major_m
            for t in TARGETS
        )
        assert score == pytest.approx(worst / 0.01, rel=1e-6)


def test_the_best_place_is_not_outside_the_control():
    places = grid((-200, -200), (300, 300), 10)
    setups = best_setup(places, MARKS, TARGETS, 0.01, TotalStation(), BLOCKS)
    east, north = setups.places[setups.best]
    assert 0 < east < 100 and 0 < north < 110


def test_a_second_look_is_never_worse():
    first = best_setup(
        grid((0, 0), (100, 100), 20), MARKS, TARGETS, 0.01, TotalStation(), BLOCKS
    )
    again = best_setup(finer(first, 20), MARKS, TARGETS, 0.01, TotalStation(), BLOCKS)
    assert again.score[again.best] <= first.score[first.best] + 1e-12


def test_a_place_that_sees_too_few_marks_is_not_offered():
    places = np.array([(30.0, 30.0), (50.0, 50.0)])
    seen = np.array([[True, True, False, False, False], [True] * 5])
    setups = best_setup(
        places, MARKS, TARGETS, 0.01, TotalStation(), BLOCKS, marks_seen=seen
    )
    assert setups.best == 1 and np.isinf(setups.score[0])
    assert setups.marks_seen.tolist() == [2, 5]


def test_a_place_that_sees_more_targets_comes_first():
    places = np.array([(50.0, 50.0), (30.0, 10.0)])
    seen = np.array([[True, False, True, True], [True] * 4])
    setups = best_setup(
        places, MARKS, TARGETS, 0.01, TotalStation(), BLOCKS, targets_seen=seen
    )
    assert setups.best == 1


def test_no_usable_place_is_said_and_not_scored():
    setups = best_setup(
        [(50, 50)], MARKS, TARGETS, 0.01, TotalStation(), excluded=[True]
    )
    assert setups.best is None
    near = best_setup([(0.5, 0.5)], MARKS[:3], TARGETS, 0.01, TotalStation())
    assert near.best is None  # one of three marks is nearer than the shortest focus


def test_the_best_mark_to_occupy_is_that_of_the_single_prediction():
    joint = 1e-6 * (4 * np.eye(10) + 3 * np.kron(np.ones((5, 5)), np.eye(2)))
    pairs = best_occupied(MARKS, TARGETS, 0.02, TotalStation(), joint)
    assert len(pairs.score) == 20
    for s, b, score in zip(pairs.stations, pairs.backsights, pairs.score, strict=True):
        part = [
            joint[2 * i : 2 * i + 2, 2 * j : 2 * j + 2]
            for i, j in ((s, s), (b, b), (s, b))
        ]
        worst = max(
            polar(
                MARKS[s],
                MARKS[b],
                t,
                TotalStation(),
                station_covariance=part[0],
                backsight_covariance=part[1],
                station_backsight_covariance=part[2],
            ).ellipse_95.semi_major_m
            for t in TARGETS
        )
        assert score == pytest.approx(worst / 0.02, rel=1e-6)


def test_marks_that_cannot_be_occupied_or_seen_are_left_out():
    occupiable = [True, False, False, False, False]
    between = ~np.eye(5, dtype=bool)
    between[0, 1] = False
    pairs = best_occupied(
        MARKS, TARGETS, 0.02, TotalStation(), between=between, occupiable=occupiable
    )
    assert set(pairs.stations) == {0}
    assert 1 not in pairs.backsights


def test_wrong_sizes_and_empty_sets_are_named():
    with pytest.raises(EmptyInput):
        best_setup([], MARKS, TARGETS, 0.01, TotalStation())
    with pytest.raises(WrongShape):
        best_setup([(1, 1)], MARKS, TARGETS, 0.01, TotalStation(), excluded=[1, 0])
    with pytest.raises(GeometryError):
        grid((0, 0), (-5, 5), 1)
    with pytest.raises(GeometryError):
        grid((0, 0), (1e7, 1e7), 0.5)


wild = st.floats() | st.sampled_from([0.0, 1e7])


@given(st.lists(st.tuples(wild, wild), max_size=4), st.tuples(wild, wild))
def test_any_marks_give_a_score_or_a_named_error(marks, place):
    try:
        setups = best_setup([place], marks, TARGETS, 0.01, TotalStation())
    except GeometryError as error:
        assert str(error)
    else:
        assert not np.isnan(setups.score).any()
