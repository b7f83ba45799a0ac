"""Kill sets of ten thousand marks, beside plain numpy and set-by-set search.

Run `python -m tests.benchmarks.geometry_survive`.
"""

from __future__ import annotations

import resource
import time
from collections.abc import Callable

import numpy as np
from scipy.spatial import cKDTree

from geometry.survive import (
    Routes,
    Stand,
    best_extra,
    group_losses,
    kill_sets,
    protect,
    routes,
    stand,
    survivability,
)

OFFSETS = [
    *((x, y) for x in (-6, -3, 27, 30) for y in (0, 9, 18)),
    *((x, y) for y in (-6, -3, 21, 24) for x in (0, 12, 24)),
]


def town(count: int, seed: int = 0) -> Stand:
    """Buildings 60 m apart, 24 stakes and one control mark each."""
    rng = np.random.default_rng(seed)
    side = int(np.ceil((count // 25) ** 0.5))
    xy, control = [], []
    for b in range(count // 25):
        corner = 60.0 * np.array([b % side, b // side])
        xy += [corner + p for p in OFFSETS] + [corner + rng.uniform(-15, 45, 2)]
        control += [False] * 24 + [True]
    noisy = np.array(xy) + rng.normal(0, 0.003, (len(xy), 2))
    return stand(noisy, 9e-6 * np.eye(2), 0.02, control=control)


def timed(work: Callable) -> tuple:
    start = time.perf_counter()
    answer = work()
    return answer, time.perf_counter() - start


def nearest_only(marks: Stand) -> None:
    """What any method must do first: neighbours, and the distances of all pairs."""
    near = cKDTree(marks.xy).query(marks.xy, k=16)[1][:, 1:]
    first, second = np.triu_indices(15, 1)
    gap = marks.xy[near[:, first]] - marks.xy[near[:, second]]
    np.hypot(gap[..., 0], gap[..., 1]).sum()


def one_by_one(found: Routes, rows: int) -> None:
    for row in range(rows):
        near = found.near[row]
        works = np.flatnonzero(found.works[row])
        kill_sets(
            [(int(near[found.first[p]]), int(near[found.second[p]])) for p in works], 2
        )


def row(what: str, seconds: float, base: float, mark: str) -> None:
    memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(
        f"{what:<52} {seconds:8.3f} s {base:9.3f} s {seconds / base:8.2f}"
        f"  {memory:6.0f} MB   {mark}"
    )


def run() -> None:
    print(f"{'what':<52} {'time':>10} {'baseline':>11} {'ratio':>8}     peak   mark")
    for count, mark in ((1_000, "0.15 s"), (10_000, "1.8 s")):
        marks = town(count)
        _, base = timed(lambda m=marks: nearest_only(m))
        found, first = timed(lambda m=marks: routes(m))
        _, second = timed(lambda f=found: survivability(f))
        tried = (found.near[:, found.first] >= 0) & (found.near[:, found.second] >= 0)
        row(
            f"{count} marks, {tried.sum()} pairs: ways and kill sets",
            first + second,
            base,
            mark,
        )
        _, slow = timed(lambda f=found: one_by_one(f, 200))
        slow *= len(found.targets) / 200
        row("  of this, kill sets (baseline: set by set)", second, slow, "0.6-1.3 s")
        road = {"haul road": np.flatnonzero(marks.xy[:, 0] < 50).tolist()}
        _, seconds = timed(lambda f=found, r=road: group_losses(f, r))
        row("  loss of everything along a road", seconds, base, "")
    print("baseline of the first rows: tree, neighbours and distances of all pairs")
    found = routes(town(75), nearest=6, control=1)
    answer, exact = timed(lambda: protect(found, exact=True))
    rough, greedy = timed(lambda: protect(found, exact=False))
    what = f"protect 75 marks: {len(answer.marks)} exact, {len(rough.marks)} greedy"
    row(what + " (baseline)", exact, greedy, "")
    found = routes(town(1000))
    rough, greedy = timed(lambda: protect(found, exact=False))
    row(f"protect 1000 marks: {len(rough.marks)} greedy", greedy, base, "")
    rng = np.random.default_rng(1)
    thin = stand(rng.uniform(0, 250, (120, 2)), 9e-6 * np.eye(2), 0.02)
    found = routes(thin, nearest=6)
    now = survivability(found)
    spots = rng.uniform(0, 250, (100, 2))
    good, extra = timed(
        lambda: best_extra(thin, found, now, spots, 9e-6 * np.eye(2), wanted=3)
    )
    what = f"100 places for one extra mark: {len(good)} help"
    row(what + " (baseline: tree of 10^4)", extra, base, "")


if __name__ == "__main__":
    run()
