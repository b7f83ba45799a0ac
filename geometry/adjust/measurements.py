"""The measurements after an adjustment, kept as columns and read one at a time."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from geometry.adjust.observations import HeightDifference, PlaneObservation
from geometry.adjust.rows import Ints
from geometry.checked import Array
from geometry.errors import OutOfRange
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True)
class MeasurementReport:
    """One measurement after the adjustment; `unit` is "m" or "rad" for the values.

    `residual` is adjusted minus measured. `error` is the size the measurement is most
    likely wrong by, if it alone is wrong. `detectable` is the smallest error that the
    test would find with the power asked for and `effect_m` the largest shift of the
    measurement's own points by an error just below it; all three are None where
    nothing controls the measurement. `sight_m` turns radians into metres.
    """

    number: int
    words: str
    unit: str
    measured: float
    adjusted: float
    residual: float
    sigma: float
    sight_m: float
    redundancy: float
    w: float
    error: float | None
    detectable: float | None
    effect_m: float | None
    set_aside: bool
    verdict: Verdict
    reason: str

    @property
    def error_m(self) -> float | None:
        """`error` as a length, at the end of the sight."""
        if self.error is None:
            return None
        return self.error * (self.sight_m if self.unit == "rad" else 1.0)


REASONS = {
    Verdict.PASS: "It fits the other measurements.",
    Verdict.FAIL: "It does not fit the other measurements.",
    Verdict.AMBIGUOUS: "It is one of several that could be wrong.",
    Verdict.NOT_TESTED: "No other measurement controls it.",
}
SET_ASIDE = "It does not fit the other measurements and was set aside."


@dataclass(frozen=True, slots=True, eq=False)
class Measurements:
    """All measurements in the order given; index for a report of one.

    Every array is (m,); `residual`, `sigma` and `detectable` are metres or radians by
    the kind, `detectable` and `effect_m` inf where nothing controls a measurement.
    """

    observations: tuple[PlaneObservation | HeightDifference, ...]
    angular: Ints
    measured: Array
    sigma: Array
    sight_m: Array
    residual: Array
    redundancy: Array
    w: Array
    detectable: Array
    effect_m: Array
    in_use: Ints
    verdicts: tuple[Verdict, ...]

    def __len__(self) -> int:
        return len(self.observations)

    def __iter__(self) -> Iterator[MeasurementReport]:
        return (self[i] for i in range(len(self)))

    def __getitem__(self, number: int) -> MeasurementReport:
        if not 0 <= number < len(self):
            raise IndexError(f"There is no measurement number {number}.")
        i = number
        in_use = bool(self.in_use[i])
        controlled = bool(np.isfinite(self.detectable[i]))
        residual, r = float(self.residual[i]), float(self.redundancy[i])
        error = -residual / r if controlled else None
        verdict = self.verdicts[i]
        return MeasurementReport(
            number=i,
            words=str(self.observations[i]),
            unit="rad" if self.angular[i] else "m",
            measured=float(self.measured[i]),
            adjusted=float(self.measured[i]) + residual,
            residual=residual,
            sigma=float(self.sigma[i]),
            sight_m=float(self.sight_m[i]),
            redundancy=r,
            w=float(self.w[i]),
            error=error if in_use else -residual,
            detectable=float(self.detectable[i]) if controlled else None,
            effect_m=float(self.effect_m[i]) if controlled else None,
            set_aside=not in_use,
            verdict=verdict,
            reason=REASONS[verdict] if in_use else SET_ASIDE,
        )

    def find(self, words: str) -> MeasurementReport:
        """The first measurement described by these words, "distance A to B"."""
        for i, one in enumerate(self.observations):
            if str(one) == words:
                return self[i]
        raise OutOfRange(f"There is no {words} in this adjustment.")
