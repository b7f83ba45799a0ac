"""How fast points go to and from an alignment.

Run with `python -m tests.benchmarks.geometry_alignment`. The baseline beside each is
raw numpy or scipy doing the least that any method must do.
"""

from __future__ import annotations

import resource
import time
from collections.abc import Callable

import numpy as np
from scipy.spatial import cKDTree

from geometry.alignment import (
    alignment,
    arc,
    feet_of,
    place,
    spiral_element,
    stations_and_offsets,
    straight,
)

COUNT = 100_000


def seconds(work: Callable[[], object], rounds: int = 3) -> float:
    """The best of a few rounds."""
    best = float("inf")
    for _ in range(rounds):
        start = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - start)
    return best


def main() -> None:
    pieces = [
        straight(300.0),
        spiral_element(60.0, None, 150.0),
        arc(200.0, 150.0),
        spiral_element(60.0, 150.0, None),
        straight(400.0),
        arc(350.0, -300.0),
        straight(630.0),
    ]
    line = alignment((6.2e5, 4.2e6), 0.7, pieces)
    rng = np.random.default_rng(1)
    distance = rng.uniform(0, line.end_m, COUNT)
    offset = rng.uniform(-60, 60, COUNT)
    points = place(line, distance, offset).points
    samples = place(line, np.arange(0, line.end_m, 5.0)).points
    trig = seconds(lambda: (np.sin(distance), np.cos(distance)))
    nearest = seconds(lambda: cKDTree(samples).query(points))
    forward = seconds(lambda: place(line, distance, offset))
    inverse = seconds(lambda: stations_and_offsets(line, points))
    one = seconds(lambda: feet_of(line, points[0]), 20)
    on = stations_and_offsets(line, points)
    error = max(
        float(np.abs(on.distance_m - distance).max()),
        float(np.abs(on.offset_m - offset).max()),
    )
    rows = [
        (f"place {COUNT:,} points", forward, "sin and cos of each", trig, "0.10 s"),
        (f"inverse of {COUNT:,}", inverse, "nearest sample only", nearest, "0.60 s"),
        ("all feet of one point", one, "", None, ""),
    ]
    print(
        f"{'what':28}{'seconds':>10}  {'baseline':24}{'seconds':>10}{'ratio':>8}  mark"
    )
    for what, took, base, base_took, mark in rows:
        ratio = f"{took / base_took:8.1f}" if base_took else " " * 8
        shown = f"{base_took:10.4f}" if base_took else " " * 10
        print(f"{what:28}{took:10.4f}  {base:24}{shown}{ratio}  {mark}")
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"largest error there and back {error:.1e} m, peak memory {peak:.0f} MiB")


if __name__ == "__main__":
    main()
