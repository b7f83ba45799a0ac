"""Plain words for directions and lengths in the sentences of a layout plan."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

Say = Callable[[float], str]
"""Writes a length given in metres in the words and unit of the job."""

COMPASS = (
    "north",
    "northeast",
    "east",
    "southeast",
    "south",
    "southwest",
    "west",
    "northwest",
)


def metres(length_m: float) -> str:
    """A length in metres, to the millimetre, without idle zeros.

    >>> metres(4.0), metres(0.6100001), metres(-0.0)
    ('4 m', '0.61 m', '0 m')
    """
    text = f"{length_m:.3f}".rstrip("0").rstrip(".")
    return f"{'0' if text == '-0' else text} m"


def compass(de: float, dn: float) -> str:
    """The nearest of the eight compass words for a direction (dE, dN).

    Directions a right angle apart always get words a right angle apart, so the
    four sides of a building never share a word.

    >>> compass(1.0, 0.0), compass(0.5, 0.9), compass(-1.0, 0.0)
    ('east', 'northeast', 'west')
    """
    eighth = math.atan2(de, dn) / (math.pi / 4)
    return COMPASS[math.floor(eighth + 0.5 - 1e-9) % 8]


def listed(words: Sequence[str]) -> str:
    """Words joined as a person would say them.

    >>> listed(["W1"]), listed(["W1", "W2", "W3"])
    ('W1', 'W1, W2 and W3')
    """
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"
