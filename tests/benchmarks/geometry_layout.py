"""How fast one building is planned and its checks are ranked.

Run with `python -m tests.benchmarks.geometry_layout`. The baseline is one mitred
buffer by shapely of the same footprint.
"""

from __future__ import annotations

import resource
import time
from collections.abc import Callable

import shapely

from geometry.layout import minimal_set, plan_offsets, rank_checks, robust_set

HOUSE = [(0.0, 0.0), (24.0, 0.0), (24.0, 10.0), (12.0, 10.0), (12.0, 18.0), (0.0, 18.0)]


def seconds(work: Callable[[], object], rounds: int = 50) -> float:
    """The best of a few rounds."""
    best = float("inf")
    for _ in range(rounds):
        start = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - start)
    return best


def main() -> None:
    polygon = shapely.Polygon(HOUSE)
    base = seconds(lambda: polygon.buffer(3.6, join_style="mitre"))
    plan = plan_offsets(HOUSE, offset_m=2.0, step_m=1.0, depth_m=3.0)
    places = [(s.e_m, s.n_m) for s in plan.stakes]
    rows = [
        (
            "one building planned",
            seconds(lambda: plan_offsets(HOUSE, offset_m=2.0, step_m=1.0, depth_m=3.0)),
            "5 ms",
        ),
        ("its fewest stakes", seconds(lambda: minimal_set(plan)), ""),
        ("its stakes with spares", seconds(lambda: robust_set(plan)), ""),
        (
            "30 of 66 checks ranked",
            seconds(lambda: rank_checks(places, count=30), 3),
            "0.7 s",
        ),
    ]
    print("| what | ms | one shapely buffer, ms | ratio | mark to beat |")
    print("|---|---|---|---|---|")
    for what, took, mark in rows:
        ratio = took / base
        print(
            f"| {what} | {took * 1e3:.2f} | {base * 1e3:.3f} | {ratio:.0f} | {mark} |"
        )
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss // 1024
    print(f"\nPeak memory {peak} MiB.")


if __name__ == "__main__":
    main()
