"""Another whole offset on the same line, outside the zones."""

from __future__ import annotations

import math

import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import BadOutline, GeometryError
from geometry.ways import relocated

EAST = math.pi / 2
FOOT = 0.3048


def box(low, high):
    return [(low, -3.0), (high, -3.0), (high, 3.0), (low, 3.0)]


def test_the_nearest_whole_offset_outside_the_hole_comes_first():
    found = relocated((0, 0), EAST, 10 * FOOT, [box(-1, 4.0)])
    assert [p.label for p in found[:3]] == ["20 ft", "25 ft", "30 ft"]
    assert found[0].position == pytest.approx((20 * FOOT, 0), abs=1e-9)
    assert found[0].clear_m == pytest.approx(20 * FOOT - 4.0)


def test_the_old_offset_itself_is_not_offered_again():
    found = relocated((0, 0), EAST, 10 * FOOT, [])
    assert "10 ft" not in [p.label for p in found]
    assert found[0].label == "15 ft"  # outward first, of two equally near


def test_a_property_line_limits_and_an_empty_answer_says_no_room():
    inside = [(-5, -5), (7, -5), (7, 5), (-5, 5)]
    found = relocated((0, 0), EAST, 3.0, [box(-1, 4.0)], property_line=inside)
    assert [p.label for p in found] == ["20 ft"]
    assert relocated((0, 0), EAST, 3.0, [box(-1, 9.0)], property_line=inside) == ()


def test_metres_are_whole_metres():
    found = relocated(
        (500_000, 4_000_000), 0.0, 2.0, [], step=1, unit_m=1.0, unit_name="m"
    )
    assert [p.offset_m for p in found[:2]] == [3.0, 1.0]


def test_a_spot_where_another_stake_stands_is_left_free():
    found = relocated((0, 0), EAST, 10 * FOOT, [], occupied=[(15 * FOOT, 0.1)])
    assert "15 ft" not in [p.label for p in found]


@given(
    st.floats(0, 6.28),
    st.floats(0, 30),
    st.lists(st.tuples(st.floats(-20, 20), st.floats(-20, 20)), max_size=5),
    st.floats(0, 2),
)
def test_no_place_offered_is_inside_a_zone_or_too_near_one(azimuth, old, corners, keep):
    zones = [[(x, y), (x + 4, y), (x + 4, y + 4), (x, y + 4)] for x, y in corners]
    for place in relocated((0, 0), azimuth, old, zones, clearance_m=keep):
        spot = shapely.Point(place.position)
        for zone in zones:
            assert spot.distance(shapely.Polygon(zone)) >= keep - 1e-6
        assert place.offset % 5 == 0
        assert math.hypot(*place.position) == pytest.approx(place.offset * FOOT)


def test_a_zone_that_crosses_itself_is_named():
    with pytest.raises(BadOutline):
        relocated((0, 0), 0.0, 3.0, [[(0, 0), (5, 5), (5, 0), (0, 5)]])
    with pytest.raises(GeometryError):
        relocated((0, 0), math.nan, 3.0, [])
