"""Simulated error rates of decisions and of predicted ellipses, beside the nominal.

Run `python -m tests.benchmarks.geometry_decide`; seeds are fixed.
"""

from __future__ import annotations

import math
import resource
import time

import numpy as np

from geometry.decide import Rule, decide, decide_radial, repeats, smallest_seen
from geometry.precision import TotalStation, free_station, polar, resected, sighted

COUNT = 1_000_000


def line(what: str, measured: float, nominal: str) -> None:
    print(f"{what:<58} {measured:9.4f}   {nominal}")


def verdicts(rng: np.random.Generator) -> None:
    """Process sigma 4 mm against a tolerance of 6 mm."""
    true = rng.normal(0, 4, COUNT)
    for u in (1.0, 2.0, 3.0, 4.0):
        seen = true + rng.normal(0, u, COUNT)
        for rule in Rule:
            limits = decide(0, 6, u, rule=rule)
            passed = np.abs(seen) <= limits.accept_to
            open_ = ~passed & (np.abs(seen) < limits.reject_from)
            bad = (np.abs(true[passed]) > 6).mean() if passed.any() else 0.0
            line(f"u {u:.0f} mm, {rule}: passed", passed.mean(), "")
            line(f"u {u:.0f} mm, {rule}: undecided", open_.mean(), "")
            line(f"u {u:.0f} mm, {rule}: outside though passed", bad, "")
    at_limit = 6 + rng.normal(0, 2, COUNT)
    limits = decide(0, 6, 2, rule=Rule.GUARDED)
    line(
        "true error on the tolerance, guard band: passed",
        (np.abs(at_limit) <= limits.accept_to).mean(),
        "0.05 at most",
    )
    at_limit = np.array([10.0, 0.0]) + rng.normal(0, 2, (COUNT, 2))
    radial = decide_radial((0, 0), 10, 2, rule=Rule.GUARDED)
    line(
        "the same for a position, T / u = 5",
        (np.hypot(*at_limit.T) <= radial.accept_to).mean(),
        "0.05 at most",
    )


def moves(rng: np.random.Generator) -> None:
    for limit in (None, 0.01):
        move = smallest_seen(0.002, limit=limit)
        seen = move + rng.normal(0, 0.002, COUNT)
        bar = 3.290527 * 0.002 if limit is None else limit
        name = "test at 0.001" if limit is None else "tolerance 10 mm"
        line(f"smallest move seen, {name}: found", (np.abs(seen) > bar).mean(), "0.80")
    count = repeats(4, 6, 2).total or 0
    mean = 4 + rng.normal(0, 2 / math.sqrt(count), COUNT)
    u = 2 / math.sqrt(count)
    limits = decide(0, 6, u, rule=Rule.GUARDED)
    line(
        f"4 mm against 6 mm, u 2 mm, {count} repeats: passed",
        (np.abs(mean) <= limits.accept_to).mean(),
        "0.5 and more",
    )


def coverage(rng: np.random.Generator) -> None:
    """Share of simulated points inside the predicted 95 % ellipse."""
    tool, count = TotalStation(), 200_000
    own = 1e-6 * np.array([[9.0, 2.0], [2.0, 4.0]])
    s, b, t = (np.array(p) for p in ((0.0, 0.0), (80.0, 30.0), (-15.0, 55.0)))
    predicted = polar(
        s, b, t, tool, station_covariance=own, backsight_covariance=own
    ).covariance_m2
    at = s + rng.multivariate_normal((0, 0), own, count)
    at += rng.normal(0, tool.station_centring_m, (count, 2))
    back = b + rng.multivariate_normal((0, 0), own, count) - at
    back += rng.normal(0, tool.backsight_centring_m, (count, 2))
    turn = math.atan2(*t) - math.atan2(*b) + rng.normal(0, tool.angle_sd_rad, count)
    azimuth = np.arctan2(*back.T) + turn
    d = np.hypot(*t) + rng.normal(0, math.sqrt(tool.distance_variance(57.0)), count)
    point = at + np.column_stack([d * np.sin(azimuth), d * np.cos(azimuth)])
    error = point - t + rng.normal(0, tool.target_centring_m, (count, 2))
    line("polar point inside its ellipse", inside(error, predicted), "0.95")
    marks = np.array([(0, 60.0), (55, 10), (-40, -30), (20, -50)])
    free = free_station((3, 4), marks, tool, np.tile(own, (4, 1, 1)))
    expected = sighted(free, t, tool).covariance_m2
    errors, alarms = [], 0
    for _ in range(3000):
        true = marks + rng.multivariate_normal((0, 0), own, 4)
        sight = true - (3, 4) + rng.normal(0, tool.target_centring_m, (4, 2))
        far = np.hypot(*sight.T) + rng.normal(0, 0.002, 4)
        ways = np.arctan2(*sight.T) + rng.normal(0, tool.direction_sd_rad, 4)
        fix = resected(marks, far, ways, tool, np.tile(own, (4, 1, 1)), alpha=0.01)
        alarms += fix.verdict == "fail"
        ray = t - (3, 4)
        a = math.atan2(*ray) + fix.orientation_rad
        a += rng.normal(0, tool.direction_sd_rad)
        e = np.hypot(*ray) + rng.normal(0, 0.002)
        place = fix.station + e * np.array([math.sin(a), math.cos(a)])
        errors.append(place - t + rng.normal(0, tool.target_centring_m, 2))
    line(
        "free-station point inside its ellipse",
        inside(np.array(errors), expected),
        "0.95",
    )
    line("free station of good marks rejected at 0.01", alarms / 3000, "0.01")


def inside(errors: np.ndarray, covariance: np.ndarray) -> float:
    size = np.einsum("ni,ij,nj->n", errors, np.linalg.inv(covariance), errors)
    return float((size <= 5.991465).mean())


if __name__ == "__main__":
    started = time.perf_counter()
    print(f"{'what':<58} {'simulated':>9}   nominal")
    generator = np.random.default_rng(20260117)
    verdicts(generator)
    moves(generator)
    coverage(generator)
    memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(f"{time.perf_counter() - started:.1f} s, peak memory {memory:.0f} MB")
