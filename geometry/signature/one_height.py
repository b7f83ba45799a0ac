"""Why a single stake has the height it has: the slips that leave it by itself."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

from geometry import checked
from geometry.checked import Array
from geometry.signature.one_stake import (
    Slip,
    StakeReading,
    Told,
    fitting,
    judged,
    miscopied,
)
from geometry.signature.words import METRES, Words
from geometry.verdicts import Verdict


def explain_height(
    difference_m: float,
    *,
    typed: str | None = None,
    typed_unit_m: float = 1.0,
    references: Mapping[str, float] | None = None,
    cut_m: float | None = None,
    step_m: float = 0.1,
    tolerance_m: float = 0.010,
    within_m: float = 0.006,
    words: Words = METRES,
) -> StakeReading:
    """Explain a height difference, found less design, of one stake; metres.

    `typed` is the elevation as it was entered, in units of `typed_unit_m`.
    `references` say how far other surfaces lie above the one the plan refers to
    (curb height, slab, pavement). `cut_m` is the cut the stake called for. `step_m`
    is the rod's step (0.1 m; 0.3048 for whole feet); multiples up to ten count.

    >>> found = explain_height(0.2705, typed="103.47", references={"flow line": -0.15})
    >>> found.hints[0].slip.value, found.hints[0].sentence
    ('digits exchanged', 'Its elevation 103.47 may have been taken as 103.74.')

    Raises NotFinite, OutOfRange, or NotReadable for a typed elevation.
    """
    d = np.array([checked.number("The difference", difference_m)])
    away = abs(float(d[0]))
    within = checked.positive("within_m", within_m)
    if away <= checked.positive("tolerance_m", tolerance_m):
        return StakeReading(Verdict.PASS, away, (), "Within tolerance of its design.")
    unit = checked.positive("typed_unit_m", typed_unit_m)
    step = checked.positive("step_m", step_m)
    groups = [
        *_of_elevation(typed, unit),
        (Slip.REFERENCE, _of_references(references or {})),
        (Slip.SIGN, _of_sign(cut_m)),
        (Slip.ROUND_STEP, _of_steps(step, words)),
    ]
    hints = [hint for slip, told in groups for hint in fitting(slip, told, d, within)]
    hints.sort(key=lambda hint: (hint.by_chance, hint.left_m))
    return judged(hints, away, words)


def _of_elevation(typed: str | None, unit: float) -> Iterator[tuple[Slip, Told]]:
    if typed is not None:
        up = np.array([1.0])
        yield Slip.EXCHANGED, miscopied("elevation", typed, unit, up, True)
        yield Slip.DIGIT, miscopied("elevation", typed, unit, up, False)


def _of_references(references: Mapping[str, float]) -> Told:
    return [
        (_height(height), f"It fits {name} instead of the surface of the plan.")
        for name, height in references.items()
    ]


def _of_sign(cut_m: float | None) -> Told:
    if not cut_m:
        return []
    return [(_height(2 * cut_m), "It is off by twice its cut: cut taken for fill.")]


def _of_steps(step: float, words: Words) -> Told:
    return [
        (
            _height(sign * multiple * step),
            f"It is off by the round step {words.length(multiple * step)}: rod height "
            "or a misread mark.",
        )
        for multiple in range(1, 11)
        for sign in (-1, 1)
    ]


def _height(metres: float) -> Array:
    return np.array([checked.number("A height", metres)])
