"""Catch points: exact crossings, honest when there is none or more than one."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import EmptyInput, NotFinite, OutOfRange, WrongShape
from geometry.section import (
    SideSlopes,
    catch_point,
    ground_at,
    section_ground,
    settles,
    trial_shot,
)
from geometry.verdicts import Verdict

TWO_TO_ONE = SideSlopes(2.0, 2.0)


def test_level_ground_is_caught_at_run_times_height():
    # x = b/2 + s h for level ground, route-surveying texts (from memory)
    ground = section_ground([-40, 40], [103.0, 103.0])
    c = catch_point(6.0, 100.0, ground, TWO_TO_ONE, right=True)
    assert (c.verdict, c.kind) == (Verdict.PASS, "cut")
    point = c.points[0]
    assert point.offset_m == pytest.approx(12.0)
    assert point.above_hinge_m == pytest.approx(3.0)
    assert point.slope_m == pytest.approx(math.hypot(6, 3))


def test_a_fill_on_the_left_is_measured_on_the_left():
    ground = section_ground([-40, 40], [96.0, 96.0])
    c = catch_point(-6.0, 100.0, ground, SideSlopes(2.0, 3.0), right=False)
    assert c.kind == "fill"
    assert c.points[0].offset_m == pytest.approx(-18.0)
    assert c.points[0].above_hinge_m == pytest.approx(-4.0)


def test_the_cut_slope_starts_beyond_its_ditch():
    ditch = ((2.0, -0.25), (1.0, 0.0))
    ground = section_ground([0, 60], [103.0, 103.0])
    c = catch_point(6.0, 100.0, ground, SideSlopes(2.0, 2.0, ditch), right=True)
    assert c.points[0].offset_m == pytest.approx(9.0 + 2 * 3.5)
    assert c.points[0].slope_m == pytest.approx(math.hypot(7.0, 3.5))
    fill = catch_point(6.0, 110.0, ground, SideSlopes(2.0, 2.0, ditch), right=True)
    assert fill.points[0].offset_m == pytest.approx(6.0 + 2 * 7.0)


def test_ground_steeper_than_the_slope_has_no_catch_and_says_why():
    # ground 0.80 against a 1.5:1 cut (0.667): they never meet
    ground = section_ground([0, 60], [100.0, 148.0])
    c = catch_point(6.0, 100.0, ground, SideSlopes(1.5, 1.5), right=True)
    assert (c.verdict, c.points) == (Verdict.FAIL, ())
    assert "0.800" in c.reason and "0.667" in c.reason
    assert not settles(1.5, 0.8)


def test_ground_shot_too_short_asks_for_more():
    ground = section_ground([0, 9], [103.0, 103.0])
    c = catch_point(6.0, 100.0, ground, TWO_TO_ONE, right=True)
    assert c.verdict is Verdict.FAIL
    assert "farther out" in c.reason


def test_a_knoll_is_caught_more_than_once_and_all_are_told():
    ground = section_ground([0, 10, 12, 20, 60], [101, 101, 109, 100, 130])
    c = catch_point(6.0, 100.0, ground, TWO_TO_ONE, right=True)
    assert c.verdict is Verdict.AMBIGUOUS
    outs = [p.offset_m for p in c.points]
    assert len(outs) == 4 and outs == sorted(outs)


def test_a_hinge_on_the_ground_is_its_own_catch():
    ground = section_ground([0, 20], [100.0, 104.0])
    c = catch_point(5.0, 101.0, ground, TWO_TO_ONE, right=True)
    assert (c.kind, c.points[0].offset_m) == ("grade", 5.0)


@given(
    st.lists(st.floats(-4, 4), min_size=4, max_size=20),
    st.floats(96, 112),
    st.floats(1.0, 4.0),
    st.booleans(),
)
def test_every_catch_lies_on_ground_and_slope_and_none_is_missed(
    steps, height, run, right
):
    side = 1 if right else -1
    offsets = side * np.arange(len(steps)) * 4.0
    ground = section_ground(offsets, 104 + np.cumsum(steps))
    hinge = side * 5.0
    c = catch_point(hinge, height, ground, SideSlopes(run, run), right=right)
    rise = {"cut": 1 / run, "fill": -1 / run, "grade": 0.0}[c.kind]
    for p in c.points:
        assert p.elevation_m == pytest.approx(ground_at(ground, p.offset_m))
        assert p.elevation_m == pytest.approx(height + rise * p.from_hinge_m, abs=1e-6)
    if c.kind == "grade":
        return
    x = np.linspace(5.0, 4.0 * (len(steps) - 1), 4001)
    z = np.array([ground_at(ground, side * v) for v in x])
    gap = height + rise * (x - 5.0) - z
    seen = int((gap[:-1] * gap[1:] < 0).sum())
    assert len(c.points) >= seen


def test_trial_and_move_finds_the_same_catch_where_it_settles():
    ground = section_ground([0, 10, 20, 40], [101.0, 102.0, 104.0, 105.0])
    exact = catch_point(6.0, 100.0, ground, TWO_TO_ONE, right=True).points[0]
    x = 10.0
    for _ in range(40):
        shot = trial_shot(6.0, 100.0, 2.0, x, ground_at(ground, x))
        if shot.here:
            break
        x += shot.move_m
    assert shot.here
    assert x == pytest.approx(exact.offset_m, abs=0.06)


def test_bad_sections_are_named():
    ground = section_ground([10, 20], [1.0, 2.0])
    with pytest.raises(OutOfRange, match="at the hinge"):
        catch_point(6.0, 100.0, ground, TWO_TO_ONE, right=True)
    with pytest.raises(OutOfRange, match="run"):
        catch_point(12.0, 100.0, ground, SideSlopes(0.0, 2.0), right=True)
    with pytest.raises(OutOfRange, match="width"):
        catch_point(12.0, 1.0, ground, SideSlopes(1, 2.0, ((0.0, 0.1),)), right=True)
    with pytest.raises(OutOfRange, match="same offset"):
        section_ground([10, 10], [1.0, 2.0])
    with pytest.raises(EmptyInput):
        section_ground([10], [1.0])
    with pytest.raises(WrongShape):
        section_ground([10, 11], [1.0])
    with pytest.raises(NotFinite):
        section_ground([10, math.nan], [1.0, 2.0])
    with pytest.raises(OutOfRange, match="not measured there"):
        ground_at(ground, 25.0)
