"""Which recorded mark moved: named when the measurements say so, a set when not."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.adjust import (
    Direction,
    Distance,
    HeightDifference,
    adjust_network,
    coordinates,
    heights,
)
from geometry.adjust.centring import allow_for_centring
from geometry.errors import GeometryError, OutOfRange
from geometry.moved import (
    common_and_relative,
    common_and_relative_heights,
    which_benchmark_moved,
    which_moved,
)
from geometry.verdicts import Verdict

TURN = np.arange(8) * 2 * math.pi / 8 + 0.3
RING = 60.0 * np.stack([np.sin(TURN), np.cos(TURN)], 1)
SETUPS = {"S1": (15.0, 3.0), "S2": (-20.0, -10.0)}


def named(count):
    return [f"M{i}" for i in range(count)]


def shots(true, setups, noise=0.0, rng=None, only=None):
    """A distance and a direction from every setup to every mark."""
    rng = rng or np.random.default_rng(0)
    booked = []
    for station, p in setups.items():
        for i, q in enumerate(true):
            if only is not None and i not in only:
                continue
            d = np.subtract(q, p)
            length = math.hypot(*d) + noise * rng.normal(0, 2e-3)
            reading = math.atan2(*d) + 1.0 + noise * rng.normal(0, 3e-5)
            booked.append(Distance(station, f"M{i}", length, 2e-3))
            booked.append(Direction(station, f"M{i}", reading, 3e-5))
    return booked


def moved(marks, mark, east, north):
    true = np.array(marks, dtype=float)
    true[mark] += (east, north)
    return true


def test_one_mark_of_eight_that_moved_is_named_with_where_it_is_now():
    true = moved(RING, 5, 0.03, -0.02)
    record = coordinates(named(8), RING, 0.003)
    answer = which_moved(record, shots(true, SETUPS), points=SETUPS)

    assert answer.verdict == Verdict.FAIL
    (move,) = answer.moved
    assert move.mark == "M5"
    # nearly all of the move, the rest being shared out by the weights
    assert move.move_m == pytest.approx([0.03, -0.02], abs=1e-6)
    assert move.ellipse_95 is not None
    assert answer.mark("M5").verdict == Verdict.FAIL
    assert answer.mark("M1").verdict == Verdict.PASS
    assert answer.left.verdict == Verdict.PASS
    assert answer.left.statistic == pytest.approx(0.0, abs=1e-6)


def test_when_nothing_moved_every_mark_passes_with_the_smallest_move_seen():
    record = coordinates(named(8), RING, 0.003)
    booked = shots(RING, SETUPS, noise=1.0, rng=np.random.default_rng(3))
    answer = which_moved(record, booked, points=SETUPS)

    assert answer.verdict == Verdict.PASS
    assert not answer.moved
    for report in answer.marks:
        assert report.verdict == Verdict.PASS
        assert 0.012 < report.smallest_best_m <= report.smallest_m < 0.022


def test_of_two_marks_neither_is_ever_blamed():
    marks = RING[[0, 3]]
    record = coordinates(named(2), marks, 0.003)
    setup = {"S1": (0.0, 0.0)}
    along = (marks[1] - marks[0]) / math.dist(*marks)
    answer = which_moved(
        record, shots(moved(marks, 0, *0.05 * along), setup), points=setup
    )

    assert answer.verdict == Verdict.AMBIGUOUS
    (group,) = answer.suspects
    assert {m.mark for m in group.moves} == {"M0", "M1"}
    assert not answer.moved
    assert {r.verdict for r in answer.marks} == {Verdict.AMBIGUOUS}


def test_a_mark_measured_once_is_told_from_its_measurement_only_by_another():
    # one setup, the mark moved straight away from it: its distance may be wrong
    setup = {"S1": (0.0, 0.0)}
    away = RING[2] / 60.0
    record = coordinates(named(8), RING, 0.003)
    booked = shots(moved(RING, 2, *0.04 * away), setup)
    answer = which_moved(record, booked, points=setup)

    assert answer.verdict == Verdict.AMBIGUOUS
    (group,) = answer.suspects
    assert [m.mark for m in group.moves] == ["M2"]
    assert group.measurement_words == ("distance S1 to M2",)
    assert group.tell is not None
    assert "M2" in group.tell.points
    # doing what it says settles it
    a, b = (int(p[1:]) for p in group.tell.points)
    true = moved(RING, 2, *0.04 * away)
    tape = Distance(f"M{a}", f"M{b}", math.dist(true[a], true[b]), 0.003)
    again = which_moved(record, [*booked, tape, tape], points=setup)
    assert [m.mark for m in again.moved] == ["M2"]


def test_a_wrong_distance_between_good_marks_is_called_a_measurement():
    booked = shots(RING, SETUPS)
    i = booked.index(next(o for o in booked if str(o) == "distance S1 to M4"))
    o = booked[i]
    booked[i] = Distance(o.start, o.end, o.value_m + 0.05, o.sigma_m)
    record = coordinates(named(8), RING, 0.003)
    answer = which_moved(record, booked, points=SETUPS)

    assert answer.wrong_measurements == (i,)
    assert answer.wrong_words == ("distance S1 to M4",)
    assert not answer.moved
    assert answer.mark("M4").verdict == Verdict.PASS


def test_pairs_that_no_such_measurements_could_tell_apart_are_known_beforehand():
    two = which_moved(
        coordinates(named(2), RING[[0, 3]], 0.003),
        shots(RING[[0, 3]], {"S1": (0.0, 0.0)}),
        points={"S1": (0.0, 0.0)},
    )
    eight = which_moved(
        coordinates(named(8), RING, 0.003), shots(RING, SETUPS), points=SETUPS
    )

    ((one, other, likeness),) = two.hard_to_tell()
    assert (one, other) == ("M0", "M1")
    assert likeness == pytest.approx(1.0)
    assert eight.hard_to_tell() == ()
    assert 0.2 < max(p[2] for p in eight.hard_to_tell(0.0)) < 0.5


def test_two_moved_marks_are_both_found_and_estimated_together():
    true = moved(moved(RING, 1, 0.03, 0.0), 6, -0.02, 0.025)
    record = coordinates(named(8), RING, 0.003)
    answer = which_moved(record, shots(true, SETUPS), points=SETUPS)
    found = {m.mark: m.move_m for m in answer.moved}

    assert set(found) == {"M1", "M6"}
    assert found["M1"] == pytest.approx([0.03, 0.0], abs=1e-6)
    assert found["M6"] == pytest.approx([-0.02, 0.025], abs=1e-6)


def test_a_mark_nobody_measured_is_not_tested_and_never_called_stable():
    record = coordinates(named(8), RING, 0.003)
    booked = shots(RING, SETUPS, only=range(7))
    answer = which_moved(record, booked, points=SETUPS)

    assert answer.not_tested == ("M7",)
    assert answer.mark("M7").verdict == Verdict.NOT_TESTED
    assert answer.mark("M7").smallest_m is None
    assert "M7" not in answer.marks_used


def test_a_mark_seen_along_one_line_only_is_not_called_stable_across_it():
    record = coordinates(named(8), RING, 0.003)
    booked = [o for o in shots(RING, SETUPS) if not str(o).endswith("to M7")]
    booked.append(Distance("M0", "M7", math.dist(RING[0], RING[7]), 0.002))
    answer = which_moved(record, booked, points=SETUPS)
    report = answer.mark("M7")

    assert report.rank == 1
    assert report.verdict == Verdict.UNDECIDED
    assert report.smallest_m is None
    d = RING[7] - RING[0]
    assert report.best_rad == pytest.approx(math.atan2(*d) % math.pi, abs=1e-3)


def test_an_error_common_to_all_marks_hides_no_move_when_kept_as_common():
    # 20 mm common, 2 mm relative: as a joint covariance and flattened to ellipses
    true = moved(RING, 3, 0.018, 0.0)
    joint = common_and_relative(RING, relative_m=0.002, shift_m=0.02)
    kept = coordinates(named(8), RING, joint)
    flat = coordinates(named(8), RING, np.diag(np.diag(joint)))
    booked = shots(true, SETUPS)

    assert [m.mark for m in which_moved(kept, booked, points=SETUPS).moved] == ["M3"]
    assert which_moved(flat, booked, points=SETUPS).verdict == Verdict.PASS


def test_a_move_of_all_marks_together_is_no_move_of_any_under_a_common_error():
    joint = common_and_relative(RING, relative_m=0.002, shift_m=0.02)
    record = coordinates(named(8), RING, joint)
    fixed = {"F1": (200.0, 0.0), "F2": (0.0, 210.0)}
    booked = shots(RING + np.array([0.02, -0.01]), SETUPS)
    for station, p in SETUPS.items():
        for name, q in fixed.items():
            d = np.subtract(q, p)
            booked.append(Distance(station, name, math.hypot(*d), 0.002))
            booked.append(Direction(station, name, math.atan2(*d) + 1.0, 3e-5))
    answer = which_moved(record, booked, points=SETUPS | fixed, fixed=fixed)

    assert answer.verdict == Verdict.PASS


def test_tripods_off_their_marks_are_not_taken_for_moved_marks_once_allowed_for():
    booked = [Direction("S1", "M0", 1.0, 2e-5), Distance("S1", "M0", 50.0, 0.001)]
    at = {"S1": (0.0, 0.0), "M0": (0.0, 50.0)}
    turned, taped = allow_for_centring(booked, at, instrument_m=0.001, target_m=0.002)

    assert taped.sigma_m == pytest.approx(math.sqrt(1 + 1 + 4) * 1e-3)
    assert turned.sigma_rad == pytest.approx(math.hypot(2e-5, math.hypot(1, 2) / 50e3))


def test_target_centring_spreads_an_angle_as_the_textbook_says():
    # Ghilani, Adjustment Computations ch. 7 (from memory): 2.8 seconds
    from geometry.adjust import Angle

    at = {"A": (0.0, 0.0), "B": (250.0, 0.0), "C": (0.0, 450.0)}
    angle = Angle("A", "B", "C", 1.0, 1e-12)
    (wide,) = allow_for_centring([angle], at, instrument_m=0.0, target_m=0.003)

    assert math.degrees(wide.sigma_rad) * 3600 == pytest.approx(2.8315, abs=6e-5)


def test_one_benchmark_of_five_is_named_and_its_fall_estimated():
    z = np.array([10.0, 11.2, 9.7, 12.3, 10.8])
    true = z.copy()
    true[2] -= 0.012
    pairs = [(i, j) for i in range(5) for j in range(i + 1, 5)]
    runs = [
        HeightDifference(f"B{i}", f"B{j}", true[j] - true[i], 0.001) for i, j in pairs
    ]
    names = [f"B{i}" for i in range(5)]
    answer = which_benchmark_moved(heights(names, z, 0.002), runs)

    (move,) = answer.moved
    assert move.mark == "B2"
    assert move.move_m == pytest.approx([-0.012], abs=1e-6)
    assert answer.mark("B0").verdict == Verdict.PASS


def test_of_two_benchmarks_that_disagree_neither_is_blamed():
    record = heights(["B1", "B2"], [10.0, 12.0], 0.001)
    runs = [HeightDifference("B1", "B2", 2.03, 0.001)] * 3
    answer = which_benchmark_moved(record, runs)

    assert answer.verdict == Verdict.AMBIGUOUS
    assert {m.mark for m in answer.suspects[0].moves} == {"B1", "B2"}
    assert answer.suspects[0].tell is None


def test_a_common_error_of_heights_leaves_differences_sharp():
    joint = common_and_relative_heights(4, relative_m=0.001, shift_m=0.05)
    record = heights("ABCD", [1.0, 2.0, 3.0, 4.0], joint)
    rise = {"A": 1.0, "B": 2.0, "C": 3.0, "D": 4.010}
    runs = [
        HeightDifference(a, b, rise[b] - rise[a], 0.001)
        for a in "ABCD"
        for b in "ABCD"
        if a < b
    ]

    assert [m.mark for m in which_benchmark_moved(record, runs).moved] == ["D"]


def test_a_mark_without_error_of_its_own_is_refused():
    with pytest.raises(OutOfRange):
        common_and_relative(RING, relative_m=0.0, shift_m=0.02)


@settings(max_examples=25, deadline=None)
@given(
    st.integers(0, 2**32 - 1),
    st.integers(0, 7),
    st.floats(0.04, 3.0),
    st.floats(0, 2 * math.pi),
    st.tuples(st.floats(-9e6, 9e6), st.floats(-9e6, 9e6)),
)
def test_a_large_move_is_always_found_wherever_the_site_lies(
    seed, mark, size, way, shift
):
    rng = np.random.default_rng(seed)
    true = moved(RING, mark, size * math.sin(way), size * math.cos(way))
    booked = shots(true, SETUPS, noise=0.5, rng=rng)
    marks = coordinates(named(8), RING + shift, 0.003)
    there = {n: np.add(p, shift) for n, p in SETUPS.items()}
    answer = which_moved(marks, booked, points=there)

    assert [m.mark for m in answer.moved] == [f"M{mark}"]
    expected = [size * math.sin(way), size * math.cos(way)]
    assert answer.moved[0].move_m == pytest.approx(expected, abs=0.02)


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_whatever_is_measured_the_answer_is_a_verdict_or_a_named_error(seed):
    rng = np.random.default_rng(seed)
    count = int(rng.integers(2, 9))
    true = RING[:count] + rng.normal(0, 0.02, (count, 2))
    booked = shots(true, SETUPS, noise=1.0, rng=rng)
    kept = rng.random(len(booked)) < rng.uniform(0.2, 1.0)
    booked = [o for o, k in zip(booked, kept, strict=True) if k]
    record = coordinates(named(count), RING[:count], 0.003)
    used = {n: SETUPS[n] for n in SETUPS if any(n in str(o) for o in booked)}
    try:
        answer = which_moved(record, booked, points=used)
    except GeometryError:
        return
    for report in answer.marks:
        assert report.verdict in set(Verdict)
        assert (report.rank == 0) == (report.mark in answer.not_tested)
        assert (report.rank == 0) == (report.verdict == Verdict.NOT_TESTED)
    for group in answer.suspects:
        assert len(group.moves) + len(group.measurements) > 1


def test_the_test_of_a_mark_equals_the_gain_of_letting_it_stand_anywhere():
    # adjusting again without the record of the mark: same drop in squares, same move
    rng = np.random.default_rng(9)
    true = moved(RING, 4, 0.03, 0.016)
    booked = shots(true, SETUPS, noise=1.0, rng=rng)
    joint = common_and_relative(RING, relative_m=0.003, shift_m=0.01, turn_rad=1e-4)
    record = coordinates(named(8), RING, joint)
    answer = which_moved(record, booked, points=SETUPS)
    start = dict(zip(named(8), RING, strict=True)) | SETUPS
    whole = adjust_network(start, booked, known=[record], snoops=False)
    rest = [i for i in range(16) if i not in (8, 9)]
    kept = coordinates(
        [n for n in named(8) if n != "M4"],
        np.delete(RING, 4, 0),
        joint[np.ix_(rest, rest)],
    )
    without = adjust_network(start, booked, known=[kept], snoops=False)
    here = [i for i in range(8) if i != 4]
    off = (without.positions_m[here] - RING[here]).ravel()
    # what the record says of M4 once the others are adjusted
    pulled = joint[8:10][:, rest] @ np.linalg.solve(joint[np.ix_(rest, rest)], off)
    expected = without.point("M4").position_m - RING[4] - pulled

    drop = whole.squares - without.squares
    assert answer.mark("M4").statistic == pytest.approx(drop, rel=1e-3)
    assert answer.moved[0].move_m == pytest.approx(expected, abs=1e-5)
