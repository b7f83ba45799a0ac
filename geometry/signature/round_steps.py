"""A height error close to a round step: a rod pulled to the wrong mark, most likely."""

from __future__ import annotations

import dataclasses
import math

from geometry.signature.kinds import Kind
from geometry.signature.trying import Weighed
from geometry.signature.words import Words

_STEPS_M = (0.05, 0.1, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5, 1.0, 1.5, 2.0)
_STEPS_FT = (0.1, 0.25, 0.5, 1.0, 1.5, 2.0, 3.0, 4.0, 5.0)
_WITHIN = 2.5
_SHARP = 8.0


def named_step(w: Weighed, words: Words) -> Weighed:
    """The cause with the round step its size agrees with, if one.

    A step is only named when the size is known to an eighth of it; otherwise any
    size would agree with some step.
    """
    if w.hypothesis.kind is not Kind.HEIGHT_CONSTANT or not len(w.fit.parameters):
        return w
    size, sigma = abs(float(w.fit.parameters[0])), math.sqrt(w.fit.covariance[0, 0])
    for step in _steps(words):
        close = abs(size - step) <= max(_WITHIN * sigma, 0.002)
        if close and sigma * _SHARP < step:
            said = words.length(step)
            named = dataclasses.replace(w.hypothesis, about=said)
            return dataclasses.replace(w, hypothesis=named)
    return w


def _steps(words: Words) -> tuple[float, ...]:
    """Those of the job's own rods: with both units some step is always close."""
    feet = tuple(step * words.metres_per_unit for step in _STEPS_FT)
    return feet if words.unit == "ft" else _STEPS_M
