"""Profiles: the printed vertical curve, joints without steps, high and low points."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from geometry.alignment import Pvi, grade_at, profile, pvi, turning_points
from geometry.errors import EmptyInput, NotFinite, OutOfRange


def test_the_printed_sag_curve_lies_in_the_profile():
    # Indiana Design Manual ch. 44, example 44-3.1 (low elevation computed: 579.961)
    line = profile(
        [
            pvi(1000.0, 577.50 + 380 * 0.0175),
            pvi(1380.0, 577.50, 500.0),
            pvi(1800.0, 577.50 + 420 * 0.0225),
        ]
    )
    z = grade_at(line, [1130.0, 1348.75, 1630.0]).elevation_m
    assert z.round(3).tolist() == [581.875, 579.961, 583.125]
    low = turning_points(line)
    assert [p.kind for p in low] == ["low"]
    assert low[0].distance_m == pytest.approx(1348.75)


def test_an_unequal_curve_is_off_its_pvi_by_the_printed_formula():
    # e = L1 L2 (g2 - g1) / 2 (L1 + L2), route-surveying texts (from memory)
    line = profile([Pvi(0, 10.0), Pvi(100, 13.0, 40.0, 60.0), Pvi(200, 11.0)])
    offset = 40 * 60 * (-0.02 - 0.03) / (2 * 100)
    assert grade_at(line, [100.0]).elevation_m[0] == pytest.approx(13.0 + offset)


@given(
    st.lists(
        st.tuples(
            st.floats(60.0, 300.0),
            st.floats(-8.0, 8.0),
            st.floats(1, 25),
            st.floats(1, 25),
        ),
        min_size=2,
        max_size=8,
    )
)
def test_a_profile_has_no_step_in_height_or_grade_on_its_curves(rows):
    at, pvis = 0.0, [Pvi(0.0, 50.0)]
    for gap, z, before, after in rows:
        at += gap
        pvis.append(Pvi(at, 50 + z, before, after))
    pvis.append(Pvi(at + 100.0, 50.0))
    line = profile(pvis)
    joints = line.distances_m[1:-1]
    before, after = grade_at(line, joints - 1e-7), grade_at(line, joints + 1e-7)
    assert np.abs(before.elevation_m - after.elevation_m).max() < 1e-6
    assert np.abs(before.grade - after.grade).max() < 1e-6
    ends = grade_at(line, [0.0, at + 100.0])
    assert ends.elevation_m == pytest.approx([50.0, 50.0])


@given(st.lists(st.integers(-6, 6), min_size=2, max_size=6))
def test_turning_points_are_where_a_finely_drawn_profile_turns(heights):
    assume(all(a != b for a, b in pairwise(heights)))
    inner = range(1, len(heights) - 1)
    line = profile(
        [pvi(100.0 * i, z, 60.0 * (i in inner)) for i, z in enumerate(heights)]
    )
    at = np.linspace(0, line.distances_m[-1], 7001)
    uphill = np.diff(grade_at(line, at).elevation_m) > 0
    turns = at[1:-1][uphill[1:] != uphill[:-1]]
    found = turning_points(line)
    assert [p.distance_m for p in found] == pytest.approx(turns, abs=0.2)
    kinds = ["high" if up else "low" for up in uphill[:-1][uphill[1:] != uphill[:-1]]]
    assert [p.kind for p in found] == kinds


def test_a_sharp_break_is_a_turning_point_too():
    line = profile([pvi(0, 10.0), pvi(100, 12.0), pvi(200, 10.0), pvi(300, 10.0)])
    assert [(p.kind, p.distance_m) for p in turning_points(line)] == [("high", 100.0)]


def test_a_symmetric_crest_turns_exactly_at_its_pvi():
    line = profile([pvi(0, 10.0), pvi(100, 12.0, 80.0), pvi(200, 10.0)])
    assert [(p.kind, p.distance_m) for p in turning_points(line)] == [("high", 100.0)]


def test_beyond_its_ends_the_last_grade_is_carried_on_and_flagged():
    line = profile([pvi(0, 10.0), pvi(100, 12.0)])
    g = grade_at(line, [-50.0, 150.0])
    assert g.elevation_m == pytest.approx([9.0, 13.0])
    assert g.beyond_m.tolist() == [-50.0, 50.0]


def test_curves_may_touch_without_a_grade_between():
    line = profile(
        [pvi(0, 10.0), pvi(50, 12.0, 100.0), pvi(150, 10.0, 100.0), pvi(200, 11.0)]
    )
    assert np.isfinite(grade_at(line, np.linspace(0, 200, 50)).elevation_m).all()


def test_bad_profiles_are_named():
    with pytest.raises(OutOfRange, match=r"PVI 2 and 3, by 20.000 m"):
        profile([pvi(0, 1), pvi(100, 2, 120), pvi(200, 1, 120), pvi(300, 2)])
    with pytest.raises(OutOfRange, match="in order"):
        profile([pvi(0, 1), pvi(0, 2)])
    with pytest.raises(OutOfRange, match="first and the last"):
        profile([pvi(0, 1, 10), pvi(50, 2)])
    with pytest.raises(OutOfRange, match="negative"):
        profile([pvi(0, 1), pvi(20, 1, -5), pvi(50, 2)])
    with pytest.raises(OutOfRange, match="one half"):
        profile([pvi(0, 1), Pvi(20, 1, 5.0, 0.0), pvi(50, 2)])
    with pytest.raises(EmptyInput):
        profile([pvi(0, 1)])
    with pytest.raises(NotFinite, match="elevations"):
        profile([pvi(0, math.nan), pvi(50, 2)])
