"""Measured checks of a way against what they should be; old stake, design, built."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from geometry.decide import Rule
from geometry.errors import OutOfRange, WrongShape
from geometry.verdicts import Verdict
from geometry.ways import Kind, differences, judged, put_back, ways_back
from tests.geometry.test_ways_back import (
    AROUND,
    BENCH,
    CONTROL,
    EXTRA,
    HIGH,
    TARGET,
    of,
)


def test_what_was_measured_is_held_against_what_was_expected():
    way = ways_back(TARGET, [*CONTROL, *AROUND])[0]
    expected = [c.expected for c in way.checks]
    assert judged(way, expected).verdict is Verdict.PASS
    off = [expected[0] + 0.05, expected[1]]
    outcome = judged(way, off)
    assert outcome.verdict is Verdict.FAIL
    assert outcome.decisions[0].difference == pytest.approx(0.05)
    assert judged(way, [None, None]).verdict is Verdict.NOT_TESTED
    near = [expected[0] + 0.019, None]
    assert judged(way, near, rule=Rule.GUARDED).verdict is Verdict.UNDECIDED
    with pytest.raises(WrongShape):
        judged(way, [1.0])


def test_a_passed_check_of_a_provisional_mark_says_it_is_not_checked_yet():
    way = of(Kind.STRINGS, ways_back(TARGET, [*AROUND, EXTRA]))[0]
    outcome = judged(way, [c.expected for c in way.checks])
    assert outcome.verdict is Verdict.PASS and outcome.provisional
    assert "tied to control" in outcome.reason


def test_an_angle_check_is_compared_round_the_circle():
    far = [replace(m, occupiable=m.id == "CP1") for m in CONTROL]
    way = of(Kind.POLAR, ways_back(TARGET, far))[0]
    turned = way.checks[0].expected + 2 * math.pi
    assert judged(way, [turned]).decisions[0].difference == pytest.approx(0, abs=1e-12)


def test_a_refused_way_leaves_no_origin():
    refused = ways_back(TARGET, [CONTROL[0]])[0]
    with pytest.raises(OutOfRange):
        put_back(refused)
    level = of(Kind.LEVELS, ways_back(HIGH, BENCH))[0]
    with pytest.raises(OutOfRange):
        put_back(level)


def test_old_stake_design_and_built_work_are_set_against_each_other():
    d = differences((0, 0), (0.0, 0.02), (0.01, 0.05), azimuth_rad=math.pi / 2)
    assert d.as_set.right_m == pytest.approx(-0.02)
    assert d.built_from_stake.north_m == pytest.approx(0.03)
    assert d.built.along_m == pytest.approx(0.01)
    assert differences((0, 0)).built is None
