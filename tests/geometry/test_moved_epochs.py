"""Two epochs compared: what moved between them, relative to what did not."""

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
    adjust_levels,
    adjust_network,
)
from geometry.adjust.datum import plane_motions
from geometry.errors import EmptyInput, OutOfRange, Singular
from geometry.moved import compare_epochs, compare_level_epochs
from geometry.moved.epochs import weight_without
from geometry.verdicts import Verdict

TURN = np.arange(8) * 2 * math.pi / 8 + 0.3
RING = 60.0 * np.stack([np.sin(TURN), np.cos(TURN)], 1)
NAMES = [f"M{i}" for i in range(8)]


def epoch(true, setups, rng=None, noise=0.0):
    rng = rng or np.random.default_rng(0)
    booked = []
    for station, p in setups.items():
        circle = rng.uniform(0, 6)
        for name, q in zip(NAMES, true, strict=True):
            d = np.subtract(q, p)
            length = math.hypot(*d) + noise * rng.normal(0, 2e-3)
            reading = math.atan2(*d) - circle + noise * rng.normal(0, 3e-5)
            booked.append(Distance(station, name, length, 2e-3))
            booked.append(Direction(station, name, reading, 3e-5))
    start = dict(zip(NAMES, RING, strict=True)) | setups
    return adjust_network(start, booked, free=True, snoops=False)


ONE = {"S1": (15.0, 3.0), "S2": (-20.0, -10.0)}
TWO = {"S1": (5.0, 22.0), "S2": (12.0, -18.0)}


def moved(mark, east, north):
    true = RING.copy()
    true[mark] += (east, north)
    return true


def test_a_mark_that_moved_between_epochs_is_named_relative_to_those_that_stand():
    compared = compare_epochs(
        epoch(RING, ONE), epoch(moved(2, 0.012, -0.009), TWO), NAMES
    )

    assert compared.verdict == Verdict.FAIL
    (move,) = compared.answer.moved
    assert move.mark == "M2"
    assert move.move_m == pytest.approx([0.012, -0.009], abs=1e-6)
    assert "M2" not in compared.stable
    for one in compared.displacements:
        expected = [0.012, -0.009] if one.mark == "M2" else [0.0, 0.0]
        assert one.displacement_m == pytest.approx(expected, abs=1e-6)


def test_differences_of_free_networks_look_moved_everywhere_before_the_datum_is_set():
    # the trap: without a datum of stable marks the move is smeared over all of them
    first, second = epoch(RING, ONE), epoch(moved(2, 0.04, 0.0), TWO)
    smeared = second.positions_m[:8] - first.positions_m[:8]

    assert np.hypot(*smeared.T).min() > 1e-4
    compared = compare_epochs(first, second, NAMES)
    still = [d for d in compared.displacements if d.mark != "M2"]
    assert max(math.hypot(*d.displacement_m) for d in still) < 1e-6


def test_when_nothing_moved_the_epochs_are_congruent_with_the_right_freedom():
    rng = np.random.default_rng(2)
    compared = compare_epochs(
        epoch(RING, ONE, rng, 1.0), epoch(RING, TWO, rng, 1.0), NAMES
    )

    assert compared.answer.test.dof == 13
    assert compared.verdict == Verdict.PASS
    assert compared.stable == tuple(NAMES)


def test_two_marks_that_moved_are_found_one_after_the_other():
    true = moved(1, 0.02, 0.0)
    true[6] += (-0.015, 0.015)
    compared = compare_epochs(epoch(RING, ONE), epoch(true, TWO), NAMES)

    assert {m.mark for m in compared.answer.moved} == {"M1", "M6"}


def test_of_two_marks_only_a_change_of_length_is_seen_and_neither_is_blamed():
    at = {"A": (0.0, 0.0), "B": (60.0, 0.0)}
    first = adjust_network(at, [Distance("A", "B", 60.0, 0.001)] * 2, free=True)
    second = adjust_network(at, [Distance("A", "B", 60.02, 0.001)] * 2, free=True)
    compared = compare_epochs(first, second)

    assert compared.answer.test.dof == 1
    assert compared.verdict == Verdict.AMBIGUOUS
    assert {m.mark for m in compared.answer.suspects[0].moves} == {"A", "B"}


def test_the_pseudoinverse_without_motions_is_that_of_the_singular_value_way():
    rng = np.random.default_rng(1)
    half = rng.normal(size=(16, 16))
    q = half @ half.T * 1e-6
    g = plane_motions(RING, turn=True, scale=False)
    n = np.linalg.qr(g)[0]
    s = np.eye(16) - n @ n.T

    expected = np.linalg.pinv(s @ q @ s, rcond=1e-10)
    assert weight_without(q, g) == pytest.approx(expected, rel=1e-6, abs=1e-3)


def test_a_benchmark_that_sank_between_two_levellings_is_named():
    z = {"A": 0.0, "B": 1.2, "C": 0.4, "D": 2.1, "E": 1.1}

    def levelling(heights):
        runs = [
            HeightDifference(a, b, heights[b] - heights[a], 0.0005)
            for a in heights
            for b in heights
            if a < b
        ]
        return adjust_levels(runs, free=True)

    compared = compare_level_epochs(levelling(z), levelling(z | {"D": 2.095}))

    (move,) = compared.answer.moved
    assert move.mark == "D"
    assert move.move_m == pytest.approx([-0.005], abs=1e-9)
    assert compared.answer.test.dof == 4
    assert [d.displacement_m[0] for d in compared.displacements] == pytest.approx(
        [0, 0, 0, -0.005, 0], abs=1e-9
    )


def test_marks_must_be_in_both_epochs():
    net = epoch(RING, ONE)
    with pytest.raises(OutOfRange, match="M9"):
        compare_epochs(net, net, ["M1", "M9"])
    other = adjust_network(
        {"X": (0, 0), "Y": (9, 0)}, [Distance("X", "Y", 9.0, 0.001)], free=True
    )
    with pytest.raises(EmptyInput):
        compare_epochs(net, other)


def test_marks_held_in_both_epochs_cannot_be_compared():
    at = {"A": (0.0, 0.0), "B": (60.0, 0.0), "C": (30.0, 40.0)}
    sides = [Distance("A", "C", 50.0, 0.001), Distance("B", "C", 50.0, 0.001)]
    net = adjust_network(at, sides, fixed="AB")
    with pytest.raises(Singular):
        compare_epochs(net, net)


@settings(max_examples=20, deadline=None)
@given(
    st.integers(0, 2**32 - 1),
    st.integers(0, 7),
    st.floats(0.03, 1.0),
    st.floats(0, 2 * math.pi),
)
def test_a_clear_move_is_found_whatever_the_setups_were(seed, mark, size, way):
    rng = np.random.default_rng(seed)
    setups = [
        {"S1": tuple(rng.uniform(-25, 25, 2)), "S2": tuple(rng.uniform(-25, 25, 2))}
        for _ in range(2)
    ]
    step = size * math.sin(way), size * math.cos(way)
    compared = compare_epochs(
        epoch(RING, setups[0], rng, 0.5),
        epoch(moved(mark, *step), setups[1], rng, 0.5),
        NAMES,
    )

    assert [m.mark for m in compared.answer.moved] == [f"M{mark}"]
    assert compared.answer.moved[0].move_m == pytest.approx(step, abs=0.01)
