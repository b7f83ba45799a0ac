"""Adjusting a net of levelled lines."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from geometry.adjust.datum import datum_of
from geometry.adjust.frontal import NotDetermined
from geometry.adjust.height import HeightModel, height_model
from geometry.adjust.iterate import estimate, layout
from geometry.adjust.observations import HeightDifference, Heights
from geometry.adjust.outcome import group_precision, measurements, outcome, shared
from geometry.adjust.report import LevelAdjustment
from geometry.adjust.rows import design
from geometry.adjust.snooping import Snooped, snoop
from geometry.adjust.undetermined import undetermined_levels
from geometry.errors import OutOfRange


def adjust_levels(
    runs: Sequence[HeightDifference],
    *,
    fixed: Mapping[str, float] | None = None,
    known: Sequence[Heights] = (),
    free: bool = False,
    datum: Mapping[str, float] | None = None,
    snoops: bool = True,
    robust: bool = False,
    alpha: float = 0.001,
    power: float = 0.80,
    global_alpha: float = 0.05,
) -> LevelAdjustment:
    """Least-squares heights from levelled rises.

    `fixed` gives heights held without doubt, `known` groups with covariance, metres.
    A `free` net has neither: `datum` names marks with approximate heights that its
    heights keep on the average (all points at height 0 when absent). With `snoops`
    runs that do not fit are set aside, see `geometry.adjust.snooping`; `robust`
    starts that search from a robust estimate, for nets with many blunders.

    Published: Ghilani, *Adjustment Computations*, ch. 12; Baarda 1968 (from memory).

    >>> runs = [HeightDifference("A", "B", 1.002, 0.002),
    ...         HeightDifference("B", "C", 0.501, 0.002),
    ...         HeightDifference("C", "A", -1.500, 0.002)]
    >>> net = adjust_levels(runs, fixed={"A": 100.0})
    >>> net.heights_m.round(4).tolist(), net.dof
    ([100.0, 101.001, 101.501], 1)

    Raises Undetermined (which points, which run is missing), EmptyInput, NotFinite,
    OutOfRange, CoincidentPoints.
    """
    held = dict(fixed or {})
    if free and (held or known):
        raise OutOfRange(
            "A free net has no fixed and no known heights.",
            do="Leave those out, or do not ask for a free net.",
        )
    runs = tuple(runs)
    model = _model(runs, known, held, free)
    searched = _search(model, alpha, snoops=snoops, robust=robust)
    return _report(
        model, runs, searched, datum if free else None, free, alpha, power, global_alpha
    )


def _model(
    runs: Sequence[HeightDifference],
    known: Sequence[Heights],
    fixed: Mapping[str, float],
    free: bool,
) -> HeightModel:
    model = height_model(runs, known, fixed)
    return height_model(runs, known, fixed, model.names[:1]) if free else model


def _search(model: HeightModel, alpha: float, *, snoops: bool, robust: bool) -> Snooped:
    start = model.unknowns(model.start)
    order = layout(model, start)
    try:
        if snoops:
            return snoop(model, start, order, alpha, robust=robust)
        weights = np.ones(len(model.value))
        return Snooped(estimate(model, start, order, weights), weights)
    except NotDetermined:
        raise undetermined_levels(model) from None


def _report(
    model: HeightModel,
    runs: tuple[HeightDifference, ...],
    searched: Snooped,
    datum: Mapping[str, float] | None,
    free: bool,
    alpha: float,
    power: float,
    global_alpha: float,
) -> LevelAdjustment:
    found = searched.found
    heights = model.positions(found.unknowns)
    columns = model.columns[:, None]
    carried = None
    marks: tuple[str, ...] = ()
    if free:
        marks = tuple(datum) if datum else model.names
        weights = np.array([float(n in set(marks)) for n in model.names])
        if not weights.any():
            raise OutOfRange("No mark of the datum is in the net.")
        goal = np.array([(datum or {}).get(n, 0.0) for n in model.names])
        heights = heights + weights @ (goal - heights) / weights.sum()
        motions = np.ones((len(heights), 1))
        carried = datum_of(motions, weights, model.columns, found.factor)
    ends = np.stack([model.first, model.second], axis=1)
    done = outcome(
        searched, model.names, columns, ends, [k.at for k in model.known], carried,
        alpha, power, global_alpha,
    )  # fmt: skip
    kinds = np.zeros(len(runs), dtype=np.intp)
    measured = measurements(
        searched, done, runs, kinds, model.value, model.sigma, np.ones(len(runs))
    )
    return LevelAdjustment(
        **shared(searched, done, measured, alpha, power),
        names=model.names,
        groups=group_precision(kinds, ("levels",), done.assessment, measured.in_use),
        free_datum=marks,
        motions=("shift",) if free else (),
        rows=design(found.rows, model.count, np.ones(len(runs))),
        places={name: i for i, name in enumerate(model.names)},
        heights_m=heights + (0.0 if free else model.origin),
        variances_m2=done.assessment.covariances[:, 0, 0],
    )
