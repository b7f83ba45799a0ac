"""Start coordinates far from the truth."""

from __future__ import annotations

import math

import numpy as np
import pytest

from geometry.adjust import (
    Direction,
    Distance,
    DoesNotSettle,
    Undetermined,
    adjust_network,
)
from geometry.verdicts import Verdict


def mesh(rng, side=5):
    grid = np.stack(np.meshgrid(np.arange(side), np.arange(side)), -1).reshape(-1, 2)
    true = 30.0 * grid + rng.normal(0, 3, (side * side, 2))
    booked = []
    for i, p in enumerate(true):
        for j in np.argsort(np.hypot(*(true - p).T))[1:7]:
            d = true[j] - p
            booked.append(Distance(f"{i}", f"{j}", math.hypot(*d), 2e-3))
            booked.append(Direction(f"{i}", f"{j}", math.atan2(*d) - i, 3e-5))
    return true, booked


@pytest.mark.parametrize("wrong_m", [0.5, 3.0])
def test_from_points_metres_off_in_a_thirty_metre_mesh_the_truth_is_found(wrong_m):
    for seed in range(6):
        rng = np.random.default_rng(seed)
        true, booked = mesh(rng)
        start = true + rng.normal(0, wrong_m, true.shape)
        start[[0, 4, 20, 24]] = true[[0, 4, 20, 24]]
        named = {f"{i}": p for i, p in enumerate(start)}
        net = adjust_network(named, booked, fixed=["0", "4", "20", "24"])

        assert net.positions_m == pytest.approx(true, abs=1e-6)
        assert net.steps <= 12


def test_when_plain_steps_wander_damped_steps_take_over_and_the_result_says_so():
    # starts as wrong as the mesh is wide: a minimum is found, and if it is not the
    # right one the sum of squares tells
    methods = set()
    for seed in range(12):
        rng = np.random.default_rng(seed)
        true, booked = mesh(rng)
        start = true + rng.normal(0, 25.0, true.shape)
        start[[0, 4, 20, 24]] = true[[0, 4, 20, 24]]
        named = {f"{i}": p for i, p in enumerate(start)}
        held = ["0", "4", "20", "24"]
        net = adjust_network(named, booked, fixed=held, snoops=False)
        methods.add(net.method)
        right = np.abs(net.positions_m - true).max() < 1e-3
        assert right == (net.test.verdict == Verdict.PASS)

    assert methods == {"Gauss-Newton", "Levenberg-Marquardt"}


def test_contradictory_distances_settle_at_their_compromise_or_say_they_do_not():
    # circles of 10 m round points 100 m apart do not meet; the optimum is singular
    start = {"A": (0.0, 0.0), "B": (100.0, 0.0), "P": (50.0, 1.0)}
    booked = [Distance("A", "P", 10.0, 0.002), Distance("B", "P", 10.0, 0.002)]
    with pytest.raises((DoesNotSettle, Undetermined)):
        adjust_network(start, booked, fixed="AB")
