"""Best setup, sight lines and occupied pairs, beside plain numpy and shapely.

Run `python -m tests.benchmarks.geometry_precision`.
"""

from __future__ import annotations

import resource
import time
from collections.abc import Callable

import numpy as np
import shapely

from geometry.precision import (
    TotalStation,
    best_occupied,
    best_setup,
    grid,
    obstacle,
    visibility,
)


def timed(work: Callable[[], object], repeats: int = 3) -> float:
    """Least of a few runs, in seconds."""
    spans = []
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        spans.append(time.perf_counter() - start)
    return min(spans)


def row(what: str, seconds: float, baseline: str, base_s: float, mark: str) -> None:
    memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(
        f"{what:<46} {seconds:8.3f} s   {baseline:<38} {base_s:8.3f} s"
        f"   {seconds / base_s:7.2f}   {memory:6.0f} MB   mark {mark}"
    )


def site(seed: int = 1) -> tuple[np.ndarray, ...]:
    rng = np.random.default_rng(seed)
    places = grid((0, 0), (319, 319), 1.0)[:100_000]
    marks, targets = rng.uniform(0, 315, (30, 2)), rng.uniform(0, 315, (100, 2))
    corners = np.array([(0, 0), (12, 2), (10, 12), (-2, 9)])
    sheds = rng.uniform(20, 290, (30, 1, 2)) + corners
    return places, marks, targets, sheds


def setups(places: np.ndarray, marks: np.ndarray, targets: np.ndarray) -> None:
    blocks = np.tile(9e-6 * np.eye(2), (12, 1, 1))
    station = TotalStation()

    def distances() -> None:
        for i in range(0, len(places), 4096):
            gap = targets[None] - places[i : i + 4096, None]
            np.sqrt(gap[..., 0] ** 2 + gap[..., 1] ** 2).max(axis=1)

    row(
        "best setup, 10^5 places x 12 marks x 100 targets",
        timed(lambda: best_setup(places, marks[:12], targets, 0.01, station, blocks)),
        "numpy: only all distances to targets",
        timed(distances),
        "1.4 s",
    )


def sights(places: np.ndarray, marks: np.ndarray, sheds: np.ndarray) -> None:
    things = [obstacle(shed, 5.0) for shed in sheds]
    tree = shapely.STRtree([shapely.Polygon(t.outline) for t in things])
    share = 60  # the baseline is slow: a sixtieth of the lines, times sixty

    def lines() -> None:
        some = np.repeat(places[::share], len(marks), axis=0)
        ends = np.tile(marks, (len(some) // len(marks), 1))
        tree.query(
            shapely.linestrings(np.stack([some, ends], axis=1)), predicate="intersects"
        )

    seconds = timed(lambda: visibility(places, marks, things), 2)
    base = timed(lines, 1) * share
    row(
        "3 x 10^6 sight lines, 30 obstacles",
        seconds,
        "shapely tree over lines (scaled up)",
        base,
        "2.0 s",
    )


def occupied(targets: np.ndarray) -> None:
    marks = np.random.default_rng(2).uniform(0, 500, (200, 2))
    blocks = np.tile(9e-6 * np.eye(2), (200, 1, 1))
    pair = np.random.default_rng(3).normal(size=(398_000, 2, 2))
    row(
        "39,800 stations and backsights x 10 targets",
        timed(lambda: best_occupied(marks, targets[:10], 0.01, TotalStation(), blocks)),
        "numpy: eigenvalues of 398,000 2 by 2",
        timed(lambda: np.linalg.eigvalsh(pair), 1),
        "0.60 s",
    )


if __name__ == "__main__":
    places, marks, targets, sheds = site()
    setups(places, marks, targets)
    sights(places, marks, sheds)
    occupied(targets)
