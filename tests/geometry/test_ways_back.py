"""Which ways are offered, ranked how, with which cautions, checks and refusals."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import GeometryError, NotFinite, OutOfRange
from geometry.precision import Tape, TotalStation, obstacle
from geometry.ways import (
    Caution,
    Kind,
    Limits,
    Refusal,
    Sort,
    Survivor,
    Target,
    Tools,
    ways_back,
)

SURE = 4e-6 * np.eye(2)
TARGET = Target("P", (50.0, 50.0), 0.02)


def control(name, place, **more):
    return Survivor(name, place, SURE, Sort.CONTROL, **more)


def stake(name, place, **more):
    return Survivor(name, place, 2 * SURE, **more)


CONTROL = [
    control("CP1", (0.0, 0.0)),
    control("CP2", (120.0, 5.0)),
    control("CP3", (110.0, 120.0)),
    control("CP4", (5.0, 110.0)),
]
AROUND = [
    stake("N", (50.0, 65.0)),
    stake("E", (65.0, 50.0)),
    stake("S", (50.0, 35.0)),
    stake("W", (35.0, 50.0)),
]


EXTRA = stake("X", (60.0, 60.0))


def of(kind, ways):
    return [w for w in ways if w.kind is kind]


def test_every_way_there_is_is_answered():
    ways = ways_back(TARGET, [*CONTROL, *AROUND])
    assert {w.kind for w in ways} == set(Kind) - {Kind.LEVELS}
    assert [w.rank for w in ways] == list(range(1, len(ways) + 1))
    offered = [w.offered for w in ways]
    assert offered == sorted(offered, reverse=True)


def test_control_comes_before_stakes_and_stakes_are_provisional():
    """A stake returns to the design from control; survivors check it."""
    ways = ways_back(TARGET, [*CONTROL, *AROUND])
    assert set(ways[0].marks) <= {"CP1", "CP2", "CP3", "CP4"}
    assert not ways[0].provisional
    assert {c.at for c in ways[0].checks} <= {"N", "E", "S", "W"}
    strings = of(Kind.STRINGS, ways)[0]
    assert set(strings.marks) == {"N", "E", "S", "W"} and strings.provisional


def test_no_check_shares_a_mark_with_its_way():
    for way in ways_back(TARGET, [*CONTROL, *AROUND]):
        for check in way.checks:
            if check.name in ("taped distance", "measured distance", "third tie"):
                assert check.at not in way.marks


def test_an_expected_check_value_is_the_distance_to_the_design():
    place = {m.id: m.position for m in [*CONTROL, *AROUND]}
    for way in ways_back(TARGET, [*CONTROL, *AROUND]):
        for check in way.checks:
            if check.to == "P":
                far = math.dist(place[check.at], TARGET.position)
                assert check.expected == pytest.approx(far)


def test_two_checks_across_each_other_see_every_error():
    way = ways_back(TARGET, [*CONTROL, *AROUND])[0]
    assert len(way.checks) == 2
    assert 0 < way.smallest_move_m < math.inf
    assert Caution.CHECK_IS_BLIND not in way.cautions
    rng = np.random.default_rng(1)
    blunder = way.smallest_move_m
    worst = 1.0
    for angle in np.linspace(0, math.pi, 37):
        move = blunder * np.array([math.sin(angle), math.cos(angle)])
        seen = 0.0
        for check in way.checks:
            shift = abs(float(move @ check.gradient)) / check.sd
            seen = max(seen, (np.abs(shift + rng.normal(0, 1, 4000)) > 3.29).mean())
        worst = min(worst, seen)
    assert worst > 0.4  # each alone; together they reach 0.8


def test_trusted_marks_come_first():
    doubtful = [replace(m, trusted=False) for m in CONTROL]
    ways = ways_back(TARGET, [*doubtful, *AROUND])
    assert set(ways[0].marks) <= {"N", "E", "S", "W"}
    late = next(w for w in ways if set(w.marks) <= {"CP1", "CP2", "CP3", "CP4"})
    assert late.untrusted and Caution.NOT_CHECKED in late.cautions
    assert late.needs_reason


def test_a_single_survivor_is_refused():
    ways = ways_back(TARGET, [CONTROL[0]])
    assert {w.refusal for w in ways} == {Refusal.SINGLE_SURVIVOR}
    assert "Only CP1" in ways[0].reason
    assert {w.refusal for w in ways_back(TARGET, [])} == {Refusal.SINGLE_SURVIVOR}


def test_two_survivors_leave_no_check():
    tools = Tools(total_station=None, level=None)
    ways = ways_back(TARGET, AROUND[:2], tools=tools)
    assert {w.kind for w in ways if w.refusal is Refusal.NO_CHECK} >= {Kind.TIES}
    assert not any(w.offered for w in ways)


def test_a_basis_that_may_not_be_used_is_named_with_its_reason():
    bad = replace(AROUND[0], usable=False, why_not="put back by others")
    ways = ways_back(
        TARGET, [bad, *AROUND[1:]], tools=Tools(total_station=None, level=None)
    )
    refused = [w for w in ways if w.refusal is Refusal.BASIS_NOT_USABLE]
    assert refused and all("N may not be used" in w.reason for w in refused)
    assert "put back by others" in refused[0].reason
    assert all("N" not in w.marks for w in ways if w.offered)
    assert all(c.at != "N" for w in ways for c in w.checks)


def test_when_nothing_left_may_be_used_the_basis_is_the_reason():
    bad = [replace(m, usable=False, why_not="in question") for m in AROUND]
    ways = ways_back(TARGET, bad)
    assert {w.refusal for w in ways} == {Refusal.BASIS_NOT_USABLE}


def test_marks_in_one_line_with_the_point_are_singular_for_ties():
    line = [stake(f"L{i}", (50.0 + 5 * i, 50.0)) for i in (1, 2, 3)]
    ways = ways_back(TARGET, line, tools=Tools(total_station=None, level=None))
    assert of(Kind.TIES, ways)[0].refusal is Refusal.SINGULAR
    assert of(Kind.STRINGS, ways)[0].refusal is Refusal.SINGULAR
    assert of(Kind.IN_LINE, ways)[0].offered


@pytest.mark.parametrize("sort", [Sort.CONTROL, Sort.BENCHMARK, Sort.LEGAL_MONUMENT])
def test_control_and_monuments_are_never_set_back(sort):
    ways = ways_back(replace(TARGET, sort=sort), [*CONTROL, *AROUND])
    assert {w.refusal for w in ways} == {Refusal.BASIS_NOT_USABLE}
    word = "surveyor" if sort is Sort.LEGAL_MONUMENT else "new values"
    assert word in ways[0].reason


def test_only_the_four_reasons_ever_refuse():
    for marks in ([], CONTROL[:1], AROUND[:2], CONTROL, [*CONTROL, *AROUND]):
        for way in ways_back(TARGET, marks):
            assert way.offered or way.refusal in set(Refusal)
            assert way.offered or way.reason


def test_a_short_backsight_is_a_caution_and_not_a_refusal():
    near = [control("CP1", (0.0, 0.0)), control("CP2", (12.0, 0.0))]
    ways = ways_back(
        TARGET,
        [*near, stake("X", (60.0, 50.0), occupiable=False)],
        limits=Limits(per_kind=9),
    )
    way = next(w for w in of(Kind.POLAR, ways) if w.marks == ("CP1", "CP2"))
    assert way.offered and Caution.SHORT_BACKSIGHT in way.cautions
    assert way.needs_reason


def test_a_weak_angle_and_a_long_tape_are_cautions():
    marks = [
        stake("A", (50.0, 88.0)),
        stake("B", (56.0, 88.0)),
        stake("C", (86.0, 44.0)),
    ]
    ways = ways_back(
        TARGET, marks, tools=Tools(total_station=None), limits=Limits(per_kind=9)
    )
    weak = next(w for w in of(Kind.TIES, ways) if set(w.marks) == {"A", "B"})
    assert {Caution.WEAK_ANGLE, Caution.LONG_TAPE} <= set(weak.cautions)


def test_a_three_mark_free_station_warns_and_a_wide_one_does_not():
    three = of(Kind.FREE_STATION, ways_back(TARGET, CONTROL[:3]))[0]
    four = of(Kind.FREE_STATION, ways_back(TARGET, CONTROL))[0]
    assert three.offered and Caution.THREE_MARKS in three.cautions
    assert four.offered and Caution.THREE_MARKS not in four.cautions
    assert three.checks[0].name == "residuals of the sights"
    assert Caution.SETUP_CHECK_ONLY in three.cautions


def test_two_control_marks_alone_give_a_free_station_no_check():
    ways = ways_back(TARGET, CONTROL[:2])
    way = of(Kind.FREE_STATION, ways)[0]
    assert way.refusal is Refusal.NO_CHECK


def test_a_polar_way_without_third_distance_falls_back_to_a_second_backsight():
    far = [replace(m, occupiable=m.id == "CP1") for m in CONTROL]
    way = of(Kind.POLAR, ways_back(TARGET, far))[0]
    assert way.checks[0].name == "second backsight"
    assert way.checks[0].unit == "rad"
    assert Caution.SETUP_CHECK_ONLY in way.cautions


def test_a_wall_in_the_line_of_sight_is_a_caution_and_costs_rank():
    wall = obstacle([(20, 18), (22, 18), (22, 26), (20, 26)])
    open_ = ways_back(TARGET, [*CONTROL, *AROUND], limits=Limits(per_kind=9))
    shut = ways_back(
        TARGET, [*CONTROL, *AROUND], obstacles=[wall], limits=Limits(per_kind=9)
    )
    assert any(w.marks[0] == "CP1" for w in of(Kind.POLAR, open_))
    first = of(Kind.POLAR, shut)[0]
    assert first.marks[0] != "CP1" and Caution.BLOCKED not in first.cautions
    for way in of(Kind.POLAR, shut):
        if way.marks[0] == "CP1":
            assert Caution.BLOCKED in way.cautions


def test_a_place_to_stand_sees_the_point_and_stands_in_nothing():
    wall = obstacle([(40, 55), (60, 55), (60, 58), (40, 58)])
    ways = ways_back(TARGET, [*CONTROL, *AROUND], obstacles=[wall])
    way = of(Kind.FREE_STATION, ways)[0]
    east, north = way.stand_at
    assert not (40 <= east <= 60 and 55 <= north <= 58)
    assert north < 55 or not 40 <= east <= 60


def test_a_point_beside_its_string_is_told_how_far_to_step_aside():
    marks = [replace(AROUND[0], position=(50.012, 65.0)), *AROUND[1:], EXTRA]
    ways = ways_back(TARGET, marks, tools=Tools(total_station=None))
    way = of(Kind.STRINGS, ways)[0]
    aside = [n for n in way.numbers if n.name == "aside"]
    assert len(aside) == 1
    assert aside[0].value == pytest.approx(0.006, abs=1e-4)


def test_tools_the_crew_has_not_are_not_asked_for():
    ways = ways_back(TARGET, [*CONTROL, *AROUND], tools=Tools(total_station=None))
    assert not {Kind.POLAR, Kind.FREE_STATION, Kind.BEST_FIT} & {w.kind for w in ways}
    ways = ways_back(TARGET, [*CONTROL, *AROUND], tools=Tools(tape=None, string=None))
    assert {w.kind for w in ways} == {Kind.POLAR, Kind.FREE_STATION, Kind.BEST_FIT}


HIGH = replace(TARGET, elevation_m=101.25)
BENCH = [
    control("BM1", (40.0, 30.0), elevation_m=100.0, elevation_sd_m=0.001),
    control("BM2", (80.0, 60.0), elevation_m=102.5, elevation_sd_m=0.001),
]


def test_an_elevation_comes_from_one_benchmark_and_is_proved_by_another():
    way = of(Kind.LEVELS, ways_back(HIGH, BENCH))[0]
    assert way.offered and way.component == "elevation"
    rise = next(n for n in way.numbers if n.name == "rise")
    assert rise.value == pytest.approx(1.25)
    assert way.checks[0].expected == pytest.approx(2.5)
    assert way.checks[0].to == "BM2"


def test_a_single_benchmark_is_refused():
    way = of(Kind.LEVELS, ways_back(HIGH, BENCH[:1]))[0]
    assert way.refusal is Refusal.SINGLE_SURVIVOR


def test_a_hub_tapped_down_still_holds_line():
    tapped = replace(BENCH[0], elevation_usable=False, why_not="tapped down")
    ways = ways_back(HIGH, [tapped, *BENCH[1:], *CONTROL[2:]])
    assert any("BM1" in w.marks for w in ways if w.component == "position")
    level = of(Kind.LEVELS, ways)
    assert not any(w.offered for w in level)
    assert any("tapped down" in w.reason for w in level)


def test_wrong_input_names_the_mark():
    with pytest.raises(NotFinite, match="X"):
        ways_back(TARGET, [stake("X", (math.nan, 0.0))])
    with pytest.raises(GeometryError, match="X"):
        ways_back(TARGET, [replace(AROUND[0], id="X", covariance_m2=-SURE), *CONTROL])
    with pytest.raises(OutOfRange, match="same number"):
        ways_back(TARGET, [CONTROL[0], CONTROL[0]])
    with pytest.raises(OutOfRange):
        ways_back(replace(TARGET, tolerance_m=0.0), CONTROL)


def test_the_lost_mark_is_never_its_own_survivor():
    ways = ways_back(TARGET, [stake("P", (50.0, 50.0)), *CONTROL])
    assert all("P" not in w.marks for w in ways)


wild = st.sampled_from([0.0, 50.0, 50.01, 65.0, 1e7, -1e7]) | st.floats()


@given(
    st.lists(
        st.tuples(wild, wild, st.booleans(), st.booleans(), st.sampled_from(Sort)),
        max_size=7,
    )
)
def test_any_survivors_give_ways_or_a_named_error(rows):
    marks = [
        Survivor(
            f"M{i}",
            (e, n),
            SURE,
            sort,
            usable=usable,
            occupiable=trusted,
            elevation_m=100.0,
        )
        for i, (e, n, usable, trusted, sort) in enumerate(rows)
    ]
    try:
        ways = ways_back(HIGH, marks, tools=Tools(TotalStation(), Tape()))
    except GeometryError as error:
        assert str(error)
    else:
        for way in ways:
            if way.offered:
                assert np.isfinite(way.covariance_m2).all()
                assert way.checks
                assert all(math.isfinite(n.value) for n in way.numbers)
            else:
                assert way.reason
