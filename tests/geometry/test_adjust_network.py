"""Plane networks against printed answers and an independent minimiser."""

from __future__ import annotations

import math

import numpy as np
import pytest
import scipy.optimize
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.adjust import (
    Angle,
    Azimuth,
    Direction,
    Distance,
    adjust_network,
    coordinates,
)
from geometry.ellipse import ellipse
from geometry.errors import (
    CoincidentPoints,
    EmptyInput,
    GeometryError,
    NotFinite,
    OutOfRange,
    WrongShape,
)
from geometry.verdicts import Verdict
from tests.geometry.adjust_networks import network

SECOND = math.pi / 648000


def dms(degrees: int, minutes: int, seconds: float) -> float:
    return math.radians(degrees + minutes / 60 + seconds / 3600)


def test_a_four_point_resection_gives_the_printed_position():
    # Krumm 2020, Geodetic Network Adjustment Examples (Ghilani 2010 ex. 15.5 p. 277)
    start = {
        "P": (1303.599, 1458.615),
        "Q": (1636.436, 1310.468),
        "R": (1503.395, 888.362),
        "S": (1506.262, 785.061),
        "U": (1001.0, 999.0),
    }
    angles = [
        Angle("U", "P", "Q", dms(30, 29, 33), 5 * SECOND),
        Angle("U", "Q", "R", dms(38, 30, 31), 6 * SECOND),
        Angle("U", "R", "S", dms(10, 29, 57), 6 * SECOND),
    ]
    net = adjust_network(start, angles, fixed="PQRS")

    assert net.dof == 1
    assert net.sigma0 == pytest.approx(0.60300, abs=6e-6)
    u = net.point("U")
    assert u.position_m == pytest.approx([999.9989, 1000.0253], abs=6e-5)
    scaled = net.sigma0 * np.sqrt(np.diag(u.covariance_m2))
    assert scaled == pytest.approx([0.02057, 0.04268], abs=6e-6)


@pytest.mark.parametrize(
    ("which", "expected"),
    [((0, 1), (1000.02855, 999.96117)), ((1, 2), (999.97943, 1000.04295))],
)
def test_three_point_resections_of_the_same_data_are_exact(which, expected):
    # computed from the data of the same example
    start = {
        "P": (1303.599, 1458.615),
        "Q": (1636.436, 1310.468),
        "R": (1503.395, 888.362),
        "S": (1506.262, 785.061),
        "U": (1001.0, 999.0),
    }
    angles = [
        Angle("U", "P", "Q", dms(30, 29, 33), 5 * SECOND),
        Angle("U", "Q", "R", dms(38, 30, 31), 6 * SECOND),
        Angle("U", "R", "S", dms(10, 29, 57), 6 * SECOND),
    ]
    net = adjust_network(start, [angles[i] for i in which], fixed="PQRS")

    assert net.point("U").position_m == pytest.approx(expected, abs=6e-6)
    assert net.verdict == Verdict.NOT_TESTED


def test_a_trilateration_in_feet_gives_the_printed_coordinates():
    # Krumm 2020 (Ghilani ex. 14.5 and 19.3); ellipses recomputed from the same data
    start = {
        "Badger": (2410000.0, 390000.0),
        "Bucky": (2411820.0, 386881.222),
        "Wisconsin": (2415776.0, 391043.0),
        "Campus": (2416893.0, 387602.0),
    }
    sides = [
        ("Badger", "Wisconsin", 5870.302),
        ("Badger", "Campus", 7297.588),
        ("Wisconsin", "Campus", 3616.434),
        ("Wisconsin", "Bucky", 5742.878),
        ("Campus", "Bucky", 5123.760),
    ]
    net = adjust_network(
        start,
        [Distance(a, b, v, 0.01) for a, b, v in sides],
        fixed=["Badger", "Bucky"],
        snoops=False,
    )

    assert net.dof == 1
    assert net.sigma0 == pytest.approx(13.5905, abs=6e-5)
    w, c = net.point("Wisconsin"), net.point("Campus")
    assert w.position_m == pytest.approx([2415776.9044, 391043.2945], abs=6e-5)
    assert c.position_m == pytest.approx([2416892.6955, 387603.2551], abs=6e-5)
    for point, sigmas, axes in (
        (w, (0.14879, 0.22061), (0.24618, 0.10099, 150.88)),
        (c, (0.10378, 0.27054), (0.27264, 0.09815, 7.62)),
    ):
        scaled = net.sigma0**2 * point.covariance_m2
        assert np.sqrt(np.diag(scaled)) == pytest.approx(sigmas, abs=6e-6)
        shape = ellipse(scaled, factor=1.0)
        assert (shape.semi_major_m, shape.semi_minor_m) == pytest.approx(
            axes[:2], abs=6e-6
        )
        assert math.degrees(shape.azimuth_rad) == pytest.approx(axes[2], abs=6e-3)


def test_a_distance_resection_gives_the_printed_position_and_redundancies():
    # Krumm 2020 (Strang & Borre ex. 10.1); detectable bias by Baarda's formula
    start = {
        "1": (170.71, 270.71),
        "2": (100.0, 100.0),
        "3": (241.42, 100.0),
        "P": (170.71, 170.71),
    }
    lengths = [
        Distance("1", "P", 100.01, 0.01),
        Distance("2", "P", 100.02, 0.01),
        Distance("3", "P", 100.03, 0.01),
    ]
    net = adjust_network(start, lengths, fixed="123", snoops=False)

    p = net.point("P")
    assert p.position_m == pytest.approx([170.7029, 170.7234], abs=6e-5)
    assert net.sigma0 == pytest.approx(3.30293, abs=6e-4)
    scaled = 100 * net.sigma0 * np.sqrt(np.diag(p.covariance_m2))
    assert sorted(scaled, reverse=True) == pytest.approx([3.303, 2.335], abs=6e-4)
    shares = [m.redundancy for m in net.measurements]
    assert shares == pytest.approx([0.5, 0.25, 0.25], abs=6e-4)
    assert net.measurements[0].detectable == pytest.approx(0.0584, abs=6e-5)


def residuals_by_hand(names, booked, known, rounds, x):
    at = dict(zip(names, x[: 2 * len(names)].reshape(-1, 2), strict=True))
    turn = dict(zip(rounds, x[2 * len(names) :], strict=True))

    def azimuth(a, b):
        return math.atan2(at[b][0] - at[a][0], at[b][1] - at[a][1])

    def wrap(v):
        return (v + math.pi) % (2 * math.pi) - math.pi

    out = []
    for o in booked:
        if isinstance(o, Distance):
            length = math.dist(at[o.start], at[o.end])
            out.append((length - o.value_m) / o.sigma_m)
        elif isinstance(o, Direction):
            v = azimuth(o.station, o.target) - turn[o.station] - o.value_rad
            out.append(wrap(v) / o.sigma_rad)
        elif isinstance(o, Angle):
            v = azimuth(o.station, o.foresight) - azimuth(o.station, o.backsight)
            out.append(wrap(v - o.value_rad) / o.sigma_rad)
        else:
            out.append(wrap(azimuth(o.start, o.end) - o.value_rad) / o.sigma_rad)
    off = np.concatenate([at[n] for n in known.names]) - known.values_m.ravel()
    whitened = np.linalg.solve(np.linalg.cholesky(known.covariance_m2), off)
    return np.concatenate([out, whitened])


def test_all_kinds_together_agree_with_an_independent_minimiser():
    names, at, booked, known = network(np.random.default_rng(5))
    shift = np.array([512_345.678, 4_187_654.321])
    moved = coordinates(known.names, known.values_m + shift, known.covariance_m2)
    start = {n: p + shift + (0.4, -0.3) for n, p in at.items()}
    net = adjust_network(start, booked, known=[moved], snoops=False)
    rounds = [key[0] for key in net.orientations_rad]
    first = np.concatenate(
        [np.concatenate([at[n] for n in names]), list(net.orientations_rad.values())]
    )
    solved = scipy.optimize.least_squares(
        lambda x: residuals_by_hand(names, booked, known, rounds, x),
        first,
        x_scale="jac",
        xtol=1e-15,
        ftol=1e-15,
        gtol=1e-15,
    )
    expected = solved.x[: 2 * len(names)].reshape(-1, 2) + shift
    inverse = np.linalg.inv(solved.jac.T @ solved.jac)

    assert net.positions_m == pytest.approx(expected, abs=2e-8)
    assert net.squares == pytest.approx(2 * solved.cost, rel=1e-8)
    size = 2 * len(names)
    joint = net.joint_covariance(names)
    assert joint == pytest.approx(inverse[:size, :size], rel=1e-4, abs=1e-12)
    shares = sum(m.redundancy for m in net.measurements)
    a = solved.jac[-6:]
    of_known = np.trace(np.eye(6) - a @ inverse @ a.T)
    assert shares + of_known == pytest.approx(net.dof, abs=1e-5)


def test_covariances_and_tests_agree_with_simulation():
    # 150 repetitions: relative standard error of a variance about 12 %
    rng = np.random.default_rng(11)
    names, at, booked, known = network(rng, count=5, noise=0.0)
    found, tests = [], []
    half = np.linalg.cholesky(known.covariance_m2)
    for _ in range(150):
        noisy = []
        for o in booked:
            value, sigma = (
                (o.value_m, o.sigma_m)
                if isinstance(o, Distance)
                else (o.value_rad, o.sigma_rad)
            )
            value += rng.normal(0, sigma)
            field = "value_m" if isinstance(o, Distance) else "value_rad"
            noisy.append(
                type(o)(**{f: getattr(o, f) for f in o.__slots__} | {field: value})
            )
        error = (half @ rng.normal(size=6)).reshape(3, 2)
        k = coordinates(known.names, known.values_m + error, known.covariance_m2)
        net = adjust_network(at, noisy, known=[k], snoops=False)
        found.append(net.positions_m.ravel())
        tests.append(net.test.verdict == Verdict.FAIL)
    sample = np.cov(np.array(found).T)
    predicted = net.joint_covariance(names)
    scale = np.sqrt(np.diag(predicted))

    assert np.diag(sample) == pytest.approx(np.diag(predicted), rel=0.5)
    assert np.abs((sample - predicted) / np.outer(scale, scale)).max() < 0.5
    assert np.mean(tests) < 0.12


def test_the_effect_of_an_undetected_error_is_what_a_changed_distance_does():
    _, at, booked, known = network(np.random.default_rng(21))
    net = adjust_network(at, booked, known=[known], snoops=False)
    i = next(k for k, o in enumerate(booked) if isinstance(o, Distance))
    seen = net.measurements[i].detectable
    o = booked[i]
    changed = [*booked]
    changed[i] = Distance(o.start, o.end, o.value_m + seen, o.sigma_m)
    other = adjust_network(at, changed, known=[known], snoops=False)
    effect = net.effect(i)
    moved = dict(zip(net.names, other.positions_m - net.positions_m, strict=True))

    for name in net.names:
        assert effect[name] == pytest.approx(moved[name], abs=2e-6)
    worst = max(np.hypot(*effect[o.start]), np.hypot(*effect[o.end]))
    assert net.measurements[i].effect_m == pytest.approx(worst)


@pytest.mark.parametrize("azimuth", [0.001, math.pi - 0.001, math.pi + 0.001, -0.001])
def test_directions_across_north_are_not_off_by_a_turn(azimuth):
    start = {
        "A": (0, 0),
        "B": (0, 100),
        "P": (50 * math.sin(azimuth), 50 * math.cos(azimuth)),
    }
    turns = [
        Direction("A", "B", 6.2831, 1e-5),
        Direction("A", "P", 6.2831 + azimuth + 4 * math.pi, 1e-5),
        Distance("A", "P", 50.0, 0.002),
    ]
    net = adjust_network(start, turns, fixed=["A", "B"])

    assert net.point("P").position_m == pytest.approx(start["P"], abs=1e-8)


@settings(max_examples=20, deadline=None)
@given(
    st.integers(0, 2**32 - 1),
    st.floats(-math.pi, math.pi),
    st.tuples(st.floats(-9e6, 9e6), st.floats(-9e6, 9e6)),
)
def test_turning_and_shifting_the_frame_turns_and_shifts_the_answer(seed, turn, shift):
    _, at, booked, known = network(np.random.default_rng(seed))
    booked = [o for o in booked if not isinstance(o, Azimuth)]
    c, s = math.cos(turn), math.sin(turn)
    rotate = np.array([[c, s], [-s, c]])
    one = adjust_network(at, booked, known=[known], snoops=False)
    block = np.kron(np.eye(3), rotate)
    there = coordinates(
        known.names,
        known.values_m @ rotate.T + shift,
        block @ known.covariance_m2 @ block.T,
    )
    start = {n: rotate @ p + shift for n, p in at.items()}
    two = adjust_network(start, booked[::-1], known=[there], snoops=False)

    assert two.positions_m == pytest.approx(
        one.positions_m @ rotate.T + shift, abs=2e-7
    )
    assert two.squares == pytest.approx(one.squares, rel=1e-5)
    shares = [m.redundancy for m in two.measurements][::-1]
    assert shares == pytest.approx([m.redundancy for m in one.measurements], abs=1e-5)


SQUARE = {"A": (0.0, 0.0), "B": (50.0, 0.0)}


@pytest.mark.parametrize(
    ("points", "booked", "error"),
    [
        ({}, [], EmptyInput),
        ({"A": (0, 0), "B": (0, 0)}, [Distance("A", "B", 5, 0.1)], CoincidentPoints),
        (SQUARE, [Distance("A", "A", 5, 0.1)], CoincidentPoints),
        (SQUARE, [Distance("A", "B", math.nan, 0.1)], NotFinite),
        (SQUARE, [Distance("A", "B", 5, math.inf)], NotFinite),
        (SQUARE, [Distance("A", "B", -5, 0.1)], OutOfRange),
        (SQUARE, [Distance("A", "Z", 5, 0.1)], OutOfRange),
        ({"A": (0, math.nan)}, [], NotFinite),
        ({"A": (0, 1e9)}, [], OutOfRange),
        ({"A": (0, 1, 2)}, [], WrongShape),
    ],
)
def test_input_that_no_network_could_use_is_refused_by_name(points, booked, error):
    with pytest.raises(error):
        adjust_network(points, booked, fixed=["A"] if "A" in points else [])


def test_a_covariance_without_full_rank_is_refused_with_the_points_named():
    known = coordinates(["A", "B"], [[0, 0], [50, 0]], np.ones((4, 4)))
    with pytest.raises(OutOfRange, match="A, B"):
        adjust_network(SQUARE, [Distance("A", "B", 50, 0.1)], known=[known])


def test_between_points_all_held_a_measurement_is_still_checked():
    net = adjust_network(SQUARE, [Distance("A", "B", 50.05, 0.002)], fixed="AB")

    assert net.dof == 1
    assert net.measurements[0].redundancy == pytest.approx(1.0)
    assert net.measurements[0].verdict == Verdict.FAIL
    assert net.point("A").fixed


def test_known_points_and_values_must_be_of_one_number():
    from geometry.adjust import Coordinates

    known = Coordinates(("A", "B"), np.zeros((1, 2)), np.eye(4))
    with pytest.raises(WrongShape):
        adjust_network(SQUARE, [Distance("A", "B", 50, 0.1)], known=[known])
    with pytest.raises(EmptyInput):
        coordinates([], np.zeros((0, 2)), 0.1)


NUMBERS = st.one_of(
    st.floats(-200, 200),
    st.sampled_from([0.0, 1e7, -1e7, 1e300, math.inf, -math.inf, math.nan]),
)


@settings(max_examples=200, deadline=None)
@given(st.data())
def test_any_input_gives_finite_positions_or_a_named_error(data):
    names = ["A", "B", "C", "D"][: data.draw(st.integers(0, 4))]
    points = {n: (data.draw(NUMBERS), data.draw(NUMBERS)) for n in names}
    pick = st.sampled_from([*names, "Z"])
    booked = []
    for _ in range(data.draw(st.integers(0, 8))):
        kind = data.draw(st.sampled_from([Distance, Direction, Azimuth, Angle]))
        ends = [data.draw(pick) for _ in range(3 if kind is Angle else 2)]
        sigma = data.draw(st.sampled_from([1e-3, 1e-3, 1e-3, 0.0, math.nan]))
        booked.append(kind(*ends, data.draw(NUMBERS), sigma))
    fixed = names[: data.draw(st.integers(0, 2))]
    options = {"fixed": fixed} if data.draw(st.booleans()) else {"free": True}
    try:
        net = adjust_network(points, booked, **options)
    except GeometryError as error:
        assert error.what
        return
    assert np.isfinite(net.positions_m).all()
    assert np.isfinite(net.covariances_m2).all()
    assert np.isfinite(net.squares)
