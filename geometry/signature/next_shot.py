"""Where one more shot would tell the two best causes apart.

At each place both causes predict a displacement; the best place is where they
differ most against what the comparison can see (noise of the shot and of both
predictions).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

import numpy as np

from geometry.checked import Array
from geometry.signature.findings import NextShot
from geometry.signature.hypotheses import Hypothesis
from geometry.signature.setups import Setup
from geometry.signature.weigh import Fit
from geometry.signature.words import Words, towards

DECIDES = 3.0
_RING_M = (10.0, 30.0, 80.0)

Judged = tuple[Hypothesis, Fit]


def next_shot(
    first: Judged,
    second: Judged,
    candidates: Array,
    setups: Sequence[Setup],
    plan: Array,
    noise: Callable[[Array], Array],
    words: Words,
) -> NextShot:
    """The best of the candidates (c, 2), or of a ring of spots when there are none.

    `noise` gives a shot's covariance (c, q, q) at the spots.
    """
    given = len(candidates) > 0
    spots = candidates if given else _ring(setups, plan)
    differ = _predicted(first, spots) - _predicted(second, spots)
    spread = noise(spots) + _doubt(first, spots) + _doubt(second, spots)
    seen = np.linalg.solve(spread, differ[:, :, None])[:, :, 0]
    times = np.sqrt(np.maximum((differ * seen).sum(axis=1), 0.0))
    best = int(np.argmax(times))
    gap = float(np.linalg.norm(differ[best]))
    decides = bool(times[best] >= DECIDES)
    return NextShot(
        point=spots[best],
        candidate=best if given else None,
        differ_m=gap,
        times=float(times[best]),
        decides=decides,
        sentence=_sentence(spots[best], setups, plan, gap, decides, words),
    )


def _predicted(judged: Judged, spots: Array) -> Array:
    one, fit = judged
    moved: Array = one.fixed_at(spots) + one.free_at(spots) @ fit.parameters
    return moved


def _doubt(judged: Judged, spots: Array) -> Array:
    one, fit = judged
    free = one.free_at(spots)
    doubt: Array = np.einsum("nik,kl,njl->nij", free, fit.covariance, free)
    return doubt


def _ring(setups: Sequence[Setup], plan: Array) -> Array:
    """Spots about the setup, near and far, in eight directions."""
    centre = setups[0].at if setups else plan.mean(axis=0)
    reach = float(np.hypot(*(plan - centre).T).max())
    azimuth = np.arange(8) * (math.pi / 4)
    unit = np.column_stack([np.sin(azimuth), np.cos(azimuth)])
    return np.vstack([centre + r * unit for r in (*_RING_M, reach)])


def _sentence(
    spot: Array,
    setups: Sequence[Setup],
    plan: Array,
    gap: float,
    decides: bool,
    words: Words,
) -> str:
    centre = setups[0].at if setups else plan.mean(axis=0)
    d = spot - centre
    of = "the setup" if setups else "the middle of the stakes"
    where = f"{words.far(float(np.hypot(*d)))} {towards(*d.tolist())} of {of}"
    if decides:
        return (
            f"Shoot a known point or a stake {where}: the two causes differ there by "
            f"{words.length(gap)}."
        )
    return (
        "No single shot from here tells them apart; the best is a known point "
        f"{where}, where they differ by {words.length(gap)}. Check from another setup."
    )
