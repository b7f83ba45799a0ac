"""How fast shots are matched to marks and one setup's signature is read.

Run with `python -m tests.benchmarks.geometry_match`. The baseline beside each is the
least work in raw Python, numpy or scipy.
"""

from __future__ import annotations

import resource
import time
from collections.abc import Callable

import numpy as np
from scipy.spatial import cKDTree

from geometry.match import fit_similarity, match_shots, nearest_marks
from geometry.signature import setup, signature

COUNT = 100_000


def seconds(work: Callable[[], object], rounds: int = 3) -> float:
    """The best of a few rounds."""
    best = float("inf")
    for _ in range(rounds):
        start = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - start)
    return best


Row = tuple[str, float, str, float, str]


def signatures(rng: np.random.Generator) -> list[Row]:
    """One setup with a prism constant, twelve control marks in reach."""
    marks = rng.uniform(-150, 150, (12, 2))
    at = setup(marks[0], marks[1])
    rows: list[Row] = []
    for count in (25, 200):
        plan = rng.uniform(-90, 90, (count, 2))
        d = plan - at.at
        shots = plan + 0.03 * d / np.hypot(*d.T)[:, None]
        shots += rng.normal(0, 0.004, plan.shape)
        design = np.column_stack([np.ones(count), d])
        took = seconds(
            lambda a=plan, b=shots: signature(a, b, [at], marks=marks, rng=rng), 10
        )
        base = seconds(
            lambda a=design, b=shots - plan: np.linalg.lstsq(a, b, rcond=None), 10
        )
        name = f"one signature, {count} shots"
        rows.append((name, took, "one numpy least squares", base, "0.025 s"))
    return rows


def main() -> None:
    rng = np.random.default_rng(1)
    plan = rng.uniform(0, 20_000, (COUNT, 2)) + np.array([5e5, 4.2e6])
    names = [f"ST-{i:06d}" for i in range(COUNT)]
    order = rng.permutation(COUNT)
    shots = plan[order] + rng.normal(0, 0.01, (COUNT, 2))
    written = [names[i].replace("-", "").lower() for i in order]
    moved = plan * (1 + 30e-6) + rng.normal(0, 0.01, plan.shape)
    moved[rng.random(COUNT) < 0.2] += 5.0

    lookup = {name: i for i, name in enumerate(names)}
    design = np.column_stack([plan, np.ones(COUNT)])
    rows: list[Row] = [
        (
            "match by number and place",
            seconds(lambda: match_shots(names, plan, written, shots)),
            "look up 10^5 in a dict",
            seconds(lambda: [lookup[names[i]] for i in order.tolist()]),
            "0.80 s",
        ),
        (
            "match by place alone",
            seconds(lambda: nearest_marks(plan, shots, near_m=0.5)),
            "scipy nearest, k=1",
            seconds(lambda: cKDTree(plan).query(shots)),
            "0.30 s",
        ),
        (
            "robust similarity",
            seconds(lambda: fit_similarity(plan, moved)),
            "numpy least squares",
            seconds(lambda: np.linalg.lstsq(design, moved, rcond=None)),
            "0.30 s",
        ),
    ]
    rows += signatures(rng)
    print(f"{'what (10^5 points)':28}{'seconds':>10}  {'baseline':24}", end="")
    print(f"{'seconds':>10}{'ratio':>8}  mark")
    for what, took, base, base_took, mark in rows:
        print(f"{what:28}{took:10.4f}  {base:24}{base_took:10.4f}", end="")
        print(f"{took / base_took:8.1f}  {mark}")
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"peak memory {peak:.0f} MiB")


if __name__ == "__main__":
    main()
