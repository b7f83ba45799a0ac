"""Finding wrong measurements, keeping right ones, and not blaming where two explain."""

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
    coordinates,
    critical_w,
    detectable,
    ellipse_factor,
    matching_alpha,
    noncentrality,
)
from geometry.adjust.snooping import removal_limit
from geometry.errors import OutOfRange
from geometry.verdicts import Verdict


def mesh(rng, side=5, noise=1.0):
    """`side` squared points 30 m apart, distances and directions to neighbours."""
    grid = np.stack(np.meshgrid(np.arange(side), np.arange(side)), -1).reshape(-1, 2)
    true = 30.0 * grid + rng.normal(0, 3, (side * side, 2))
    names = [f"{i}" for i in range(len(true))]
    booked = []
    for i, p in enumerate(true):
        near = np.argsort(np.hypot(*(true - p).T))[1:7]
        circle = rng.uniform(0, 2 * math.pi)
        for j in near:
            d = true[j] - p
            length = math.hypot(*d) + noise * rng.normal(0, 2e-3)
            booked.append(Distance(names[i], names[j], length, 2e-3))
            reading = math.atan2(*d) - circle + noise * rng.normal(0, 3e-5)
            booked.append(Direction(names[i], names[j], reading, 3e-5))
    return names, true, booked


def corners(names, side=5):
    return [names[0], names[side - 1], names[-1], names[-side]]


def spoiled(booked, number, error):
    o = booked[number]
    changed = [*booked]
    changed[number] = Distance(o.start, o.end, o.value_m + error, o.sigma_m)
    return changed


def distances(booked):
    return [i for i, o in enumerate(booked) if isinstance(o, Distance)]


def test_three_blunders_in_twenty_five_points_are_exactly_those_set_aside():
    rng = np.random.default_rng(17)
    names, true, booked = mesh(rng)
    start = dict(zip(names, true + 0.02, strict=True)) | {
        n: true[int(n)] for n in corners(names)
    }
    wrong = sorted(int(i) for i in rng.choice(distances(booked), 3, replace=False))
    for i, error in zip(wrong, (0.025, -0.04, 0.06), strict=True):
        booked = spoiled(booked, i, error)
    net = adjust_network(start, booked, fixed=corners(names))

    assert list(net.set_aside) == wrong
    assert net.verdict == Verdict.PASS
    for i, error in zip(wrong, (0.025, -0.04, 0.06), strict=True):
        report = net.measurements[i]
        assert report.error == pytest.approx(error, abs=0.01)
        assert report.verdict == Verdict.FAIL


def test_with_a_tenth_of_the_distances_wrong_a_robust_start_still_finds_the_points():
    rng = np.random.default_rng(4)
    names, true, booked = mesh(rng)
    wrong = rng.choice(distances(booked), len(booked) // 10, replace=False)
    for i in wrong:
        booked = spoiled(booked, int(i), rng.choice([-1, 1]) * rng.uniform(0.03, 0.1))
    start = dict(zip(names, true, strict=True))
    held = corners(names)
    net = adjust_network(start, booked, fixed=held, robust=True)
    raw = adjust_network(start, booked, fixed=held, snoops=False)
    error = np.hypot(*(net.positions_m - true).T)
    raw_error = np.hypot(*(raw.positions_m - true).T)

    assert set(net.set_aside) >= set(wrong.tolist())
    assert len(net.set_aside) <= len(wrong) + 2
    assert error.max() < 0.006 < raw_error.max()


def test_a_clean_network_loses_nothing():
    names, true, booked = mesh(np.random.default_rng(2))
    net = adjust_network(
        dict(zip(names, true, strict=True)), booked, fixed=corners(names)
    )

    assert net.set_aside == ()
    assert net.verdict == Verdict.PASS
    assert {m.verdict for m in net.measurements} == {Verdict.PASS}
    by_kind = {g.kind: g for g in net.groups}
    assert by_kind["distance"].factor == pytest.approx(1.0, abs=0.2)
    assert by_kind["direction"].factor == pytest.approx(1.0, abs=0.2)
    total = sum(g.redundancy for g in net.groups)
    assert total == pytest.approx(net.dof)


def test_a_small_group_gets_no_precision_of_its_own():
    start = {"A": (0, 0), "B": (60, 0), "C": (30, 90), "P": (30, 40)}
    sides = [Distance(a, "P", 50.0, 0.002) for a in "ABC"]
    net = adjust_network(start, sides, fixed="ABC")

    assert net.groups[0].factor is None


def test_two_readings_of_one_line_that_disagree_leave_the_question_open():
    start = {"A": (0, 0), "B": (60, 0), "P": (30, 40)}
    sides = [
        Distance("A", "P", 50.0, 0.002),
        Distance("B", "P", 50.0, 0.002),
        Distance("B", "P", 50.05, 0.002),
    ]
    net = adjust_network(start, sides, fixed="AB")

    assert net.verdict == Verdict.AMBIGUOUS
    assert net.ambiguous == ((1, 2),)
    assert net.measurements[0].verdict == Verdict.NOT_TESTED
    assert net.measurements[1].verdict == Verdict.AMBIGUOUS


def test_a_wrong_known_point_is_not_paid_for_by_good_measurements():
    rng = np.random.default_rng(6)
    names, true, booked = mesh(rng, side=3)
    known = coordinates(
        [names[0], names[2], names[6], names[8]],
        true[[0, 2, 6, 8]] + [[0, 0], [0.06, 0], [0, 0], [0, 0]],
        0.003,
    )
    net = adjust_network(dict(zip(names, true, strict=True)), booked, known=[known])

    assert net.set_aside == ()
    assert net.verdict == Verdict.FAIL
    worst = max(net.known, key=lambda k: k.w)
    assert worst.point == names[2]
    assert names[2] in net.reason


def test_what_is_set_aside_is_compared_with_the_others_once_more():
    # one huge blunder makes its neighbours look bad; in the end only it is out
    runs = []
    z = {"A": 0.0, "B": 1.0, "C": 2.0, "D": 1.5, "E": 0.5}
    for a in z:
        for b in z:
            if a < b:
                runs.append(HeightDifference(a, b, z[b] - z[a], 0.001))
    runs[0] = HeightDifference("A", "B", 3.0, 0.001)
    net = adjust_levels(runs, fixed={"A": 0.0}, robust=True)

    assert net.set_aside == (0,)
    assert net.height("B").height_m == pytest.approx(1.0)


def test_residuals_too_large_all_over_are_reported_without_naming_one():
    names, true, booked = mesh(np.random.default_rng(12), noise=1.35)
    net = adjust_network(
        dict(zip(names, true, strict=True)), booked, fixed=corners(names)
    )

    assert net.test.verdict == Verdict.FAIL
    if not net.set_aside:
        assert net.verdict == Verdict.UNDECIDED


@settings(max_examples=15, deadline=None)
@given(st.integers(0, 2**32 - 1), st.floats(0.03, 0.5), st.booleans())
def test_one_large_blunder_never_moves_the_net_and_never_costs_a_good_one(
    seed, size, down
):
    rng = np.random.default_rng(seed)
    names, true, booked = mesh(rng, side=4, noise=0.3)
    i = int(rng.choice(distances(booked)))
    booked = spoiled(booked, i, -size if down else size)
    held = corners(names, 4)
    net = adjust_network(dict(zip(names, true, strict=True)), booked, fixed=held)

    if net.verdict == Verdict.AMBIGUOUS:
        assert any(i in group for group in net.ambiguous)
    elif booked[i].start in held and booked[i].end in held:
        assert i in net.set_aside
    else:
        assert net.set_aside == (i,)


def test_the_limits_of_the_tests_are_the_published_ones():
    # Baarda 1968 and Ghilani ch. 21 (from memory), all recomputed from quantiles
    assert critical_w(0.001) == pytest.approx(3.2905, abs=5e-5)
    assert critical_w(0.01) == pytest.approx(2.5758, abs=5e-5)
    assert critical_w(0.05) == pytest.approx(1.960, abs=5e-4)
    assert detectable(0.001, 0.80) == pytest.approx(4.132, abs=5e-4)
    assert detectable(0.05, 0.80) == pytest.approx(2.8016, abs=5e-5)
    assert detectable(0.01, 0.80) == pytest.approx(3.4175, abs=5e-5)
    assert detectable(0.001, 0.90) == pytest.approx(4.572, abs=5e-4)
    assert detectable(0.001, 0.95) == pytest.approx(4.935, abs=5e-4)
    for alpha, dof, expected in [
        (0.001, 1, 17.0746),
        (0.001, 2, 19.6624),
        (0.001, 3, 21.5450),
        (0.05, 1, 7.8489),
        (0.05, 2, 9.6347),
        (0.05, 3, 10.9026),
        (0.01, 1, 11.679),
    ]:
        assert noncentrality(alpha, 0.80, dof) == pytest.approx(expected, abs=5e-4)
    for dof, expected in [(3, 0.0055), (5, 0.013), (13, 0.060), (26, 0.143)]:
        assert matching_alpha(dof) == pytest.approx(expected, abs=6e-4)
    assert matching_alpha(100) == pytest.approx(0.396, abs=6e-4)


def test_limits_of_chi_square_and_others_are_those_of_the_published_tables():
    # NIST/SEMATECH e-Handbook tables 1.3.6.7.4
    from geometry.adjust import global_test

    for dof, five, upper, lower in [
        (1, 3.841, 5.024, 0.001),
        (2, 5.991, 7.378, 0.051),
        (3, 7.815, 9.348, 0.216),
        (4, 9.488, 11.143, 0.484),
        (5, 11.070, 12.833, 0.831),
        (10, 18.307, 20.483, 3.247),
        (20, 31.410, 34.170, 9.591),
    ]:
        test = global_test(1.0, dof)
        assert test.limit == pytest.approx(five, abs=6e-4)
        assert test.upper == pytest.approx(upper, abs=6e-4)
        assert test.lower == pytest.approx(lower, abs=6e-4)


def test_ellipses_with_an_estimated_sigma_are_wider_by_the_f_distribution():
    # from F 5 % (2, 10) 4.103 and (2, 20) 3.493, NIST/SEMATECH 1.3.6.7.3, from memory
    assert ellipse_factor(10) == pytest.approx(math.sqrt(2 * 4.103), abs=5e-4)
    assert ellipse_factor(10) == pytest.approx(2.8646, abs=1e-4)
    assert ellipse_factor(20) == pytest.approx(2.643, abs=5e-4)
    # without end it is the factor of a known sigma, and 39.35 % is inside one sigma
    assert ellipse_factor(10**7) == pytest.approx(2.4477, abs=5e-5)
    assert ellipse_factor(10**7, 0.39347) == pytest.approx(1.0, abs=5e-5)
    with pytest.raises(OutOfRange):
        ellipse_factor(0)


def test_many_measurements_widen_the_limit_so_that_a_clean_net_stays_whole():
    assert removal_limit(10, 0.001) == pytest.approx(3.2905, abs=5e-5)
    # two-sided normal at 0.02 / 500
    assert removal_limit(500, 0.001) == pytest.approx(4.1075, abs=5e-5)


@pytest.mark.parametrize("alpha", [0.0, 1.0, -0.1, math.nan])
def test_a_probability_outside_zero_and_one_is_refused(alpha):
    with pytest.raises(OutOfRange):
        critical_w(alpha)
