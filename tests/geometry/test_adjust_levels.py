"""Level nets against printed answers and against plain linear algebra."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.adjust import (
    HeightDifference,
    Undetermined,
    adjust_levels,
    heights,
)
from geometry.errors import (
    CoincidentPoints,
    EmptyInput,
    GeometryError,
    NotFinite,
    OutOfRange,
)
from geometry.verdicts import Verdict

KRUMM_NET = [
    HeightDifference("A", "B", 10.509, 0.006),
    HeightDifference("B", "C", 5.360, 0.004),
    HeightDifference("C", "D", -8.523, 0.005),
    HeightDifference("D", "A", -7.348, 0.003),
    HeightDifference("B", "D", -3.167, 0.004),
    HeightDifference("A", "C", 15.881, 0.012),
]


def test_a_weighted_level_net_gives_the_printed_heights_and_residuals():
    # Krumm 2020, Geodetic Network Adjustment Examples, pp. 6-9 (Ghilani ex. 12.6)
    net = adjust_levels(KRUMM_NET, fixed={"A": 437.596})

    assert net.dof == 3
    assert net.height("B").height_m == pytest.approx(448.10871, abs=6e-6)
    assert net.height("C").height_m == pytest.approx(453.46847, abs=6e-6)
    assert net.height("D").height_m == pytest.approx(444.94361, abs=6e-6)
    assert net.squares == pytest.approx(1.27212, abs=6e-6)
    assert net.sigma0 == pytest.approx(0.6512, abs=6e-5)
    scaled = [1000 * net.sigma0 * net.height(p).sigma_m for p in "BCD"]
    assert scaled == pytest.approx([2.30, 2.64, 1.76], abs=6e-3)
    residuals = [1000 * m.residual for m in net.measurements]
    assert residuals == pytest.approx([3.71, -0.24, -1.86, 0.39, 1.89, -8.53], abs=6e-3)


def test_redundancy_numbers_and_detectable_errors_of_the_printed_net():
    # redundancies computed from the printed data of Krumm 2020 pp. 6-9
    net = adjust_levels(KRUMM_NET, fixed={"A": 437.596})
    shares = [m.redundancy for m in net.measurements]

    assert shares == pytest.approx([0.655, 0.329, 0.509, 0.188, 0.433, 0.886], abs=6e-4)
    assert sum(shares) == pytest.approx(3.0)
    # Baarda 1968: delta0 sigma / sqrt(r) with delta0 4.132
    assert net.measurements[5].detectable == pytest.approx(0.0527, abs=6e-5)
    assert net.verdict == Verdict.PASS


def test_a_net_of_four_heights_with_one_held_gives_the_printed_answer():
    # BME tutorial on adjusting a level net (public copy); answers as printed there
    booked = [
        ("1", "2", -0.749, 1.1),
        ("1", "3", -1.274, 1.8),
        ("1", "4", -2.890, 1.4),
        ("2", "3", -0.530, 1.5),
        ("2", "4", -2.141, 1.9),
        ("3", "4", -1.614, 0.9),
    ]
    runs = [HeightDifference(a, b, v, 0.7e-3 * km) for a, b, v, km in booked]
    net = adjust_levels(runs, fixed={"4": 101.345}, snoops=False)

    found = [net.height(p).height_m for p in "123"]
    assert found == pytest.approx([104.2350, 103.4868, 102.9588], abs=6e-5)
    assert net.squares == pytest.approx(8.217, abs=6e-4)
    assert net.sigma0 == pytest.approx(1.65, abs=6e-3)
    scaled = [1000 * net.sigma0 * net.height(p).sigma_m for p in "123"]
    assert scaled == pytest.approx([1.13, 1.19, 0.91], abs=6e-3)
    shares = [m.redundancy for m in net.measurements]
    assert shares == pytest.approx([0.3, 0.7, 0.5, 0.5, 0.7, 0.2], abs=0.05)


MILES = [
    ("X", "A", 5.10, 4),
    ("A", "Y", 2.34, 3),
    ("Y", "C", -1.25, 2),
    ("C", "X", -6.13, 3),
    ("A", "B", -0.68, 2),
    ("B", "Y", 3.00, 2),
    ("B", "C", 1.70, 2),
]


def test_equal_and_distance_weights_give_the_textbook_heights():
    # Ghilani, Adjustment Computations, ex. 12.1 and 12.2, from memory
    held = {"X": 100.00, "Y": 107.50}
    equal = adjust_levels(
        [HeightDifference(a, b, v, 1.0) for a, b, v, _ in MILES], fixed=held
    )
    by_length = adjust_levels(
        [HeightDifference(a, b, v, (m / 12) ** 0.5) for a, b, v, m in MILES], fixed=held
    )

    assert [equal.height(p).height_m for p in "ABC"] == pytest.approx(
        [105.141, 104.483, 106.188], abs=6e-4
    )
    assert equal.sigma0 == pytest.approx(0.0501, abs=6e-5)
    assert [by_length.height(p).height_m for p in "ABC"] == pytest.approx(
        [105.1504, 104.4892, 106.1972], abs=6e-5
    )
    assert by_length.sigma0 == pytest.approx(0.1072, abs=6e-5)


def test_a_net_of_eight_lines_gives_the_recomputed_heights():
    # data of Mikhail & Ackermann ex. 7.4 as in OBS_LSQ ex7_4; heights recomputed
    lines = [
        ("A", "B", 25.42, 18.1),
        ("B", "C", 10.34, 9.4),
        ("C", "A", -35.20, 14.2),
        ("B", "D", -15.54, 17.6),
        ("D", "E", 21.32, 13.5),
        ("E", "C", 4.82, 9.9),
        ("E", "A", -31.02, 13.8),
        ("C", "D", -26.11, 14.0),
    ]
    runs = [HeightDifference(a, b, v, (0.1 * km) ** 0.5) for a, b, v, km in lines]
    net = adjust_levels(runs, fixed={"A": 800.0})

    assert [net.height(p).height_m for p in "BCDE"] == pytest.approx(
        [825.2206, 835.5354, 809.5339, 830.8460], abs=6e-5
    )
    assert net.squares / 4 == pytest.approx(0.0404, abs=6e-5)


def test_known_heights_with_covariance_take_their_share_of_the_misclosure():
    # two benchmarks of equal precision, one run between them: thirds
    known = heights(["P", "Q"], [10.0, 12.0], 0.002)
    net = adjust_levels([HeightDifference("P", "Q", 2.006, 0.002)], known=[known])

    assert net.heights_m == pytest.approx([9.998, 12.002], abs=1e-9)
    assert net.measurements[0].residual == pytest.approx(-0.002, abs=1e-9)
    assert net.dof == 1


def test_correlated_known_heights_agree_with_plain_linear_algebra():
    joint = 1e-6 * np.array([[4.0, 3.0, 3.0], [3.0, 4.0, 3.0], [3.0, 3.0, 4.0]])
    known = heights(["P", "Q", "R"], [10.0, 12.0, 11.0], joint)
    rises = [("P", "X", 1.003), ("Q", "X", -1.001), ("R", "X", 0.002)]
    net = adjust_levels(
        [HeightDifference(a, b, v, 0.001) for a, b, v in rises], known=[known]
    )
    a = np.vstack([np.eye(3, 4), [[-1, 0, 0, 1], [0, -1, 0, 1], [0, 0, -1, 1]]])
    measured = np.array([10.0, 12.0, 11.0, 1.003, -1.001, 0.002])
    weight = np.zeros((6, 6))
    weight[:3, :3] = np.linalg.inv(joint)
    weight[3:, 3:] = np.eye(3) / 1e-6
    q = np.linalg.inv(a.T @ weight @ a)

    assert net.heights_m == pytest.approx(q @ a.T @ weight @ measured, abs=1e-9)
    assert net.joint_covariance(["P", "Q", "R", "X"]) == pytest.approx(q, rel=1e-9)
    v = a @ (q @ a.T @ weight @ measured) - measured
    cofactor = np.linalg.inv(weight) - a @ q @ a.T
    top = weight @ v
    below = np.sqrt(np.diag(weight @ cofactor @ weight))
    by_point = np.abs(top / below)[:3]
    assert [k.w for k in net.known] == pytest.approx(by_point, rel=1e-6)


def test_a_blunder_in_a_well_tied_net_is_set_aside_and_the_rest_agree():
    names = "ABCDE"
    true = dict(zip(names, [0.0, 1.2, 0.7, 3.1, 2.2], strict=True))
    runs = [
        HeightDifference(a, b, true[b] - true[a], 0.001)
        for i, a in enumerate(names)
        for b in names[i + 1 :]
    ]
    runs[3] = HeightDifference("A", "E", 2.230, 0.001)
    net = adjust_levels(runs, fixed={"A": 0.0})

    assert net.set_aside == (3,)
    assert net.verdict == Verdict.PASS
    assert net.measurements[3].verdict == Verdict.FAIL
    assert net.measurements[3].error == pytest.approx(0.030, abs=1e-6)
    assert net.height("E").height_m == pytest.approx(2.2, abs=1e-9)


def test_in_a_single_loop_no_run_is_blamed_for_the_misclosure():
    runs = [
        HeightDifference("A", "B", 1.0, 0.001),
        HeightDifference("B", "C", 1.0, 0.001),
        HeightDifference("C", "A", -2.030, 0.001),
    ]
    net = adjust_levels(runs, fixed={"A": 0.0})

    assert net.verdict == Verdict.AMBIGUOUS
    assert net.set_aside == ()
    assert net.ambiguous == ((0, 1, 2),)


def test_without_a_run_to_spare_nothing_is_tested_and_every_new_height_unchecked():
    runs = [
        HeightDifference("A", "B", 1.0, 0.001),
        HeightDifference("B", "C", 1.0, 0.001),
    ]
    net = adjust_levels(runs, fixed={"A": 0.0})

    assert net.verdict == Verdict.NOT_TESTED
    assert net.unchecked == ("B", "C")
    assert net.measurements[0].detectable is None
    assert net.effect(0) == {}


def test_a_spur_off_a_loop_is_the_only_unchecked_height():
    runs = [
        *KRUMM_NET,
        HeightDifference("D", "S", 1.0, 0.002),
    ]
    net = adjust_levels(runs, fixed={"A": 437.596})

    assert net.unchecked == ("S",)
    assert net.measurements[6].verdict == Verdict.NOT_TESTED


def test_the_effect_of_an_undetected_error_is_what_a_changed_run_does():
    net = adjust_levels(KRUMM_NET, fixed={"A": 437.596})
    biased = [*KRUMM_NET]
    seen = net.measurements[1].detectable
    biased[1] = HeightDifference("B", "C", 5.360 + seen, 0.004)
    other = adjust_levels(biased, fixed={"A": 437.596}, snoops=False)
    effect = net.effect(1)

    for name in "ABCD":
        change = other.height(name).height_m - net.height(name).height_m
        assert effect[name][0] == pytest.approx(change, abs=1e-9)
    worst = max(abs(effect["B"][0]), abs(effect["C"][0]))
    assert net.measurements[1].effect_m == pytest.approx(worst)


def test_heights_tied_to_nothing_are_named_with_the_run_that_would_tie_them():
    runs = [
        HeightDifference("A", "B", 1.0, 0.001),
        HeightDifference("M", "N", 1.0, 0.001),
    ]
    with pytest.raises(Undetermined) as caught:
        adjust_levels(runs, fixed={"A": 0.0})

    assert {one.point for one in caught.value.loose} == {"M", "N"}
    assert [str(one) for one in caught.value.missing] == ["levels from A to M"]
    mended = [*runs, HeightDifference("A", "M", 0.5, 0.001)]
    assert adjust_levels(mended, fixed={"A": 0.0}).height("N").height_m == 1.5


def test_without_any_known_height_one_is_asked_for():
    with pytest.raises(Undetermined, match="a known height of A"):
        adjust_levels(KRUMM_NET)


def test_a_free_net_has_the_covariance_of_the_pseudoinverse():
    net = adjust_levels(KRUMM_NET, free=True)
    a = np.zeros((6, 4))
    for i, run in enumerate(KRUMM_NET):
        a[i, "ABCD".index(run.start)], a[i, "ABCD".index(run.end)] = -1, 1
    a /= np.array([run.sigma_m for run in KRUMM_NET])[:, None]

    order = [net.names.index(n) for n in "ABCD"]
    expected = np.linalg.pinv(a.T @ a)
    assert net.joint_covariance(list("ABCD")) == pytest.approx(expected, abs=1e-15)
    assert net.variances_m2[order] == pytest.approx(np.diag(expected), abs=1e-15)
    assert net.heights_m.sum() == pytest.approx(0.0, abs=1e-9)
    assert net.squares == pytest.approx(1.27212, abs=6e-6)


def test_a_free_net_keeps_its_datum_marks_on_the_average():
    marks = {"B": 448.10, "D": 444.95}
    net = adjust_levels(KRUMM_NET, free=True, datum=marks)
    average = (net.height("B").height_m + net.height("D").height_m) / 2

    assert average == pytest.approx((448.10 + 444.95) / 2)


@pytest.mark.parametrize(
    ("runs", "held", "error"),
    [
        ([], {}, EmptyInput),
        ([HeightDifference("A", "A", 0.0, 0.001)], {"A": 0.0}, CoincidentPoints),
        ([HeightDifference("A", "B", float("nan"), 0.001)], {"A": 0.0}, NotFinite),
        ([HeightDifference("A", "B", 1.0, 0.0)], {"A": 0.0}, OutOfRange),
        ([HeightDifference("A", "B", 1.0, 0.001)], {"A": float("inf")}, NotFinite),
        ([HeightDifference("A", "B", 1.0, 0.001)], {"A": 1e300}, OutOfRange),
        ([HeightDifference("A", "B", 1e300, 0.001)], {"A": 1.0}, OutOfRange),
        ([HeightDifference("A", "B", 1.0, 1e-300)], {"A": 1.0}, OutOfRange),
    ],
)
def test_levels_that_no_adjustment_could_use_are_refused_by_name(runs, held, error):
    with pytest.raises(error):
        adjust_levels(runs, fixed=held)


@settings(max_examples=30, deadline=None)
@given(st.integers(0, 2**32 - 1), st.floats(-9e6, 9e6))
def test_shares_of_redundancy_sum_to_the_degrees_of_freedom_at_any_height(seed, base):
    rng = np.random.default_rng(seed)
    count = int(rng.integers(3, 9))
    names = [f"P{i}" for i in range(count)]
    z = rng.uniform(0, 30, count)
    pairs = [(i, i + 1) for i in range(count - 1)]
    pairs += [tuple(rng.choice(count, 2, replace=False)) for _ in range(count)]
    runs = [
        HeightDifference(
            names[i],
            names[j],
            z[j] - z[i] + rng.normal(0, 2e-3),
            rng.uniform(1e-3, 4e-3),
        )
        for i, j in pairs
    ]
    net = adjust_levels(runs, fixed={"P0": base}, snoops=False)
    shares = [m.redundancy for m in net.measurements]

    assert sum(shares) == pytest.approx(net.dof, abs=1e-9)
    assert all(-1e-9 <= r <= 1 + 1e-9 for r in shares)
    order = rng.permutation(len(runs))
    again = adjust_levels([runs[k] for k in order], fixed={"P0": base}, snoops=False)
    for name in names:
        assert again.height(name).height_m == pytest.approx(
            net.height(name).height_m, abs=1e-8
        )


def test_between_benchmarks_held_at_both_ends_a_run_is_still_checked():
    run = [HeightDifference("A", "B", 1.05, 0.002)]
    net = adjust_levels(run, fixed={"A": 10.0, "B": 11.0})

    assert net.dof == 1
    assert net.measurements[0].residual == pytest.approx(-0.05)
    assert net.verdict == Verdict.FAIL


ODD = st.one_of(
    st.floats(-50, 50), st.sampled_from([1e7, 1e300, math.inf, -math.inf, math.nan])
)


@settings(max_examples=150, deadline=None)
@given(st.data())
def test_any_levels_give_finite_heights_or_a_named_error(data):
    pick = st.sampled_from("ABCD")
    runs = []
    for _ in range(data.draw(st.integers(0, 6))):
        sigma = data.draw(st.sampled_from([1e-3, 1e-3, 0.0, math.nan]))
        ends = data.draw(pick), data.draw(pick)
        runs.append(HeightDifference(*ends, data.draw(ODD), sigma))
    held = {n: data.draw(ODD) for n in "AB"[: data.draw(st.integers(0, 2))]}
    free = data.draw(st.booleans())
    robust = data.draw(st.booleans())
    try:
        net = adjust_levels(runs, fixed=held, free=free, robust=robust)
    except GeometryError as error:
        assert error.what
        return
    assert np.isfinite(net.heights_m).all()
    assert np.isfinite(net.variances_m2).all()
