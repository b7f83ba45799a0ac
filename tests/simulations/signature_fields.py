"""Simulated setups: points, one cause, the setup's own effects, noise, wild shots."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from geometry.signature import Kind, Setup, Signature
from geometry.verdicts import Verdict

SECOND = math.radians(1 / 3600)
GRID = np.array([610_000.0, 1_240_000.0])
BACKSIGHT = GRID + np.array([30.0, 80.0])
GEOMETRIES = {
    "all round": (10.0, 90.0, 180.0),
    "one side": (10.0, 90.0, 20.0),
    "far cluster": (70.0, 90.0, 3.5),
}
Rng = np.random.Generator


@dataclass(frozen=True)
class Case:
    """What was simulated, and what was read from it."""

    truth: Kind
    read: Signature


def stakes(geometry: str, count: int, rng: Rng) -> np.ndarray:
    """Points about the setup at GRID."""
    near, far, half = GEOMETRIES[geometry]
    length = rng.uniform(near, far, count)
    azimuth = math.radians(40) + np.radians(rng.uniform(-half, half, count))
    return GRID + length[:, None] * np.column_stack([np.sin(azimuth), np.cos(azimuth)])


def sign(rng: Rng) -> float:
    return float(rng.choice([-1.0, 1.0]))


def field(truth: Kind, d: np.ndarray, points: np.ndarray, rng: Rng) -> np.ndarray:
    """The displacement of one cause; `d` is from the setup."""
    length = np.hypot(d[:, 0], d[:, 1])[:, None]
    right = np.column_stack([d[:, 1], -d[:, 0]])
    if truth is Kind.SHIFT:
        azimuth = rng.uniform(0, 2 * math.pi)
        size = rng.uniform(0.02, 0.06)
        return np.tile(
            size * np.array([math.sin(azimuth), math.cos(azimuth)]), (len(d), 1)
        )
    if truth is Kind.ROTATION:
        return sign(rng) * rng.uniform(90, 300) * SECOND * right
    if truth is Kind.PRISM:
        return sign(rng) * rng.choice([0.0175, 0.030, 0.034, 0.040]) * d / length
    if truth is Kind.SCALE:
        return sign(rng) * rng.uniform(200, 600) * 1e-6 * d
    if truth is Kind.US_FOOT:
        return 2e-6 * points
    return np.zeros_like(d)


def measured(
    points: np.ndarray, at: Setup, displaced: np.ndarray, wild: float, rng: Rng
) -> np.ndarray:
    """Shots with the setup's own random effects, noise, and a share of wild ones."""
    d = points - at.at
    length = np.hypot(d[:, 0], d[:, 1])
    along = d / length[:, None]
    across = np.column_stack([along[:, 1], -along[:, 0]])
    n = len(points)
    shots = points + displaced + rng.normal(0, at.control_m, 2)
    shots += across * (length * rng.normal(0, at.orientation_rad))[:, None]
    radial = np.hypot(at.distance_m, at.distance_ppm * 1e-6 * length)
    shots += along * (radial * rng.normal(size=n))[:, None]
    shots += across * (at.direction_rad * length * rng.normal(size=n))[:, None]
    shots += rng.normal(0, 0.003, (n, 2))
    lost = rng.random(n) < wild
    shots[lost] += rng.normal(0, 0.08, (int(lost.sum()), 2))
    return shots


def right(case: Case) -> bool:
    return case.read.kind is case.truth


def held(case: Case) -> bool:
    """The true cause is the answer or in the set of the answer."""
    kinds = [c.kind for c in case.read.causes] or [Kind.NOTHING]
    return case.truth in kinds


def share(flags: Iterable[bool]) -> str:
    """The part that is true, as a cell."""
    return f"{np.mean(list(flags)):.3f}"


def ambiguous(case: Case) -> bool:
    return case.read.verdict is Verdict.AMBIGUOUS


def table(rows: Iterable[tuple[str, ...]]) -> None:
    for row in rows:
        print(
            "".join(f"{cell:>14}" if i else f"{cell:30}" for i, cell in enumerate(row))
        )
