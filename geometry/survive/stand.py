"""All marks of a job as arrays: where they stand, and what each can serve for."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array, Flags
from geometry.errors import GeometryError, OutOfRange, WrongShape
from geometry.ways import Tools


@dataclass(frozen=True, slots=True, eq=False)
class Stand:
    """`xy` (n, 2) m; `own` (n, 3) EE, EN, NN m²; `tolerance` (n,) m; flags (n,)."""

    xy: Array
    own: Array
    tolerance: Array
    usable: Flags
    occupiable: Flags
    control: Flags
    tools: Tools = field(default_factory=Tools)

    def __len__(self) -> int:
        return len(self.xy)


def stand(
    positions: ArrayLike,
    covariances: ArrayLike,
    tolerances_m: ArrayLike,
    *,
    usable: ArrayLike | None = None,
    occupiable: ArrayLike | None = None,
    control: ArrayLike | None = None,
    tools: Tools | None = None,
) -> Stand:
    """All marks of a job: `positions` (n, 2) E, N in metres, `covariances` (n, 2, 2)
    or one (2, 2) in m², `tolerances_m` one or (n,).

    `usable` (default all): may be a basis; `occupiable` (default all): an instrument
    can stand on it; `control` (default none): is looked for farther away, never set
    back. Raises WrongShape, NotFinite, OutOfRange.

    >>> len(stand([(0, 0), (9, 0)], 1e-6 * np.eye(2), 0.02))
    2
    """
    xy = checked.points("positions", positions)
    count = len(xy)
    tolerance = np.broadcast_to(
        checked.numbers("tolerances", tolerances_m), (count,)
    ).copy()
    if count and float(tolerance.min()) <= 0:
        raise OutOfRange("tolerances must be greater than zero.")
    return Stand(
        xy,
        _own(covariances, count),
        tolerance,
        _flags("usable", usable, count, True),
        _flags("occupiable", occupiable, count, True),
        _flags("control", control, count, False),
        tools or Tools(),
    )


def _own(covariances: ArrayLike, count: int) -> Array:
    given = np.asarray(covariances, dtype=np.float64)
    if given.shape == (2, 2):
        given = np.broadcast_to(given, (count, 2, 2))
    if given.shape != (count, 2, 2):
        raise WrongShape(
            "covariances must be one 2 by 2 per mark, or one for all.",
            where=f"They have shape {given.shape} for {count} marks.",
        )
    ee, en, nn = given[:, 0, 0], given[:, 0, 1], given[:, 1, 1]
    with np.errstate(invalid="ignore", over="ignore"):
        sound = (ee >= 0) & (nn >= 0) & (ee * nn - en * en >= -1e-9 * ee * nn)
    for row in np.flatnonzero(~sound | ~np.isfinite(given).all(axis=(1, 2)))[:1]:
        try:
            checked.covariance("covariance", given[row])
        except GeometryError as error:
            raise type(error)(error.what, where=f"Mark in row {row + 1}.") from error
    return np.column_stack([ee, en, nn])


def _flags(name: str, value: ArrayLike | None, count: int, default: bool) -> Flags:
    if value is None:
        return np.full(count, default)
    flags: Flags = np.asarray(value, dtype=bool)
    if flags.shape != (count,):
        raise WrongShape(
            f"{name} must be one yes or no per mark.", where=f"Shape {flags.shape}."
        )
    return flags
