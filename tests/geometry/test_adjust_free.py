"""Networks without control, and the datum their precision is relative to."""

from __future__ import annotations

import math

import numpy as np
import pytest

from geometry.adjust import (
    Angle,
    Azimuth,
    Direction,
    Distance,
    Undetermined,
    adjust_levels,
    adjust_network,
    coordinates,
)
from geometry.errors import OutOfRange
from tests.geometry.adjust_networks import network


def test_a_free_network_has_the_covariance_of_the_pseudoinverse():
    names, at, booked, _ = network(np.random.default_rng(8))
    booked = [o for o in booked if not isinstance(o, Azimuth)]
    net = adjust_network(at, booked, free=True, snoops=False)
    a = net.rows.toarray()
    held = adjust_network(at, booked, fixed=["P0", "P1"], snoops=False)
    assert net.squares < held.squares
    # the full design of all coordinates at the adjusted positions
    full = jacobian(names, dict(zip(names, net.positions_m, strict=True)), booked)
    inverse = np.linalg.pinv(full.T @ full, rcond=1e-11)
    positions = slice(0, 2 * len(names))
    g = motions(net.positions_m)
    s = np.eye(2 * len(names)) - g @ np.linalg.inv(g.T @ g) @ g.T
    expected = s @ inverse[positions, positions] @ s.T

    assert a.shape[0] == len(booked)
    assert net.joint_covariance(names) == pytest.approx(expected, abs=2e-11)
    for i, name in enumerate(names):
        block = expected[2 * i : 2 * i + 2, 2 * i : 2 * i + 2]
        assert net.point(name).covariance_m2 == pytest.approx(block, abs=2e-11)
    # inner constraints: on the average the points stay where they were
    assert g.T @ net.shifts_m.ravel() == pytest.approx(np.zeros(3), abs=1e-6)


def motions(positions):
    m = positions - positions.mean(axis=0)
    n = len(m)
    turn = (m[:, ::-1] * (1, -1)).ravel()
    return np.stack([np.tile([1.0, 0], n), np.tile([0.0, 1], n), turn], 1)


def jacobian(names, at, booked):
    rounds = list(dict.fromkeys(o.station for o in booked if isinstance(o, Direction)))
    x = np.concatenate([*(at[n] for n in names), np.zeros(len(rounds))])

    def f(y):
        where = dict(zip(names, y[: 2 * len(names)].reshape(-1, 2), strict=True))
        turn = dict(zip(rounds, y[2 * len(names) :], strict=True))
        out = []
        for o in booked:
            if isinstance(o, Distance):
                out.append(math.dist(where[o.start], where[o.end]) / o.sigma_m)
                continue
            a, b = (
                (o.station, o.target)
                if isinstance(o, Direction)
                else (o.station, o.foresight)
            )
            v = math.atan2(*(where[b] - where[a]))
            v -= turn[a] if isinstance(o, Direction) else 0.0
            if isinstance(o, Angle):
                v -= math.atan2(*(where[o.backsight] - where[a]))
            out.append(v / o.sigma_rad)
        return np.array(out)

    step = 1e-5
    columns = []
    for k in range(len(x)):
        e = np.zeros(len(x))
        e[k] = step
        d = f(x + e) - f(x - e)
        columns.append(d / (2 * step))
    return np.array(columns).T


def test_the_datum_of_a_free_network_can_be_carried_by_some_marks_only():
    names, at, booked, _ = network(np.random.default_rng(8))
    booked = [o for o in booked if not isinstance(o, Azimuth)]
    net = adjust_network(at, booked, free=True, datum=names[:3], snoops=False)
    whole = adjust_network(at, booked, free=True, snoops=False)
    g = motions(net.positions_m)
    b = np.diag([1.0] * 6 + [0.0] * (2 * len(names) - 6))
    s = np.eye(2 * len(names)) - g @ np.linalg.inv(g.T @ b @ g) @ g.T @ b

    expected = s @ whole.joint_covariance(names) @ s.T
    assert net.joint_covariance(names) == pytest.approx(expected, abs=1e-11)
    assert net.free_datum == ("P0", "P1", "P2")
    shares = [m.redundancy for m in net.measurements]
    assert shares == pytest.approx([m.redundancy for m in whole.measurements])


def test_angles_alone_leave_the_size_free_and_the_network_keeps_it():
    names, at, booked, _ = network(np.random.default_rng(3))
    turns = [o for o in booked if isinstance(o, Direction)]
    net = adjust_network(at, turns, free=True, snoops=False)
    centred = net.positions_m - net.positions_m.mean(axis=0)
    true = np.array([at[n] for n in names])

    assert net.dof == len(turns) - (2 * len(names) + len(names) - 4)
    size = np.hypot(*centred.T) @ np.hypot(*(true - true.mean(0)).T)
    assert size == pytest.approx(float((centred**2).sum()), rel=1e-6)


def test_an_azimuth_in_a_free_network_leaves_only_its_place_free():
    names, at, booked, _ = network(np.random.default_rng(4))
    net = adjust_network(at, booked, free=True, snoops=False)
    turned = adjust_network(
        at, [o for o in booked if not isinstance(o, Azimuth)], free=True, snoops=False
    )

    assert net.motions == ("shift",)
    assert turned.motions == ("shift", "turn")
    assert net.dof == turned.dof
    assert net.shifts_m.sum(axis=0) == pytest.approx([0, 0], abs=1e-8)
    assert len(names) == len(net.names)


def test_a_loose_point_of_a_free_network_is_named_and_what_would_tie_it():
    at = {"A": (0.0, 0.0), "B": (60.0, 0.0), "C": (60.0, 60.0), "P": (10.0, 90.0)}
    sides = [
        Distance(a, b, math.dist(at[a], at[b]), 0.002)
        for a, b in ("AB", "BC", "CA", "CP")
    ]
    with pytest.raises(Undetermined) as caught:
        adjust_network(at, sides, free=True)
    (missing,) = caught.value.missing

    assert missing.kind in ("distance", "angle")
    assert "P" in missing.points
    a, b = (n for n in missing.points if missing.kind == "distance")
    mended = [*sides, Distance(a, b, math.dist(at[a], at[b]), 0.002)]
    net = adjust_network(at, mended, free=True)
    assert net.point("P").position_m == pytest.approx(at["P"], abs=1e-6)


@pytest.mark.parametrize("datum", [["Z"], ["A"]])
def test_a_datum_that_cannot_carry_the_network_is_refused(datum):
    at = {"A": (0.0, 0.0), "B": (60.0, 0.0)}
    with pytest.raises(OutOfRange, match="at least two marks"):
        adjust_network(at, [Distance("A", "B", 60.0, 0.1)], free=True, datum=datum)


def test_a_free_network_takes_no_known_points():
    at = {"A": (0.0, 0.0), "B": (60.0, 0.0)}
    known = coordinates(["A"], [[0, 0]], 0.01)
    sides = [Distance("A", "B", 60.0, 0.1)]
    with pytest.raises(OutOfRange):
        adjust_network(at, sides, free=True, known=[known])
    with pytest.raises(OutOfRange):
        adjust_network(at, sides, free=True, fixed=["A"])
    with pytest.raises(OutOfRange):
        adjust_levels([], free=True, fixed={"A": 0.0})
