"""Heights and how sure they are: trigonometric, by level, from several benchmarks."""

from __future__ import annotations

import math
from dataclasses import dataclass

from numpy.typing import ArrayLike
from scipy.stats import chi2

from geometry import checked
from geometry.checked import Array
from geometry.errors import EmptyInput, OutOfRange, WrongShape
from geometry.precision.instruments import Level, TotalStation
from geometry.verdicts import Verdict

EARTH_RADIUS_M = 6_372_000.0
REFRACTION = 0.13
REFRACTION_SD = 0.05
"""Spread of the refraction coefficient near the ground (from memory)."""


@dataclass(frozen=True, slots=True)
class HeightDifference:
    """Target less station mark, metres, and its variance in m².

    `curvature_refraction_m` is contained in `difference_m`.
    """

    difference_m: float
    variance_m2: float
    curvature_refraction_m: float


@dataclass(frozen=True, slots=True, eq=False)
class Combined:
    """One height from several. `residuals_m`: each less the combined one.

    `misfit` is chi-square with `redundancy` degrees of freedom. The verdict is not
    tested for one height, fail when they disagree beyond chance (probability below
    0.001): then they are a question to settle, not numbers to average.
    """

    height_m: float
    variance_m2: float
    residuals_m: Array
    misfit: float
    redundancy: int
    verdict: Verdict
    reason: str


def curvature_refraction(distance_m: float, refraction: float = REFRACTION) -> float:
    """(1 - k) d² / 2R: what a level line of sight rises above the level surface.

    Ghilani & Wolf, *Elementary Surveying* (from memory); metres.

    >>> round(curvature_refraction(1000.0, 0.14), 4)
    0.0675
    """
    d = checked.metres("distance", distance_m)
    return (1 - checked.number("refraction", refraction)) * d * d / (2 * EARTH_RADIUS_M)


def trigonometric_height(
    slope_m: float,
    zenith_rad: float,
    instrument_height_m: float,
    target_height_m: float,
    instrument: TotalStation,
    *,
    refraction: float = REFRACTION,
    refraction_sd: float = REFRACTION_SD,
) -> HeightDifference:
    """Height difference by slope distance and zenith angle, one way.

    s cos z + (1 - k)(s sin z)² / 2R + hi - ht, and its variance from distance, zenith
    angle, both measured heights and the refraction coefficient. Raises NotFinite,
    OutOfRange.

    >>> round(trigonometric_height(100, math.radians(80), 1.5, 1.3,
    ...       TotalStation()).difference_m, 4)
    17.5655
    """
    s = checked.length("slope distance", slope_m)
    z = checked.number("zenith angle", zenith_rad)
    if not 0 < z < math.pi:
        raise OutOfRange(
            "zenith angle must lie between 0 and 180 degrees.",
            where=f"It is {math.degrees(z):g} degrees.",
            do="Reduce face-right readings first.",
        )
    hi = checked.metres("instrument height", instrument_height_m)
    ht = checked.metres("target height", target_height_m)
    flat, rise = s * math.sin(z), s * math.cos(z)
    correction = curvature_refraction(flat, refraction)
    variance = (
        math.cos(z) ** 2 * instrument.distance_variance(s)
        + (flat * instrument.zenith_sd_rad) ** 2
        + 2 * instrument.height_sd_m**2
        + (flat**2 / (2 * EARTH_RADIUS_M) * refraction_sd) ** 2
    )
    return HeightDifference(rise + correction + hi - ht, variance, correction)


def level_run_variance(length_m: float, level: Level) -> float:
    """Variance in m² of a level line of `length_m`, double-run figure per km.

    >>> round(1000 * math.sqrt(level_run_variance(4000.0, Level())), 3)
    4.0
    """
    length = checked.metres("length", checked.not_negative("length", length_m))
    return level.per_km_sd_m**2 * length / 1000.0


def one_setup_variance(backsight_m: float, foresight_m: float, level: Level) -> float:
    """Variance in m² of a height carried by one set-up of the level.

    A collimation error left in the level cancels when both sights are equally long, so
    only the difference of the sights carries it. Raises NotFinite, OutOfRange.

    >>> one_setup_variance(30, 30, Level()) < one_setup_variance(10, 50, Level())
    True
    """
    b = checked.metres("backsight", checked.not_negative("backsight", backsight_m))
    f = checked.metres("foresight", checked.not_negative("foresight", foresight_m))
    return 2 * level.reading_sd_m**2 + (level.collimation_rad * (b - f)) ** 2


def combined_height(
    heights_m: ArrayLike, variances_m2: ArrayLike, *, alpha: float = 0.001
) -> Combined:
    """Weighted mean of heights of one point carried from several benchmarks.

    `heights_m`, `variances_m2` (k,). This is also a free station in height: one height
    of the instrument from each mark sighted. Raises EmptyInput, WrongShape, NotFinite,
    OutOfRange.

    >>> round(combined_height([10.000, 10.003], [1e-6, 4e-6]).height_m, 6)
    10.0006
    """
    h = checked.numbers("heights", heights_m)
    v = checked.numbers("variances", variances_m2)
    if len(h) == 0:
        raise EmptyInput("No height was given.", do="Level from a benchmark.")
    if len(h) != len(v):
        raise WrongShape(
            "Heights and variances must be equally many.",
            where=f"There are {len(h)} and {len(v)}.",
        )
    for height, variance in zip(h, v, strict=True):
        checked.metres("height", height)
        checked.sigma("root of a variance", math.sqrt(max(variance, 0.0)))
    weight = 1.0 / v
    origin = float(h[0])
    mean = origin + float(weight @ (h - origin) / weight.sum())
    residuals = h - mean
    misfit = float(weight @ residuals**2)
    spare = len(h) - 1
    verdict, reason = Verdict.NOT_TESTED, "One height alone is not checked."
    if spare:
        fits = float(chi2.sf(misfit, spare)) >= alpha
        verdict = Verdict.PASS if fits else Verdict.FAIL
        reason = "The heights agree." if fits else "The heights disagree beyond chance."
    return Combined(
        mean, 1.0 / float(weight.sum()), residuals, misfit, spare, verdict, reason
    )
