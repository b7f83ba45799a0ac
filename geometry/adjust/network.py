"""Adjusting a plane network of distances, directions, angles and azimuths."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence

import numpy as np
from numpy.typing import ArrayLike

from geometry.adjust.datum import Datum, datum_of, fitted, plane_motions
from geometry.adjust.frontal import NotDetermined
from geometry.adjust.iterate import Estimate, estimate, layout
from geometry.adjust.observations import Coordinates, PlaneObservation
from geometry.adjust.outcome import group_precision, measurements, outcome, shared
from geometry.adjust.plane import KINDS, PlaneModel, plane_model
from geometry.adjust.report import NetworkAdjustment
from geometry.adjust.rows import design
from geometry.adjust.snooping import Snooped, snoop
from geometry.adjust.undetermined import undetermined_plane
from geometry.checked import Array
from geometry.errors import OutOfRange


def adjust_network(
    points: Mapping[str, ArrayLike],
    observations: Sequence[PlaneObservation],
    *,
    fixed: Collection[str] = (),
    known: Sequence[Coordinates] = (),
    free: bool = False,
    datum: Collection[str] = (),
    snoops: bool = True,
    robust: bool = False,
    alpha: float = 0.001,
    power: float = 0.80,
    global_alpha: float = 0.05,
) -> NetworkAdjustment:
    """Least-squares positions from plane measurements.

    `points` gives start coordinates E, N in metres of every point, design or recorded
    ones: good to a fraction of the shortest sight. `fixed` names points held without
    doubt, `known` groups of positions with their joint covariance. A `free` network
    has neither: its marks in `datum` (all points when empty) keep their start
    positions on the average, and precision is relative to them. With `snoops`
    measurements that do not fit are set aside, see `geometry.adjust.snooping`;
    `robust` starts that search from a robust estimate, for many blunders.

    Published: Mikhail & Gracie 1981; Ghilani, *Adjustment Computations*; Baarda 1968
    and 1973 (from memory).

    >>> from geometry.adjust.observations import Distance
    >>> sides = [Distance("A", "P", 50.001, 0.002), Distance("B", "P", 50.0, 0.002),
    ...          Distance("C", "P", 50.0, 0.002)]
    >>> start = {"A": (0, 0), "B": (60, 0), "C": (30, 90), "P": (30, 40)}
    >>> net = adjust_network(start, sides, fixed=["A", "B", "C"])
    >>> net.point("P").position_m.round(4).tolist(), net.dof
    ([30.0008, 40.0004], 1)

    Raises Undetermined (which points, which measurement is missing), DoesNotSettle,
    EmptyInput, NotFinite, OutOfRange, WrongShape, CoincidentPoints.
    """
    if free and (fixed or known):
        raise OutOfRange(
            "A free network has no fixed and no known points.",
            do="Leave those out, or do not ask for a free network.",
        )
    observations = tuple(observations)
    model = plane_model(points, observations, known, frozenset(fixed))
    if free:
        held = _fewest_held(model)
        model = plane_model(points, observations, known, frozenset(), held)
    searched = _search(model, alpha, free=free, snoops=snoops, robust=robust)
    marks = tuple(datum) or model.names if free else ()
    return _report(model, observations, searched, marks, (alpha, power, global_alpha))


def _motions(model: PlaneModel) -> dict[str, bool]:
    """Motions nothing holds: an azimuth would stop turning, a distance the size."""
    kind = model.table.kind
    return {"turn": not (kind == 3).any(), "scale": not (kind == 0).any()}


def _fewest_held(model: PlaneModel) -> list[tuple[str, int]]:
    """The fewest coordinates to hold: one point, and part of the one farthest away."""
    away = model.start - model.start[0]
    far = int(np.argmax(np.hypot(*away.T)))
    first = model.names[0]
    held = [(first, 0), (first, 1)]
    across = int(np.argmin(np.abs(away[far])))
    free = _motions(model)
    if free["turn"]:
        held.append((model.names[far], across))
    if free["scale"]:
        held.append((model.names[far], 1 - across))
    return held


def _search(
    model: PlaneModel, alpha: float, *, free: bool, snoops: bool, robust: bool
) -> Snooped:
    start = model.unknowns(model.start)
    order = layout(model, start)
    try:
        if snoops:
            return snoop(model, start, order, alpha, robust=robust)
        weights = np.ones(len(model.table.kind))
        return Snooped(estimate(model, start, order, weights), weights)
    except NotDetermined:
        raise undetermined_plane(model, start, free=free) from None


def _carried(
    model: PlaneModel, found: Estimate, marks: tuple[str, ...]
) -> tuple[Array, Datum | None]:
    """Positions at the local origin, in the datum of the chosen marks if free."""
    positions = model.positions(found.unknowns)
    if not marks:
        return positions, None
    chosen = set(marks)
    weights = np.array([float(name in chosen) for name in model.names])
    free = _motions(model)
    if weights.sum() < (2 if free["turn"] or free["scale"] else 1):
        raise OutOfRange(
            "The datum of a free network needs marks that are in it.",
            where=f"It names {', '.join(marks)}.",
            do="Name at least two marks of the network.",
        )
    positions = fitted(positions, model.start, weights, **free)
    motions = plane_motions(positions, **free)
    by_coordinate = np.repeat(weights, 2)
    datum = datum_of(motions, by_coordinate, model.columns.ravel(), found.factor)
    return positions, datum


def _report(
    model: PlaneModel,
    observations: tuple[PlaneObservation, ...],
    searched: Snooped,
    marks: tuple[str, ...],
    levels: tuple[float, float, float],
) -> NetworkAdjustment:
    alpha, power, global_alpha = levels
    found, table = searched.found, model.table
    positions, datum = _carried(model, found, marks)
    ends = np.stack([table.first, table.second, table.third], axis=1)
    done = outcome(
        searched, model.names, model.columns, ends, [k.at for k in model.known],
        datum, alpha, power, global_alpha,
    )  # fmt: skip
    measured = measurements(
        searched, done, observations, (table.kind != 0).astype(np.intp),
        table.value, table.sigma, _sights(model, positions),
    )  # fmt: skip
    turns = found.unknowns[model.turn_columns]
    return NetworkAdjustment(
        **shared(searched, done, measured, alpha, power),
        names=model.names,
        groups=group_precision(table.kind, KINDS, done.assessment, measured.in_use),
        free_datum=marks,
        motions=("shift", *(m for m, on in _motions(model).items() if on))
        if marks
        else (),
        rows=design(found.rows, model.count, np.ones(len(table.kind))),
        places={name: i for i, name in enumerate(model.names)},
        positions_m=positions + model.origin,
        covariances_m2=done.assessment.covariances,
        shifts_m=positions - model.start,
        orientations_rad={
            key: float(turn % (2 * np.pi))
            for key, turn in zip(model.rounds, turns, strict=True)
        },
    )


def _sights(model: PlaneModel, positions: Array) -> Array:
    """Length of each sight; of an angle the shorter leg, where an error shows most."""
    table = model.table
    one, two = (
        np.hypot(*(positions[far] - positions[table.first]).T)
        for far in (table.second, table.third)
    )
    shorter: Array = np.where(table.third >= 0, np.minimum(one, two), one)
    return shorter
