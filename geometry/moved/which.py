"""Which of the recorded marks moved, from new measurements between and around them."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence

import numpy as np
from numpy.typing import ArrayLike

from geometry.adjust.levels import adjust_levels
from geometry.adjust.network import adjust_network
from geometry.adjust.observations import (
    Coordinates,
    HeightDifference,
    Heights,
    PlaneObservation,
)
from geometry.adjust.report import LevelAdjustment, NetworkAdjustment
from geometry.adjust.rows import picked, weight_of
from geometry.checked import Array
from geometry.moved.answer import MovedAnswer
from geometry.moved.conclude import conclude
from geometry.moved.evidence import Evidence
from geometry.moved.tell import tell_between_marks


def which_moved(
    recorded: Coordinates,
    observations: Sequence[PlaneObservation],
    *,
    points: Mapping[str, ArrayLike] | None = None,
    fixed: Collection[str] = (),
    doubt_measurements: bool = True,
    alpha: float = 0.001,
    power: float = 0.80,
    global_alpha: float = 0.05,
    tell_sigma_m: float = 0.003,
) -> MovedAnswer:
    """Which recorded mark is no longer where the record says.

    `recorded` holds the marks with their joint covariance: what they err by together
    must not be spread over them, see `common_and_relative`. `points` gives start
    coordinates of everything else measured, free stations above all. Centring belongs
    in the sigmas, see `allow_for_centring`. A mark is named when its displacement is
    significant at `alpha` over all marks tested, nothing else explains the same, and
    what is left agrees. `tell_sigma_m` is the precision of the distance that would be
    measured next.

    Published: Baarda 1968, Foerstner 1983, Teunissen 2006 (from memory).

    >>> from geometry.adjust import Distance, coordinates
    >>> marks = coordinates("ABCD", [[0, 0], [60, 0], [60, 60], [0, 60]], 0.001)
    >>> d = 60 * 2**0.5
    >>> sides = [Distance("A", "B", 60.0, 0.002), Distance("B", "C", 60.03, 0.002),
    ...          Distance("C", "D", 60.02, 0.002), Distance("D", "A", 60.0, 0.002),
    ...          Distance("A", "C", d + 0.036, 0.002), Distance("B", "D", d, 0.002)]
    >>> answer = which_moved(marks, sides)
    >>> [m.mark for m in answer.moved], answer.mark("A").verdict.value
    (['C'], 'pass')

    Raises what `adjust_network` raises.
    """
    start = dict(points or {})
    start.update(zip(recorded.names, recorded.values_m, strict=True))
    net = adjust_network(
        start, observations, known=[recorded], fixed=fixed, snoops=False,
        alpha=alpha, power=power, global_alpha=global_alpha,
    )  # fmt: skip
    at = [net.number(name) for name in recorded.names]
    off = (net.positions_m[at] - recorded.values_m).ravel()
    evidence = _evidence(
        net, recorded.names, off, recorded.covariance_m2, doubt_measurements
    )
    return conclude(
        evidence, recorded.names, [str(o) for o in observations], alpha, power,
        global_alpha,
        lambda group: tell_between_marks(net, recorded, evidence, group, tell_sigma_m),
    )  # fmt: skip


def which_benchmark_moved(
    recorded: Heights,
    runs: Sequence[HeightDifference],
    *,
    doubt_measurements: bool = True,
    alpha: float = 0.001,
    power: float = 0.80,
    global_alpha: float = 0.05,
    tell_sigma_m: float = 0.002,
) -> MovedAnswer:
    """Which benchmark is no longer at its recorded height; see `which_moved`.

    >>> from geometry.adjust import heights
    >>> marks = heights("ABCD", [10.0, 11.0, 12.0, 13.0], 0.001)
    >>> rise = {"A": 10.0, "B": 11.0, "C": 11.97, "D": 13.0}
    >>> runs = [HeightDifference(a, b, rise[b] - rise[a], 0.001)
    ...         for a in "ABCD" for b in "ABCD" if a < b]
    >>> [(m.mark, round(float(m.move_m[0]), 3))
    ...  for m in which_benchmark_moved(marks, runs).moved]
    [('C', -0.03)]

    Raises what `adjust_levels` raises.
    """
    net = adjust_levels(
        runs, known=[recorded], snoops=False,
        alpha=alpha, power=power, global_alpha=global_alpha,
    )  # fmt: skip
    at = [net.number(name) for name in recorded.names]
    off = net.heights_m[at] - recorded.values_m
    evidence = _evidence(
        net, recorded.names, off, recorded.covariance_m2, doubt_measurements
    )
    return conclude(
        evidence, recorded.names, [str(r) for r in runs], alpha, power, global_alpha,
        lambda group: tell_between_marks(net, recorded, evidence, group, tell_sigma_m),
    )  # fmt: skip


def _evidence(
    net: NetworkAdjustment | LevelAdjustment,
    names: Sequence[str],
    off: Array,
    covariance: Array,
    doubt_measurements: bool,
) -> Evidence:
    """C'v and C'RC of marks and measurements; for marks C is the whitened prior."""
    weight = weight_of(covariance, "the recorded marks")
    columns = net.solution.columns[[net.number(n) for n in names]].ravel()
    q = net.solution.columns_of_inverse(columns)
    strength = weight - weight @ picked(q, columns) @ weight
    width = len(off) // len(names)
    prior = [
        float(np.linalg.eigvalsh(weight[i : i + width, i : i + width])[-1])
        for i in range(0, len(off), width)
    ]
    measured = net.measurements
    count = len(measured) if doubt_measurements else 0
    rows = net.rows

    def column(number: int) -> Array:
        pulled = net.solution.factor.solve(rows[number].toarray()[0])
        found: Array = -(rows @ pulled)
        found[number] += 1.0
        return found

    return Evidence(
        width=width,
        pull=weight @ off,
        strength=0.5 * (strength + strength.T),
        prior=np.array(prior),
        residual=(measured.residual / measured.sigma)[:count],
        redundancy=measured.redundancy[:count],
        shared=-(rows @ q @ weight)[:count],
        squares=net.squares,
        dof=net.dof,
        column_of=column if doubt_measurements else None,
    )
