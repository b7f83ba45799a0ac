"""Ways back for one lost mark of a job of a thousand, beside a bare nearest search.

Run `python -m tests.benchmarks.geometry_ways`.
"""

from __future__ import annotations

import resource
import time

import numpy as np
from scipy.spatial import cKDTree

from geometry.precision import obstacle
from geometry.ways import Sort, Survivor, Target, ways_back

OFFSETS = [
    *((x, y) for x in (-6, -3, 27, 30) for y in (0, 9, 18)),
    *((x, y) for y in (-6, -3, 21, 24) for x in (0, 12, 24)),
]


def job(seed: int = 0) -> list[Survivor]:
    """Forty buildings with 24 offset stakes each, and twenty control marks."""
    rng = np.random.default_rng(seed)
    marks = [
        Survivor(
            f"CP{i}",
            tuple(rng.uniform(0, 400, 2)),
            4e-6 * np.eye(2),
            Sort.CONTROL,
            elevation_m=100.0 + i / 10,
        )
        for i in range(20)
    ]
    for b in range(41):
        corner = rng.uniform(20, 380, 2)
        marks += [
            Survivor(
                f"{b}-{k}", tuple(corner + p), 9e-6 * np.eye(2), occupiable=k % 3 == 0
            )
            for k, p in enumerate(OFFSETS)
        ]
    return marks[:1000]


def run() -> None:
    marks = job()
    rng = np.random.default_rng(1)
    shed = np.array([(0, 0), (8, 0), (8, 8), (0, 8)])
    things = [obstacle(c + shed) for c in rng.uniform(0, 400, (30, 2))]
    lost = rng.choice(np.arange(20, 1000), 60, replace=False)
    xy = np.array([m.position for m in marks])
    start = time.perf_counter()
    for i in lost:
        cKDTree(xy).query(xy[i], 12)
    base = (time.perf_counter() - start) / len(lost)
    print(
        "what                         median s    worst s   baseline s   ratio   mark"
    )
    for name, obstacles in (("open site", ()), ("30 obstacles", things)):
        spans, offered = [], []
        for i in lost:
            target = Target(marks[i].id, marks[i].position, 0.02, elevation_m=101.0)
            rest = marks[:i] + marks[i + 1 :]
            start = time.perf_counter()
            ways = ways_back(target, rest, obstacles=obstacles)
            spans.append(time.perf_counter() - start)
            offered.append(sum(w.offered for w in ways))
        median = float(np.median(spans))
        print(
            f"one lost mark, {name:<13} {median:8.4f} {max(spans):10.4f} {base:12.5f}"
            f" {median / base:7.0f}   0.050 s"
        )
        print(f"  ways offered per mark: {min(offered)} to {max(offered)}")
    print("baseline: a tree of all marks and its twelve nearest")
    memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"peak memory {memory:.0f} MB")


if __name__ == "__main__":
    run()
