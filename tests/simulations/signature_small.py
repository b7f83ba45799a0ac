"""Small causes, false alarms, wild shots, and the cure of ambiguous answers."""

from __future__ import annotations

import math
import time
from collections import Counter

import numpy as np

from geometry.signature import Kind, Setup, setup, signature
from geometry.verdicts import Verdict
from tests.simulations.signature_fields import (
    BACKSIGHT,
    GEOMETRIES,
    GRID,
    Case,
    Rng,
    ambiguous,
    field,
    held,
    measured,
    right,
    share,
    stakes,
    table,
)

SMALL = (
    Kind.NOTHING,
    Kind.SHIFT,
    Kind.ROTATION,
    Kind.PRISM,
    Kind.SCALE,
    Kind.US_FOOT,
)


def small_cases(geometry: str, count: int, runs: int, rng: Rng) -> list[Case]:
    at = setup(GRID, BACKSIGHT)
    cases = []
    for truth in (*SMALL, None):
        for _ in range(runs):
            points = stakes(geometry, count, rng)
            kind = truth or Kind.NOTHING
            moved = field(kind, points - at.at, points, rng)
            # the last class is many wild shots and no cause at all
            shots = measured(points, at, moved, 0.15 if truth is None else 0.03, rng)
            read = signature(points, shots, [at], from_grid_origin=True, rng=rng)
            cases.append(Case(kind, read))
    return cases


def report_small(runs: int, rng: Rng) -> None:
    print("\nSmall causes: share right; true cause in the answer; ambiguous; of wrong")
    print("answers, how many were flagged ambiguous")
    table(
        [("geometry, shots", "right", "in answer", "ambiguous", "wrong: flagged", "ms")]
    )
    confusion: dict[str, Counter[str]] = {}
    for geometry in GEOMETRIES:
        for count in (12, 60, 200):
            start = time.perf_counter()
            cases = small_cases(geometry, count, runs, rng)
            ms = 1000 * (time.perf_counter() - start) / len(cases)
            wrong = [c for c in cases if not right(c)]
            flagged = [c for c in wrong if c.read.verdict is Verdict.AMBIGUOUS]
            name = f"{geometry}, {count}"
            table(
                [
                    (
                        name,
                        share(right(c) for c in cases),
                        share(held(c) for c in cases),
                        share(ambiguous(c) for c in cases),
                        f"{len(flagged)}/{len(wrong)}",
                        f"{ms:.1f}",
                    )
                ]
            )
            confusion[name] = Counter(
                f"{c.truth.value} -> {c.read.kind.value}" for c in wrong
            )
    for name, counts in confusion.items():
        shown = ", ".join(
            f"{what} {100 * n / runs:.1f} %" for what, n in counts.most_common(4)
        )
        print(f"  {name}: {shown or 'none'}")


def report_false_alarms(runs: int, rng: Rng) -> None:
    print(
        "\nFalse alarms of honest shots: anything claimed, however small (10 x runs);"
    )
    print("the last row leaves the setup's random effects out of the model")
    at = setup(GRID, BACKSIGHT)
    bare = setup(GRID, BACKSIGHT, control_m=0.0, orientation_rad=0.0)
    for count, model, many in (
        (12, at, 10),
        (25, at, 10),
        (200, at, 10),
        (200, bare, 1),
    ):
        alarms = 0
        for _ in range(many * runs):
            points = stakes("all round", count, rng)
            shots = measured(points, at, np.zeros_like(points), 0.0, rng)
            read = signature(points, shots, [model], tolerance_m=1e-6, rng=rng)
            alarms += read.verdict is not Verdict.PASS
        name = "with" if model is at else "without"
        print(f"  {count:4} shots, {name:8} {alarms / (many * runs):.4f}")


def report_wild(runs: int, rng: Rng) -> None:
    print("\nHonest sets in which at least one shot is called wild (nominal 0.01)")
    at = setup(GRID, BACKSIGHT)
    for count in (12, 60, 200):
        called = 0
        for _ in range(runs):
            points = stakes("all round", count, rng)
            shots = measured(points, at, np.zeros_like(points), 0.0, rng)
            called += signature(points, shots, [at], rng=rng).wild.size > 0
        print(f"  {count:4} shots {called / runs:.4f}")


def report_cure(runs: int, rng: Rng) -> None:
    print("\nAmbiguous answers of a far cluster of 12, and what the next shot makes of")
    print("them: one shot, or that one and a second where the new answer asks for it")
    at = setup(GRID, BACKSIGHT)
    azimuth = np.arange(8) * (math.pi / 4)
    unit = np.column_stack([np.sin(azimuth), np.cos(azimuth)])
    ring = np.vstack([GRID + r * unit for r in (10.0, 30.0, 80.0)])
    table([("cause", "ambiguous", "set held it", "1 shot: right", "2 shots: right")])
    for truth in (Kind.SHIFT, Kind.ROTATION, Kind.PRISM, Kind.SCALE):
        outcome = [cured(truth, at, ring, rng) for _ in range(runs)]
        first = [o for o in outcome if o is not None]
        cells = [f"{np.mean([o[i] for o in first]):.3f}" for i in range(3)]
        table([(truth.value, f"{len(first) / runs:.3f}", *cells)])


def cured(
    truth: Kind, at: Setup, ring: np.ndarray, rng: Rng
) -> tuple[bool, bool, bool] | None:
    """None if not ambiguous; else set held it, right after one and two more shots."""
    points = np.vstack([stakes("far cluster", 12, rng), ring])
    moved = field(truth, points - at.at, points, rng)
    shots = measured(points, at, moved, 0.0, rng)
    rows = list(range(12))
    answers = []
    for _ in range(3):
        read = signature(points[rows], shots[rows], [at], candidates=ring, rng=rng)
        answers.append(Case(truth, read))
        if read.next_shot is None:
            break
        rows.append(12 + int(read.next_shot.candidate or 0))
    if len(answers) == 1:
        return None
    return held(answers[0]), right(answers[1]), right(answers[-1])
