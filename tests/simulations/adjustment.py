"""Adjustment: do false alarms, power, coverage and identification keep their promise?

Run with `python -m tests.simulations.adjustment [runs]`. Fixed seeds; the default of
1,000 runs takes about a minute.
"""

from __future__ import annotations

import math
import sys
from dataclasses import replace

import numpy as np

from geometry.adjust import Direction, Distance, adjust_network
from geometry.adjust.reliability import critical_w, global_test
from geometry.adjust.snooping import removal_limit
from geometry.verdicts import Verdict

EDM_M, DIRECTION_RAD = 0.002, 3e-5


def mesh(side, rng):
    """Points 30 m apart and, without errors, what each measures of its nearest six."""
    grid = np.stack(np.meshgrid(np.arange(side), np.arange(side)), -1).reshape(-1, 2)
    true = 30.0 * grid + rng.normal(0, 3, (side * side, 2))
    booked = []
    for i, p in enumerate(true):
        for j in np.argsort(np.hypot(*(true - p).T))[1:7]:
            d = true[j] - p
            booked.append(Distance(f"{i}", f"{j}", math.hypot(*d), EDM_M))
            booked.append(Direction(f"{i}", f"{j}", math.atan2(*d) - i, DIRECTION_RAD))
    held = [f"{i}" for i in (0, side - 1, side * side - 1, side * side - side)]
    return {f"{i}": p for i, p in enumerate(true)}, booked, held


def noisy(booked, rng):
    e = rng.normal(size=len(booked))
    return [
        replace(o, value_m=o.value_m + o.sigma_m * k)
        if isinstance(o, Distance)
        else replace(o, value_rad=o.value_rad + o.sigma_rad * k)
        for o, k in zip(booked, e, strict=True)
    ]


def spoiled(booked, number, error):
    changed = [*booked]
    changed[number] = replace(changed[number], value_m=booked[number].value_m + error)
    return changed


def show(what, nominal, rate, count):
    spread = math.sqrt(max(rate * (1 - rate), 1e-12) / count)
    print(f"{what:58}{nominal:>10}{rate:10.4f} +- {spread:.4f}")


def clean_networks(runs):
    """False alarms of every test, and coverage of the 95 % ellipses."""
    rng = np.random.default_rng(2024)
    start, exact, held = mesh(4, np.random.default_rng(1))
    fails = lost = inside = points = single = tested = 0
    for _ in range(runs):
        net = adjust_network(start, noisy(exact, rng), fixed=held, snoops=False)
        fails += net.test.verdict == Verdict.FAIL
        w = np.abs(net.measurements.w)
        single += int((w > critical_w(0.001)).sum())
        tested += len(w)
        lost += bool((w > removal_limit(len(w), 0.001)).any())
        for k, name in enumerate(net.names):
            if name in held:
                continue
            off = net.positions_m[k] - start[name]
            inside += bool(off @ np.linalg.solve(net.covariances_m2[k], off) < 5.9915)
            points += 1
    show("global test, false alarm", "0.05", fails / runs, runs)
    show("one measurement at 0.001, false alarm", "0.0010", single / tested, tested)
    show("a clean network of 192 loses any measurement", "<=0.02", lost / runs, runs)
    show("adjusted point inside its 95 % ellipse", "0.95", inside / points, points)


def power_at_the_detectable_bias(runs):
    """Each error is exactly what the adjustment says it would have found."""
    rng = np.random.default_rng(7)
    start, exact, held = mesh(4, np.random.default_rng(1))
    sound = adjust_network(start, exact, fixed=held, snoops=False)
    usable = [m for m in sound.measurements if m.unit == "m" and m.redundancy > 0.05]
    hits = 0
    for _ in range(runs):
        wrong = usable[int(rng.integers(len(usable)))]
        bias = rng.choice([-1, 1]) * wrong.detectable
        booked = spoiled(noisy(exact, rng), wrong.number, bias)
        net = adjust_network(start, booked, fixed=held, snoops=False)
        hits += net.measurements[wrong.number].verdict == Verdict.FAIL
    show("a distance wrong by its detectable error, found", "0.80", hits / runs, runs)


def three_blunders(runs):
    """25 points, 3 wrong distances of 20 to 60 mm."""
    rng = np.random.default_rng(11)
    exactly = inside = open_ones = hidden = 0
    for _ in range(runs):
        start, exact, held = mesh(5, rng)
        distances = [i for i, o in enumerate(exact) if isinstance(o, Distance)]
        wrong = rng.choice(distances, 3, replace=False)
        booked = noisy(exact, rng)
        for i in wrong:
            error = rng.choice([-1, 1]) * rng.uniform(0.02, 0.06)
            booked = spoiled(booked, int(i), error)
        net = adjust_network(start, booked, fixed=held)
        named = set(net.set_aside)
        suspected = named | {i for group in net.ambiguous for i in group}
        exactly += named == set(wrong.tolist())
        inside += suspected >= set(wrong.tolist())
        open_ones += bool(net.ambiguous)
        hidden += len(set(wrong.tolist()) - suspected)
    show(
        "three blunders in 25 points: exactly these set aside", "", exactly / runs, runs
    )
    show("  all three set aside or among suspects", "", inside / runs, runs)
    show("  left open between several", "", open_ones / runs, runs)


def a_tenth_wrong(runs):
    """10 % of the distances wrong by N(0, 50 mm): rms error of coordinates."""
    rng = np.random.default_rng(13)
    sums = np.zeros(4)
    for _ in range(runs):
        start, exact, held = mesh(5, rng)
        booked = noisy(exact, rng)
        distances = [i for i, o in enumerate(exact) if isinstance(o, Distance)]
        for i in rng.choice(distances, len(distances) // 10, replace=False):
            booked = spoiled(booked, int(i), rng.normal(0, 0.05))
        true = np.array([start[f"{i}"] for i in range(25)])
        ways = ({"snoops": False}, {}, {"robust": True})
        for k, options in enumerate(ways):
            net = adjust_network(start, booked, fixed=held, **options)
            sums[k] += float(((net.positions_m - true) ** 2).mean())
        net = adjust_network(start, noisy(exact, rng), fixed=held, snoops=False)
        sums[3] += float(((net.positions_m - true) ** 2).mean())
    rms = 1000 * np.sqrt(sums / runs)
    words = ("plain", "snooping", "robust start and snooping", "without blunders")
    for word, value in zip(words, rms, strict=True):
        print(f"{'rms of a coordinate, a tenth wrong: ' + word:68}{value:10.2f} mm")


def wrong_starts(runs):
    rng = np.random.default_rng(17)
    for sigma in (0.5, 3.0, 8.0, 15.0):
        right = 0
        for _ in range(runs):
            true, exact, held = mesh(5, rng)
            start = {
                n: p if n in held else p + rng.normal(0, sigma, 2)
                for n, p in true.items()
            }
            net = adjust_network(start, exact, fixed=held, snoops=False)
            off = net.positions_m - np.array([true[n] for n in net.names])
            right += bool(np.abs(off).max() < 1e-3)
        what = f"30 m mesh, start wrong by {sigma:g} m: converges to the truth"
        show(what, "", right / runs, runs)


def large_degrees(runs):
    """The upper global test against chi-square, one blunder at the detectable bias."""
    rng = np.random.default_rng(19)
    start, exact, held = mesh(4, np.random.default_rng(1))
    hits = 0
    dof = 0
    for _ in range(runs):
        booked = noisy(exact, rng)
        booked = spoiled(booked, 60, 4.13 * EDM_M)
        net = adjust_network(start, booked, fixed=held, snoops=False)
        dof = net.dof
        hits += global_test(net.squares, dof, 0.001).verdict == Verdict.FAIL
    what = f"same bias seen by a global test at 0.001, dof {dof}"
    show(what, "(blind)", hits / runs, runs)


def main() -> None:
    runs = int(sys.argv[1]) if len(sys.argv) > 1 else 1000
    print(f"{'':58}{'nominal':>10}{'simulated':>10}")
    clean_networks(runs)
    power_at_the_detectable_bias(runs)
    large_degrees(runs // 2)
    three_blunders(runs // 4)
    a_tenth_wrong(runs // 10)
    wrong_starts(runs // 10)


if __name__ == "__main__":
    main()
