"""How long large adjustments take, beside a bare sparse solve of the same system.

Run with `python -m tests.benchmarks.geometry_adjust`. Dense blocks of a few hundred
gain nothing from threads and lose much where cores are shared, so it runs itself with
one thread unless OMP_NUM_THREADS says otherwise.
"""

from __future__ import annotations

import math
import os
import resource
import sys
import time
from collections.abc import Callable

import numpy as np
import scipy.sparse
from scipy.sparse.linalg import splu
from scipy.spatial import cKDTree

from geometry.adjust import (
    Direction,
    Distance,
    HeightDifference,
    adjust_levels,
    adjust_network,
    coordinates,
)
from geometry.adjust.iterate import estimate, layout, leverages
from geometry.adjust.plane import plane_model
from geometry.adjust.rows import normal
from geometry.moved import which_moved


def seconds(work: Callable[[], object]) -> tuple[float, object]:
    start = time.perf_counter()
    done = work()
    return time.perf_counter() - start, done


def bare_solve(matrix: scipy.sparse.csr_matrix, right: np.ndarray, times: int) -> None:
    """What any method must do at least: one sparse factor and solve for each step."""
    for _ in range(times):
        splu(
            scipy.sparse.csc_matrix(matrix),
            permc_spec="MMD_AT_PLUS_A",
            options={"SymmetricMode": True},
            diag_pivot_thresh=0.0,
        ).solve(right)


def mesh(side: int) -> tuple[dict[str, np.ndarray], list[Distance | Direction], list]:
    """`side` squared points 30 m apart, each measuring its six nearest."""
    rng = np.random.default_rng(1)
    grid = np.stack(np.meshgrid(np.arange(side), np.arange(side)), -1).reshape(-1, 2)
    true = 30.0 * grid + rng.normal(0, 3, (side * side, 2))
    _, near = cKDTree(true).query(true, 7)
    booked: list[Distance | Direction] = []
    for i, row in enumerate(near):
        for j in row[1:]:
            d = true[j] - true[i]
            length = math.hypot(*d) + rng.normal(0, 0.002)
            reading = math.atan2(*d) - 1 + rng.normal(0, 3e-5)
            booked.append(Distance(str(i), str(j), length, 0.002))
            booked.append(Direction(str(i), str(j), reading, 3e-5))
    held = [str(i) for i in (0, side - 1, side * side - 1, side * side - side)]
    start = {str(i): p for i, p in enumerate(true + rng.normal(0, 0.5, true.shape))}
    return start | {n: true[int(n)] for n in held}, booked, held


def network(side: int) -> None:
    start, booked, held = mesh(side)
    model = plane_model(start, booked, (), frozenset(held))
    first = model.unknowns(model.start)
    ones = np.ones(len(booked))
    planned, order = seconds(lambda: layout(model, first))
    solved, found = seconds(lambda: estimate(model, first, order, ones))
    shares, h = seconds(lambda: leverages(found.rows, found.factor))
    matrix, right = normal(found.rows, model.count, ones)
    bare, _ = seconds(lambda: bare_solve(matrix, right, found.steps))
    widest = max(len(front.places) for front in order.fronts)
    what = f"{side * side:,} points, {len(booked):,} measured"
    mark = {100: "3.5 s", 32: ""}.get(side, "")
    show(f"{what}: solve, {found.steps} steps", planned + solved, "splu", bare, mark)
    mark = {100: "5-10 s", 70: "1.8-2.7 s", 32: "0.18-0.9 s"}.get(side, "")
    show("  redundancy numbers", shares, "splu", bare, mark)
    off = abs(float((1 - h).sum()) - (len(booked) - model.count))
    print(f"    widest block {widest}, sum of redundancy off by {off:.0e}")
    whole, _ = seconds(lambda: adjust_network(start, booked, fixed=held))
    show("  everything, by the public function", whole, "splu", bare)


def hub() -> None:
    """One setup that sees thousands of points no other measurement reaches."""
    start, booked, held = mesh(20)
    rng = np.random.default_rng(2)
    for k in range(4000):
        d = rng.uniform(-300, 300, 2)
        start[f"L{k}"] = start["210"] + d
        booked.append(Distance("210", f"L{k}", math.hypot(*d), 0.002))
        booked.append(Direction("210", f"L{k}", math.atan2(*d) - 1, 3e-5))
    whole, net = seconds(lambda: adjust_network(start, booked, fixed=held))
    show("400 points and 4,000 side shots", whole)
    print(f"    unchecked points found: {len(net.unchecked):,}")


def levels() -> None:
    rng = np.random.default_rng(3)
    side = 100
    z = rng.uniform(0, 30, side * side)
    runs = []
    for i in range(side * side):
        for j in (i + 1, i + side):
            if j < side * side and (j != i + 1 or j % side):
                rise = z[j] - z[i] + rng.normal(0, 0.001)
                runs.append(HeightDifference(str(i), str(j), rise, 0.001))
    whole, net = seconds(lambda: adjust_levels(runs, fixed={"0": z[0]}))
    a = net.rows
    bare, _ = seconds(lambda: bare_solve((a.T @ a), np.ones(a.shape[1]), 1))
    what = f"{side * side:,} benchmarks, {len(runs):,} runs: everything"
    show(what, whole, "splu, once", bare, "3.0 s")


def moved() -> None:
    start, booked, _ = mesh(8)
    marks = coordinates(list(start), list(start.values()), 0.5)
    took, _ = seconds(lambda: which_moved(marks, booked))
    show(f"which of {len(start)} marks moved, {len(booked)} measured", took)


def show(
    what: str, took: float, base: str = "", against: float | None = None, mark: str = ""
) -> None:
    ratio = f"{base:12}{against:9.3f}{took / against:8.1f}" if against else " " * 29
    print(f"{what:48}{took:9.3f}  {ratio}  {mark}")


def main() -> None:
    if "OMP_NUM_THREADS" not in os.environ:
        # The libraries read it once, when they are loaded.
        os.environ["OMP_NUM_THREADS"] = "1"
        os.execv(sys.executable, [sys.executable, "-m", __spec__.name])
    print(f"OMP_NUM_THREADS {os.environ['OMP_NUM_THREADS']}")
    print(f"{'what':48}{'seconds':>9}  {'baseline':12}{'seconds':>9}{'ratio':>8}  mark")
    for side in (10, 32, 70, 100):
        network(side)
    hub()
    levels()
    moved()
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"peak memory {peak:.0f} MiB")


if __name__ == "__main__":
    main()
