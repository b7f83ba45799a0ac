"""Station equations: one line, several numberings, gaps and overlaps."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.alignment import distance_of, places_of, stationing, stations_at
from geometry.errors import NoIntersection, NotFinite, OutOfRange, WrongShape


def test_stations_jump_at_an_equation_and_distances_do_not():
    table = stationing(1000.0, [(1250.0, 1300.0)], start_m=50.0)
    stations = stations_at(table, [50.0, 299.0, 300.0, 310.0])
    assert stations.station_m.tolist() == [1000.0, 1249.0, 1300.0, 1310.0]
    assert stations.region.tolist() == [0, 0, 1, 1]


def test_a_station_in_a_gap_is_no_point_of_the_line():
    table = stationing(1000.0, [(1250.0, 1300.0)])
    assert places_of(table, 1270.0) == ()
    with pytest.raises(NoIntersection, match="gap"):
        distance_of(table, 1270.0)


def test_a_station_in_an_overlap_is_two_points_until_the_region_is_said():
    table = stationing(1000.0, [(1250.0, 1200.0)])
    assert [p.distance_m for p in places_of(table, 1220.0)] == [220.0, 270.0]
    with pytest.raises(OutOfRange, match="regions 0 and 1"):
        distance_of(table, 1220.0)
    assert distance_of(table, 1220.0, region=0) == 220.0
    assert distance_of(table, 1220.0, region=1) == 270.0


def test_back_and_ahead_of_one_equation_are_one_place():
    table = stationing(0.0, [(100.0, 150.0)])
    assert distance_of(table, 100.0) == 100.0
    assert distance_of(table, 150.0) == 100.0
    same = stationing(0.0, [(100.0, 100.0)])
    assert len(places_of(same, 100.0)) == 1


def test_before_the_start_stations_count_down():
    table = stationing(1000.0, [(1250.0, 1300.0)])
    assert stations_at(table, [-20.0]).station_m[0] == 980.0
    assert distance_of(table, 980.0) == -20.0


@given(
    st.lists(st.tuples(st.floats(1.0, 500.0), st.floats(-400.0, 400.0)), max_size=5),
    st.lists(st.floats(0.0, 3000.0), min_size=1, max_size=10),
)
def test_every_distance_comes_back_by_its_station_and_region(jumps, distances):
    start, equations = 100.0, []
    for run, jump in jumps:
        equations.append((start + run, start + run + jump))
        start += run + jump
    table = stationing(100.0, equations)
    stations = stations_at(table, distances)
    for d, s, r in zip(
        distances, stations.station_m, stations.region.tolist(), strict=True
    ):
        assert distance_of(table, float(s), region=r) == pytest.approx(d, abs=1e-6)
        assert min(abs(p.distance_m - d) for p in places_of(table, float(s))) < 1e-6
    assert (np.diff(table.distances_m) > 0).all()


def test_bad_equations_are_named():
    with pytest.raises(OutOfRange, match="Equation 2"):
        stationing(0.0, [(100.0, 200.0), (150.0, 300.0)])
    with pytest.raises(NotFinite, match="equation 1"):
        stationing(0.0, [(math.nan, 200.0)])
    with pytest.raises(WrongShape, match="Region 4"):
        distance_of(stationing(0.0), 10.0, region=4)
    with pytest.raises(OutOfRange, match="does not lie in its region"):
        distance_of(stationing(0.0, [(100.0, 200.0)]), 120.0, region=0)
