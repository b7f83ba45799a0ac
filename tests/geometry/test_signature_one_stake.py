"""One stake by itself: explained by a usual slip, or honestly not."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.errors import NotFinite, NotReadable
from geometry.signature import (
    Line,
    Slip,
    divisible_by_nine,
    explain_stake,
    slips,
)
from geometry.verdicts import Verdict

DESIGN = np.array([5123.46, 8461.72])
EAST = Line(azimuth_rad=math.pi / 2, offset_m=3.0, name="line B")


def off(east, north):
    return DESIGN + np.array([east, north])


def test_an_offset_on_the_wrong_side_is_twice_the_offset_across_the_line():
    # right of a line running east is south, so the wrong side is 6 m to the north
    found = explain_stake(DESIGN, off(0.004, 6.003), lines=[EAST])
    assert (found.verdict, found.hints[0].slip) == (Verdict.FAIL, Slip.WRONG_SIDE)
    assert "other side of line B" in found.reason


def test_another_whole_offset_is_named_with_both_values():
    found = explain_stake(DESIGN, off(0.0, -2.004), lines=[EAST])
    assert found.hints[0].slip is Slip.OTHER_OFFSET
    assert "5.000 m off line B instead of 3.000 m" in found.reason


def test_a_station_ten_out_lies_along_the_line():
    found = explain_stake(DESIGN, off(-20.003, 0.005), lines=[EAST])
    assert found.hints[0].slip is Slip.STATION


def test_exchanged_digits_are_named_with_the_number_as_it_was_taken():
    found = explain_stake(DESIGN, off(0.18, 0.002), typed=("5123.46", "8461.72"))
    assert found.hints[0].slip is Slip.EXCHANGED
    assert "5123.46 may have been taken as 5123.64" in found.reason


def test_another_marks_place_is_named():
    found = explain_stake(
        DESIGN, off(12.501, 7.3), others=[off(12.5, 7.3)], other_names=["A7"]
    )
    assert found.hints[0].slip is Slip.OTHER_MARK
    assert "where A7 is planned" in found.reason


def test_two_slips_that_foretell_one_place_are_both_told():
    square = Line(azimuth_rad=0.0, offset_m=-3.0, name="line 4")
    found = explain_stake(DESIGN, off(6.0, 0.0), lines=[square], others=[off(6.0, 0.0)])
    assert found.verdict is Verdict.AMBIGUOUS
    assert {h.slip for h in found.hints} >= {Slip.WRONG_SIDE, Slip.OTHER_MARK}


def test_a_small_random_knock_is_explained_by_nothing():
    found = explain_stake(
        DESIGN, off(0.031, -0.022), lines=[EAST], typed=("5123.46", "8461.72")
    )
    assert found.verdict is Verdict.UNDECIDED
    assert "better than chance" in found.reason


def test_within_tolerance_there_is_nothing_to_explain():
    assert explain_stake(DESIGN, off(0.004, 0.0), lines=[EAST]).verdict is Verdict.PASS


def test_chance_alone_is_blamed_on_a_slip_no_more_often_than_promised():
    rng = np.random.default_rng(5)
    blamed = 0
    for _ in range(400):
        size, azimuth = rng.uniform(0.3, 8.0), rng.uniform(0, 2 * math.pi)
        shot = off(size * math.sin(azimuth), size * math.cos(azimuth))
        found = explain_stake(DESIGN, shot, lines=[EAST], typed=("5123.46", "8461.72"))
        blamed += found.verdict in (Verdict.FAIL, Verdict.AMBIGUOUS)
    assert blamed / 400 < 0.05


@settings(max_examples=60)
@given(st.floats(-1e3, 1e3), st.floats(-1e3, 1e3), st.floats(-7, 7), st.floats(-9, 9))
def test_any_stake_gets_an_answer(east, north, azimuth, offset):
    found = explain_stake(
        DESIGN, off(east, north), lines=[Line(azimuth, offset)], typed=("1.5", "-20")
    )
    assert found.reason
    assert all(math.isfinite(h.by_chance) and h.left_m >= 0 for h in found.hints)


@given(st.integers(0, 999_999))
def test_exchanged_digits_always_differ_by_a_multiple_of_nine(number):
    text = f"{number / 100:.2f}"
    for slip in slips(text):
        if slip.exchanged:
            assert divisible_by_nine(slip.difference, 2)
            assert sorted(slip.text) == sorted(text)


def test_numbers_that_are_none_are_named():
    with pytest.raises(NotReadable, match="12\\+34"):
        slips("12+34")
    with pytest.raises(NotReadable):
        explain_stake(DESIGN, off(1, 1), typed=("", "5"))
    with pytest.raises(NotFinite):
        explain_stake(DESIGN, (math.nan, 0))
    with pytest.raises(NotFinite, match="offset"):
        explain_stake(DESIGN, off(1, 1), lines=[Line(0.0, math.inf)])
