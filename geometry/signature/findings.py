"""What a reading of residuals answers: one cause, a set of causes, or none."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from geometry.checked import Array
from geometry.signature.kinds import Kind
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True, eq=False)
class Cause:
    """One cause as far as the shots support it.

    `parameters` (k,) and `covariance` (k, k) are in metres, radians and parts of
    one, in the order of the kind's name; empty for a cause with nothing to fit.
    `probability` is among all causes weighed. `effect_m` is the largest
    displacement it predicts at a shot, `share` the part of the shots it explains.
    `setup` and `mark` are places in the caller's lists. `sentence` says it.
    """

    kind: Kind
    parameters: Array
    covariance: Array
    probability: float
    loss: float
    effect_m: float
    share: float
    setup: int | None
    mark: int | None
    about: str
    sentence: str


@dataclass(frozen=True, slots=True, eq=False)
class NextShot:
    """The measurement that would separate the two best causes.

    `candidate` is the place in the caller's list, None for a spot chosen here at
    `point` (E, N) or, for heights, at that place. The two causes differ there by
    `differ_m`, which is `times` the standard deviation of the comparison;
    `decides` is true from three on.
    """

    point: Array
    candidate: int | None
    differ_m: float
    times: float
    decides: bool
    sentence: str


@dataclass(frozen=True, slots=True, eq=False)
class Signature:
    """A reading. `verdict`: pass (nothing systematic that matters), fail (one cause),
    ambiguous (one of `causes`), not tested (too few shots).

    `causes` are those that cannot be told apart, most probable first; one with fail,
    none with pass. `weighed` are all causes that could be tried. `wild` are rows of
    shots that the best explanation leaves out, `redundancy` the degrees of freedom
    it has left. `would_see_m`, with pass, is the smallest effect at a shot that these
    shots would show with a probability of 80 %, for the worst one-parameter cause.
    """

    verdict: Verdict
    causes: tuple[Cause, ...]
    weighed: tuple[Cause, ...]
    wild: NDArray[np.int64]
    used: int
    redundancy: int
    would_see_m: float | None
    next_shot: NextShot | None
    reason: str

    @property
    def kind(self) -> Kind:
        """The most probable cause; nothing when none is supported."""
        return self.causes[0].kind if self.causes else Kind.NOTHING
