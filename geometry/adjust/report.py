"""What an adjustment answers: one object for the whole, one for each thing asked about.

Everything a screen needs to explain a figure stands beside it: residual, redundancy,
test, smallest error that would have been seen, verdict and reason.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
import scipy.sparse

from geometry.adjust.measurements import Measurements
from geometry.adjust.reliability import GlobalTest
from geometry.adjust.solution import Solution
from geometry.checked import Array
from geometry.ellipse import Ellipse, ellipse
from geometry.errors import OutOfRange
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True, eq=False)
class KnownReport:
    """A known position or height against the adjusted one.

    `difference_m` (2,) or (1,) is adjusted minus known, `w` its largest test value
    by coordinate, `detectable_m` the smallest change in one coordinate that would be
    seen, None where nothing controls it.
    """

    point: str
    difference_m: Array
    w: float
    detectable_m: float | None
    verdict: Verdict
    reason: str


@dataclass(frozen=True, slots=True, eq=False)
class PointReport:
    """An adjusted point: E, N, its covariance in m² and 95 % ellipse.

    `shift_m` is adjusted minus start. `checked` says whether every measurement that
    holds the point is controlled by others.
    """

    name: str
    position_m: Array
    covariance_m2: Array
    ellipse_95: Ellipse
    shift_m: Array
    fixed: bool
    checked: bool


@dataclass(frozen=True, slots=True)
class HeightReport:
    """An adjusted height with its standard deviation; `checked` as for a point."""

    name: str
    height_m: float
    sigma_m: float
    fixed: bool
    checked: bool


@dataclass(frozen=True, slots=True)
class GroupPrecision:
    """Observed against given precision of one kind of measurement.

    `factor` multiplies the given sigmas; None when the redundancy of the group is
    under 20 and the estimate would be worth little. Information only: nothing is
    scaled by it.
    """

    kind: str
    count: int
    redundancy: float
    factor: float | None


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class Adjustment:
    """What level and plane adjustments have in common.

    Sigmas are taken as known: covariances are not scaled. `sigma0` is the square root
    of the variance factor, for information. `set_aside`, `readmitted` and the sets in
    `ambiguous` are numbers of measurements in the order given. `free_datum` names the
    marks that carry the datum of a free network and `motions` what nothing in it
    holds (shift, turn, scale); both empty otherwise.
    """

    names: tuple[str, ...]
    measurements: Measurements
    known: tuple[KnownReport, ...]
    test: GlobalTest
    dof: int
    squares: float
    sigma0: float | None
    alpha: float
    power: float
    verdict: Verdict
    reason: str
    set_aside: tuple[int, ...]
    readmitted: tuple[int, ...]
    ambiguous: tuple[tuple[int, ...], ...]
    unchecked: tuple[str, ...]
    groups: tuple[GroupPrecision, ...]
    free_datum: tuple[str, ...]
    motions: tuple[str, ...]
    method: str
    steps: int
    solution: Solution = field(repr=False)
    rows: scipy.sparse.csr_matrix = field(repr=False)
    places: dict[str, int] = field(repr=False)

    def number(self, name: str) -> int:
        """The place of a point in `names`; OutOfRange for an unknown name."""
        if name not in self.places:
            raise OutOfRange(f"Point {name} is not in this adjustment.")
        return self.places[name]


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class NetworkAdjustment(Adjustment):
    """An adjusted plane network: positions (n, 2) in metres, covariances (n, 2, 2)."""

    positions_m: Array
    covariances_m2: Array
    shifts_m: Array
    orientations_rad: dict[tuple[str, str], float]

    def point(self, name: str) -> PointReport:
        """One point of the network; OutOfRange for an unknown name."""
        i = self.number(name)
        return PointReport(
            name=name,
            position_m=self.positions_m[i],
            covariance_m2=self.covariances_m2[i],
            ellipse_95=ellipse(self.covariances_m2[i]),
            shift_m=self.shifts_m[i],
            fixed=not self.covariances_m2[i].any(),
            checked=name not in self.unchecked,
        )

    def joint_covariance(self, names: Sequence[str]) -> Array:
        """Joint covariance (2k, 2k) of some points, E1, N1, E2, ...; m²."""
        return self.solution.joint([self.number(n) for n in names])

    def effect(self, number: int) -> dict[str, Array]:
        """Shift of every point, metres, if that measurement were wrong by `detectable`.

        Empty when nothing controls the measurement.
        """
        return _effect(self, number)


@dataclass(frozen=True, slots=True, eq=False, kw_only=True)
class LevelAdjustment(Adjustment):
    """An adjusted level network: heights (n,) in metres and their variances (n,)."""

    heights_m: Array
    variances_m2: Array

    def height(self, name: str) -> HeightReport:
        """One height of the network; OutOfRange for an unknown name."""
        i = self.number(name)
        sigma = float(np.sqrt(max(self.variances_m2[i], 0.0)))
        return HeightReport(
            name=name,
            height_m=float(self.heights_m[i]),
            sigma_m=sigma,
            fixed=sigma == 0.0,
            checked=name not in self.unchecked,
        )

    def joint_covariance(self, names: Sequence[str]) -> Array:
        """Joint covariance (k, k) of some heights, m²."""
        return self.solution.joint([self.number(n) for n in names])

    def effect(self, number: int) -> dict[str, Array]:
        """Shift of every height, metres, if that run were wrong by `detectable`."""
        return _effect(self, number)


def _effect(adjusted: Adjustment, number: int) -> dict[str, Array]:
    report = adjusted.measurements[number]
    if report.detectable is None:
        return {}
    row = adjusted.rows[number].toarray()[0]
    shifts = adjusted.solution.shifts(row * (report.detectable / report.sigma))
    return dict(zip(adjusted.names, shifts, strict=True))
