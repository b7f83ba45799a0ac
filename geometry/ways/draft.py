"""A way before it is judged: its marks, Jacobians, numbers and weaknesses."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry.checked import Array
from geometry.ways.scene import Scene
from geometry.ways.way import Caution, Check, Kind, Number


@dataclass(frozen=True, slots=True, eq=False)
class Draft:
    """`marks` are indices into the scene; `jacobians` one (2, 2) per mark; `noise`
    (2, 2) of measuring. `own_check`: the setup's own check, where there is one."""

    kind: Kind
    marks: tuple[int, ...]
    jacobians: tuple[Array, ...]
    noise: Array
    numbers: tuple[Number, ...]
    cautions: tuple[Caution, ...]
    cost_min: float
    own_check: Check | None = None
    stand_at: tuple[float, float] | None = None
    singular: str = ""


def carried(draft: Draft, scene: Scene) -> Array:
    """Covariance (2, 2) of the point, from the marks' joint covariance and the noise."""
    if not draft.marks:
        return draft.noise
    rows = np.ravel([(2 * i, 2 * i + 1) for i in draft.marks])
    reach = np.hstack(draft.jacobians)
    total = reach @ scene.joint[np.ix_(rows, rows)] @ reach.T + draft.noise
    return np.asarray(0.5 * (total + total.T))


def with_mark(draft: Draft, scene: Scene, mark: int) -> Array:
    """Covariance (2, 2) between the point and another mark of the scene."""
    total = np.zeros((2, 2))
    for i, jacobian in zip(draft.marks, draft.jacobians, strict=True):
        total += jacobian @ scene.block(i, mark)
    return total


def singular(kind: Kind, why: str, marks: tuple[int, ...] = ()) -> Draft:
    """A way whose geometry gives no answer here, with the sentence that says why."""
    return Draft(
        kind,
        marks,
        tuple(np.zeros((2, 2)) for _ in marks),
        np.full((2, 2), np.inf),
        (),
        (),
        0.0,
        singular=why,
    )
