"""The sentences that adjustments and answers are told in."""

from __future__ import annotations

import math

import numpy as np
import pytest

from geometry.adjust import (
    Direction,
    Distance,
    HeightDifference,
    adjust_levels,
    adjust_network,
    coordinates,
    heights,
    say_adjustment,
    say_measurement,
)
from geometry.moved import (
    compare_level_epochs,
    say_epochs,
    say_mark,
    say_moved,
    which_benchmark_moved,
    which_moved,
)

SQUARE = {"A": (0.0, 0.0), "B": (60.0, 0.0), "C": (60.0, 60.0), "D": (0.0, 60.0)}


def loop(*rises, sigma=0.001):
    names = "ABCD"[: len(rises)]
    ends = zip(names, names[1:] + names[0], rises, strict=True)
    return [HeightDifference(a, b, v, sigma) for a, b, v in ends]


def test_a_single_loop_that_does_not_close_asks_for_one_run_again():
    net = adjust_levels(loop(1.0, 1.0, -2.03), fixed={"A": 0.0})
    words = say_adjustment(net)

    assert "levels A to B, levels B to C or levels C to A" in words
    assert "Measure one of them again." in words


def test_what_was_set_aside_is_said_with_its_size():
    z = {"A": 0.0, "B": 1.2, "C": 0.7, "D": 3.1, "E": 2.2}
    runs = [HeightDifference(a, b, z[b] - z[a], 0.001) for a in z for b in z if a < b]
    runs[3] = HeightDifference("A", "E", 2.231, 0.001)
    words = say_adjustment(adjust_levels(runs, fixed={"A": 0.0}))

    assert "Levels A to E is off by about 31 mm and was set aside." in words
    assert words.startswith("10 measurements, 5 to spare.")


def test_one_measurement_says_what_error_would_have_been_seen():
    net = adjust_levels(loop(1.0, 1.0, -2.0), fixed={"A": 0.0})

    # 4.132 mm / sqrt(1/3)
    assert say_measurement(net.measurements[0]) == (
        "Levels A to B fits; an error of 7 mm would have been seen."
    )


def test_lengths_are_worded_as_the_job_words_them():
    net = adjust_levels(loop(1.0, 1.0, -2.0), fixed={"A": 0.0})
    words = say_measurement(net.measurements[0], small=lambda v: f"{v / 0.3048:.3f} ft")

    assert "0.023 ft" in words


def test_a_known_point_that_does_not_fit_is_said_by_how_much():
    known = coordinates("ABCD", list(SQUARE.values()), 0.001)
    true = SQUARE | {"C": (60.05, 60.0)}
    sides = [
        Distance(a, b, math.dist(true[a], true[b]), 0.001)
        for a in true
        for b in true
        if a < b
    ]
    words = say_adjustment(adjust_network(SQUARE, sides, known=[known]))

    assert "do not fit the known values, worst at C. There it is 22 mm off." in words


def ring(move=(0.0, 0.0), only_once=False):
    turn = np.arange(8) * math.pi / 4 + 0.3
    marks = 60.0 * np.stack([np.sin(turn), np.cos(turn)], 1)
    true = marks.copy()
    true[5] += move
    setups = {"S1": (15.0, 3.0), "S2": (-20.0, -10.0)}
    if only_once:
        setups = {"S1": (0.0, 0.0)}
    booked = []
    for station, p in setups.items():
        for i, q in enumerate(true):
            d = np.subtract(q, p)
            booked.append(Distance(station, f"M{i}", math.hypot(*d), 2e-3))
            booked.append(Direction(station, f"M{i}", math.atan2(*d), 3e-5))
    record = coordinates([f"M{i}" for i in range(8)], marks, 0.003)
    return which_moved(record, booked, points=setups)


def test_a_named_mark_is_told_with_size_direction_and_doubt():
    words = say_moved(ring((0.04, -0.04)))

    assert words.startswith("M5 moved 57 mm to the south-east, give or take ")


def test_without_a_move_the_sentence_says_what_would_have_been_seen():
    answer = ring()
    words = say_moved(answer)

    assert words.startswith("No mark moved; a move of ")
    assert " mm would have been seen at M0, M1" in words
    assert say_mark(answer.mark("M3")).startswith("M3: no move found; one of ")


def test_a_mark_or_its_measurement_are_both_named_and_measuring_again_is_asked():
    turn = 5 * math.pi / 4 + 0.3
    words = say_moved(ring((0.05 * math.sin(turn), 0.05 * math.cos(turn)), True))

    assert words.startswith(
        "Either M5 moved 50 mm to the south-west or the distance S1 to M5 is wrong"
    )
    assert words.endswith("Measure the distance S1 to M5 again.")


def test_two_marks_that_explain_the_same_are_told_apart_by_a_named_distance():
    marks = coordinates("ABCD", list(SQUARE.values()), 0.002)
    long = Distance("B", "D", math.dist(SQUARE["B"], SQUARE["D"]) + 0.05, 0.001)
    answer = which_moved(marks, [long, long, long])
    words = say_moved(answer)

    assert words.startswith("Either B moved ")
    assert " or D moved " in words
    assert "Measure the distance " in words
    assert " if it is B" in words
    assert "Not tested: A and C." in words


def test_a_wrong_measurement_is_told_as_such():
    runs = loop(1.0, 1.0, 1.0, -3.0) * 2
    runs[0] = HeightDifference("A", "B", 1.05, 0.001)
    record = heights("ABCD", [0.0, 1.0, 2.0, 3.0], 0.001)
    words = say_moved(which_benchmark_moved(record, runs))

    assert words.startswith("Levels A to B is wrong; measure it again.")


def test_epochs_say_relative_to_what():
    z = {"A": 0.0, "B": 1.2, "C": 0.4, "D": 2.1}

    def levelled(at):
        return adjust_levels(
            [
                HeightDifference(a, b, at[b] - at[a], 0.0005)
                for a in at
                for b in at
                if a < b
            ],
            free=True,
        )

    words = say_epochs(compare_level_epochs(levelled(z), levelled(z | {"D": 2.08})))

    assert words.startswith("D fell 20 mm, give or take ")
    assert words.endswith("Compared with A, B and C, which stand.")


def test_with_nothing_to_spare_the_sentence_promises_nothing():
    record = heights(["A"], [10.0], 0.001)
    answer = which_benchmark_moved(record, [HeightDifference("A", "B", 1.0, 0.001)])

    assert say_moved(answer) == "There is no measurement to spare: nothing checks."


@pytest.mark.parametrize("count", [1, 9])
def test_long_lists_are_cut_short(count):
    runs = [HeightDifference("A", f"P{i}", 1.0, 0.001) for i in range(count)]
    words = say_adjustment(adjust_levels(runs, fixed={"A": 0.0}))

    assert words.endswith("P5 and 3 more." if count == 9 else "checks P0.")
