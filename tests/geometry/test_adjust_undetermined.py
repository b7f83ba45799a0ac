"""What an adjustment says when the measurements do not hold the points."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.adjust import (
    Angle,
    Azimuth,
    Direction,
    Distance,
    Undetermined,
    adjust_network,
    coordinates,
)
from geometry.adjust.frontal import NotDetermined
from geometry.errors import Singular

FIELD = {
    "A": (0.0, 0.0),
    "B": (80.0, 10.0),
    "C": (20.0, 70.0),
    "P": (50.0, 40.0),
    "Q": (90.0, 60.0),
    "R": (110.0, 90.0),
}


def measured(start, missing):
    """The proposed measurements, taken without error in the field `start`."""
    at = {n: np.array(p, dtype=float) for n, p in start.items()}

    def azimuth(a, b):
        return math.atan2(*(at[b] - at[a]))

    booked, known = [], []
    for one in missing:
        p = one.points
        if one.kind == "distance":
            booked.append(Distance(*p, math.dist(at[p[0]], at[p[1]]), 0.002))
        elif one.kind == "angle":
            booked.append(Angle(*p, azimuth(p[0], p[2]) - azimuth(p[0], p[1]), 2e-5))
        elif one.kind == "azimuth":
            booked.append(Azimuth(*p, azimuth(*p), 2e-5))
        else:
            known.append(coordinates(p, [at[p[0]]], 0.002))
    return booked, known


def dist(a, b):
    return Distance(a, b, math.dist(FIELD[a], FIELD[b]), 0.002)


def turn(a, b):
    d = np.subtract(FIELD[b], FIELD[a])
    return Direction(a, b, math.atan2(*d) + 1.0, 2e-5)


def refused(booked, **options):
    with pytest.raises(Undetermined) as caught:
        adjust_network(FIELD, booked, **options)
    return caught.value


HOLD = [dist("A", "P"), dist("B", "P"), turn("A", "B"), turn("A", "C"), turn("A", "P")]


def only(*names):
    return {n: FIELD[n] for n in names}


def test_a_point_on_one_distance_is_named_with_the_way_it_can_slide():
    start = only("A", "B", "P")
    with pytest.raises(Undetermined) as caught:
        adjust_network(start, [dist("A", "P")], fixed="AB")
    (loose,) = caught.value.loose

    assert loose.point == "P"
    # it slides square to the line from A, azimuth 51.3 degrees
    across = (math.atan2(50, 40) + math.pi / 2) % math.pi
    assert loose.azimuth_rad == pytest.approx(across, abs=1e-6)
    assert caught.value.missing[0].points[-1] == "P"
    assert "P" in caught.value.where


def test_a_point_that_nothing_measured_is_free_both_ways():
    start = only("A", "B", "C", "P", "Q")
    error = None
    with pytest.raises(Undetermined) as caught:
        adjust_network(start, HOLD, fixed="ABC")
    error = caught.value

    assert [(one.point, one.azimuth_rad) for one in error.loose] == [("Q", None)]
    assert len(error.missing) == 2


def test_two_points_tied_only_to_each_other_are_both_named():
    start = only("A", "B", "C", "P", "Q", "R")
    booked = [*HOLD, dist("Q", "R")]
    with pytest.raises(Undetermined) as caught:
        adjust_network(start, booked, fixed="ABC")

    assert {one.point for one in caught.value.loose} == {"Q", "R"}
    assert len(caught.value.missing) == 3


def test_a_network_on_one_fixed_point_can_still_turn_and_asks_for_an_azimuth():
    booked = [dist(a, b) for a in "ABCPQR" for b in "ABCPQR" if a < b]
    error = refused(booked, fixed="A")

    assert {one.point for one in error.loose} == set("BCPQR")
    assert len(error.missing) == 1


def test_a_network_with_nothing_held_asks_for_a_known_position():
    booked = [dist(a, b) for a in "ABCPQR" for b in "ABCPQR" if a < b]
    error = refused(booked)

    assert len(error.loose) == 6
    assert any(one.kind == "position" for one in error.missing)
    assert isinstance(error, Singular)


def test_angles_alone_from_one_fixed_point_lack_a_distance_and_an_azimuth():
    booked = [turn(a, b) for a in "ABCPQR" for b in "ABCPQR" if a != b]
    error = refused(booked, fixed="A")
    add, known = measured(FIELD, error.missing)
    net = adjust_network(FIELD, [*booked, *add], fixed="A", known=known)

    assert len(error.missing) == 2
    assert net.point("R").position_m == pytest.approx(FIELD["R"], abs=1e-6)


def test_a_point_in_line_with_two_distances_is_undetermined_across_the_line():
    start = {"A": (0, 0), "B": (100, 0), "P": (40, 0)}
    booked = [Distance("A", "P", 40, 0.002), Distance("B", "P", 60, 0.002)]
    with pytest.raises(Undetermined) as caught:
        adjust_network(start, booked, fixed="AB")

    assert caught.value.loose[0].azimuth_rad == pytest.approx(0.0, abs=1e-6)


def test_a_resection_on_the_danger_circle_is_refused():
    angle = [0.3, 1.2, 2.9, 4.4]
    a, b, c, p = ((50 * math.cos(t), 50 * math.sin(t)) for t in angle)
    start = {"A": a, "B": b, "C": c, "P": p}
    booked = [
        Direction("P", n, math.atan2(*np.subtract(start[n], p)), 2e-5) for n in "ABC"
    ]
    with pytest.raises(Undetermined) as caught:
        adjust_network(start, booked, fixed="ABC")

    assert [one.point for one in caught.value.loose] == ["P"]


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_adding_what_is_proposed_always_makes_the_network_solvable(seed):
    rng = np.random.default_rng(seed)
    count = int(rng.integers(3, 8))
    names = [f"P{i}" for i in range(count)]
    start = dict(zip(names, rng.uniform(0, 100, (count, 2)), strict=True))
    booked = []
    for _ in range(int(rng.integers(0, 2 * count))):
        a, b = rng.choice(names, 2, replace=False)
        d = start[b] - start[a]
        if rng.random() < 0.5:
            booked.append(Distance(str(a), str(b), math.hypot(*d), 0.002))
        else:
            booked.append(Direction(str(a), str(b), math.atan2(*d) + 2.0, 2e-5))
    fixed = names[: int(rng.integers(0, 3))]
    known = []
    for _ in range(12):
        try:
            net = adjust_network(start, booked, fixed=fixed, known=known)
        except Undetermined as error:
            assert error.loose
            assert error.missing
            add, positions = measured(start, error.missing)
            booked, known = [*booked, *add], [*known, *positions]
        else:
            break
    else:
        pytest.fail("the proposals never made it solvable")
    for name in names:
        assert net.point(name).position_m == pytest.approx(start[name], abs=1e-5)


def test_in_a_large_network_the_one_loose_point_is_found_among_thousands():
    side = 22
    grid = np.stack(np.meshgrid(np.arange(side), np.arange(side)), -1).reshape(-1, 2)
    start = {f"{i}": 30.0 * p for i, p in enumerate(grid)}
    booked = []
    for i, p in enumerate(grid):
        for step in ((1, 0), (0, 1), (1, 1)):
            q = p + step
            if (q < side).all():
                j = int(q[0] + side * q[1])
                booked.append(Distance(f"{i}", f"{j}", 30 * math.hypot(*step), 0.002))
    start["loose"] = np.array([1000.0, 10.0])
    booked.append(Distance("21", "loose", math.dist(start["21"], (1000, 10)), 0.002))
    with pytest.raises(Undetermined) as caught:
        adjust_network(start, booked, fixed=["0", "21"])

    assert [one.point for one in caught.value.loose] == ["loose"]


def test_the_inner_signal_never_escapes_to_the_caller():
    assert not issubclass(NotDetermined, Singular)
    with pytest.raises(Singular):
        adjust_network(only("A", "B", "P"), [dist("A", "P")], fixed="AB")
