"""What carries most shots onto their design when no named cause does.

Pairs of shots propose similarities, straight and mirrored; the one most shots agree
with is refined (random sample consensus, Fischler & Bolles 1981, from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from geometry.checked import Array
from geometry.signature.hypotheses import Field, Hypothesis
from geometry.signature.kinds import Kind
from geometry.signature.small import ANY_SIZE

_PAIRS = 120
_ROUNDS = 5

Complex = NDArray[np.complex128]


@dataclass(frozen=True, slots=True, eq=False)
class Carried:
    """p -> target + factor (p - source), in complex numbers east + i north."""

    factor: complex
    source: complex
    target: complex
    mirrored: bool
    share: float


def consensus(
    design: Array, shot: Array, reach_m: Array, rng: np.random.Generator
) -> list[Hypothesis]:
    """The best shift, turn, similarity and mirror image, as far as shots agree."""
    p, q = _complex(design), _complex(shot)
    found = []
    for mirrored in (False, True):
        start = np.conj(p) if mirrored else p
        best = _best(start, q, reach_m, mirrored, rng)
        if best is not None:
            spent = 4 if abs(abs(best.factor) - 1) > 1e-3 else 3
            kind = Kind.MIRRORED if mirrored else Kind.MOVED
            found.append(
                Hypothesis(kind, fixed=_field(best), spent=spent, rarity=ANY_SIZE)
            )
    return found


def _best(
    p: Complex, q: Complex, reach: Array, mirrored: bool, rng: np.random.Generator
) -> Carried | None:
    i = rng.integers(0, len(p), _PAIRS)
    j = (i + rng.integers(1, len(p), _PAIRS)) % len(p)
    apart = np.abs(p[i] - p[j]) > 1e-3
    i, j = i[apart], j[apart]
    if not i.size:
        return None
    factor = (q[j] - q[i]) / (p[j] - p[i])
    image = q[i][:, None] + factor[:, None] * (p[None, :] - p[i][:, None])
    # a pair's own error grows away from it, so agreement is judged generously
    agree = np.abs(image - q[None, :]) < 3 * reach[None, :]
    winner = int(np.argmax(agree.sum(axis=1)))
    if agree[winner].sum() < max(3, len(p) // 3):
        return None
    return _refined(p, q, reach, agree[winner], mirrored)


def _refined(
    p: Complex, q: Complex, reach: Array, inside: NDArray[np.bool_], mirrored: bool
) -> Carried | None:
    factor, source, target = 1 + 0j, 0j, 0j
    for _ in range(_ROUNDS):
        source, target = complex(p[inside].mean()), complex(q[inside].mean())
        local = p[inside] - source
        spread = float((np.abs(local) ** 2).sum())
        if spread < 1e-9:
            return None
        factor = complex((np.conj(local) * (q[inside] - target)).sum() / spread)
        fresh = np.abs(target + factor * (p - source) - q) < reach
        if fresh.sum() < 3 or (fresh == inside).all():
            break
        inside = fresh
    if abs(abs(factor) - 1) <= 1e-3:
        factor /= abs(factor)
    return Carried(factor, source, target, mirrored, float(inside.mean()))


def _field(best: Carried) -> Field:
    def field(points: Array) -> Array:
        p = _complex(points)
        start = np.conj(p) if best.mirrored else p
        image = best.target + best.factor * (start - best.source) - p
        return np.column_stack([image.real, image.imag])

    return field


def _complex(points: Array) -> Complex:
    return points[:, 0] + 1j * points[:, 1]
