"""The gross catalogue, simulated by formulas of its own."""

from __future__ import annotations

import math
import time

import numpy as np

from geometry.signature import Kind, Role, setup, signature
from tests.simulations.signature_fields import GRID, Rng, measured, table

GROSS_TRUTHS = (
    Kind.NOTHING,
    Kind.SWAPPED,
    Kind.FEET_AS_METRES,
    Kind.METRES_AS_FEET,
    Kind.NUMBERING,
    Kind.WRONG_BACKSIGHT,
    Kind.WRONG_STATION,
    Kind.WRONG_VALUE,
    Kind.REVERSED,
    Kind.EXCHANGED,
    Kind.ANGLE_SENSE,
)
WITH_MARK = (Kind.WRONG_BACKSIGHT, Kind.WRONG_STATION, Kind.WRONG_VALUE)
WITH_MARK = (Kind.WRONG_BACKSIGHT, Kind.WRONG_STATION, Kind.WRONG_VALUE)


def gross_case(truth: Kind, rng: Rng) -> tuple[bool, bool, float]:
    """Whether the blunder was read, whether the mark was, and the seconds taken."""
    marks = GRID + rng.uniform(-120, 120, (6, 2))
    at = setup(marks[0], marks[1], role=Role.STAKED)
    points = GRID + rng.uniform(-80, 80, (25, 2))
    mark = int(rng.integers(2, 6))
    moved = gross_field(truth, points, marks, mark)
    shots = measured(points, at, np.zeros_like(points), 0.05, rng) + moved
    start = time.perf_counter()
    read = signature(points, shots, [at], marks=marks, from_grid_origin=True, rng=rng)
    took = time.perf_counter() - start
    named = read.causes[0].mark == mark if read.causes else False
    return read.kind is truth, named, took


def gross_field(truth: Kind, p: np.ndarray, marks: np.ndarray, mark: int) -> np.ndarray:
    """Where stakes go, worked out here apart from the code under test."""

    def azimuth(a: np.ndarray, b: np.ndarray) -> float:
        return float(np.arctan2(*(b - a)))

    def polar(a: np.ndarray, z: np.ndarray, length: np.ndarray) -> np.ndarray:
        return a + length[:, None] * np.column_stack([np.sin(z), np.cos(z)])

    s, b, m = marks[0], marks[1], marks[mark]
    d = p - s
    z, length = np.arctan2(d[:, 0], d[:, 1]), np.hypot(*d.T)
    back = azimuth(s, b)
    if truth is Kind.SWAPPED:
        return p[:, ::-1] - p
    if truth is Kind.FEET_AS_METRES:
        return p / 0.3048 - p
    if truth is Kind.METRES_AS_FEET:
        return p * 0.3048 - p
    if truth is Kind.NUMBERING:
        return np.roll(p, 1, axis=0) - p
    if truth is Kind.WRONG_BACKSIGHT:
        return polar(s, z - back + azimuth(s, m), length) - p
    if truth is Kind.WRONG_STATION:
        return polar(m, z - back + azimuth(m, b), length) - p
    if truth is Kind.REVERSED:
        return polar(s, z + math.pi, length) - p
    if truth is Kind.EXCHANGED:
        return polar(b, z - back + azimuth(b, s), length) - p
    if truth is Kind.ANGLE_SENSE:
        return polar(s, 2 * back - z, length) - p
    if truth is Kind.WRONG_VALUE:
        keyed = p - m
        turn = np.arctan2(keyed[:, 0], keyed[:, 1]) - azimuth(m, b) + back
        return polar(s, turn, np.hypot(*keyed.T)) - p
    return np.zeros_like(p)


def report_gross(runs: int, rng: Rng) -> None:
    print("\nGross catalogue, 25 shots, 5 % wild, 6 marks: share read, mark named")
    table([("blunder", "read", "mark", "ms")])
    for truth in GROSS_TRUTHS:
        cases = [gross_case(truth, rng) for _ in range(runs)]
        read, named, took = (np.mean([c[i] for c in cases]) for i in range(3))
        mark = f"{named:.3f}" if truth in WITH_MARK else ""
        table([(truth.value, f"{read:.3f}", mark, f"{1000 * took:.1f}")])
