"""Localisation in height: a shift, or an inclined plane, through known marks."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.stats import chi2

from geometry import checked
from geometry.checked import Array
from geometry.errors import CollinearPoints, EmptyInput, WrongShape
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True, eq=False)
class HeightFit:
    """local less satellite height = shift (+ tilt E, tilt N from `centre`).

    `parameters` (1,) or (3,), `covariance` of them; `residuals_m` (k,); `misfit` is
    chi-square with `redundancy` degrees of freedom. A plane through three marks fits
    always and is not tested.
    """

    centre: Array
    parameters: Array
    covariance: Array
    residuals_m: Array
    misfit: float
    redundancy: int
    verdict: Verdict
    reason: str


def localised_heights(
    points: ArrayLike,
    differences_m: ArrayLike,
    sds_m: ArrayLike,
    *,
    tilt: bool = False,
    alpha: float = 0.001,
) -> HeightFit:
    """Fit local less satellite heights `differences_m` (k,) at `points` (k, 2).

    `sds_m` (k,) of the differences. With `tilt` a plane, else one shift. Raises
    EmptyInput, WrongShape, NotFinite, OutOfRange, CollinearPoints for a plane through
    marks on one line.

    >>> fit = localised_heights([(0, 0), (9, 0), (0, 9)], [.02, .03, .01], [.01] * 3)
    >>> round(float(fit.parameters[0]), 6), fit.redundancy
    (0.02, 2)
    """
    p = checked.points("points", points)
    d = checked.numbers("differences", differences_m)
    s = checked.numbers("sigmas", sds_m)
    if not len(p) == len(d) == len(s):
        raise WrongShape("Points, differences and sigmas must be equally many.")
    needed = 3 if tilt else 1
    if len(p) < needed:
        raise EmptyInput(f"At least {needed} marks are needed.", do="Occupy more.")
    for difference, sd in zip(d, s, strict=True):
        checked.metres("difference", difference)
        checked.sigma("sigma", sd)
    centre = p.mean(axis=0)
    rows = np.ones((len(p), 1))
    if tilt:
        if np.linalg.svd(p - centre, compute_uv=False)[1] < 1e-3:
            raise CollinearPoints(
                "A plane needs marks that do not lie on one line.",
                do="Occupy a mark to the side, or fit a shift.",
            )
        rows = np.column_stack([rows, p - centre])
    weighted = rows / s[:, None]
    covariance = np.asarray(np.linalg.inv(weighted.T @ weighted), dtype=np.float64)
    parameters = covariance @ weighted.T @ (d / s)
    residuals = d - rows @ parameters
    misfit, spare = float(np.sum((residuals / s) ** 2)), len(p) - needed
    verdict, reason = Verdict.NOT_TESTED, "Nothing is left over to check the fit."
    if spare:
        fits = float(chi2.sf(misfit, spare)) >= alpha
        verdict = Verdict.PASS if fits else Verdict.FAIL
        reason = "The heights fit." if fits else "The heights disagree beyond chance."
    return HeightFit(
        centre, parameters, covariance, residuals, misfit, spare, verdict, reason
    )


def local_height(
    fit: HeightFit, point: ArrayLike, satellite_height_m: float, satellite_sd_m: float
) -> tuple[float, float]:
    """Local height at `point` (E, N), metres, and its variance in m²."""
    offset = checked.point("point", point) - fit.centre
    height = checked.metres("satellite height", satellite_height_m)
    sd = checked.sigma("satellite sigma", satellite_sd_m)
    row = np.concatenate([[1.0], offset])[: len(fit.parameters)]
    variance = float(row @ fit.covariance @ row) + sd * sd
    return height + float(row @ fit.parameters), variance
