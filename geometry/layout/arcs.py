"""Curved walls: arcs of an outline, and the chords that stand for them.

An arc between two corners is given by its bulge, the tangent of a quarter of the
angle it turns through, positive to the left (the rule of DXF polylines, from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry import checked
from geometry.checked import Array
from geometry.errors import CoincidentPoints, OutOfRange

MOST_CHORDS = 720
"""Half a degree each round a full circle: finer is a wrong tolerance, not a wall."""


@dataclass(frozen=True, slots=True)
class Arc:
    """A circular wall from `start` to `end`.

    `turn_rad` is positive where the arc bends to the left. Points are (E, N) metres.
    """

    start: tuple[float, float]
    end: tuple[float, float]
    centre: tuple[float, float]
    radius_m: float
    turn_rad: float

    @property
    def length_m(self) -> float:
        return self.radius_m * abs(self.turn_rad)

    def points(self, chords: int) -> Array:
        """`chords` + 1 points (E, N) equally spaced on the arc, ends included."""
        centre = np.asarray(self.centre)
        arm = np.asarray(self.start) - centre
        turns = np.linspace(0.0, self.turn_rad, chords + 1)
        c, s = np.cos(turns), np.sin(turns)
        out = np.column_stack([c * arm[0] - s * arm[1], s * arm[0] + c * arm[1]])
        out += centre
        out[0], out[-1] = self.start, self.end
        return np.asarray(out, dtype=np.float64)


def arc(start: tuple[float, float], end: tuple[float, float], bulge: float) -> Arc:
    """The arc from `start` to `end` (E, N; metres) with the given bulge.

    Raises CoincidentPoints when the ends are one point, NotFinite or OutOfRange for a
    bulge that is no number or zero. A bulge of 1 is a half circle:

    >>> a = arc((0.0, 0.0), (2.0, 0.0), 1.0)
    >>> round(a.radius_m, 9), [round(abs(x), 9) for x in a.centre]
    (1.0, [1.0, 0.0])
    """
    b = checked.number("bulge", bulge)
    p, q = checked.point("start", start), checked.point("end", end)
    chord = float(np.hypot(*(q - p)))
    if chord == 0.0:
        raise CoincidentPoints(
            "A curved wall starts and ends at the same point.",
            do="Split a full circle into two arcs.",
        )
    if b == 0.0:
        raise OutOfRange("A bulge of zero is a straight wall.", do="Give no arc there.")
    along = (q - p) / chord
    left = np.array([-along[1], along[0]])
    centre = (p + q) / 2 + left * chord * (1 - b * b) / (4 * b)
    return Arc(
        start=(float(p[0]), float(p[1])),
        end=(float(q[0]), float(q[1])),
        centre=(float(centre[0]), float(centre[1])),
        radius_m=chord * (1 + b * b) / (4 * abs(b)),
        turn_rad=4 * math.atan(b),
    )


def chord_for(radius_m: float, tolerance_m: float) -> float:
    """The longest chord whose mid-ordinate stays within the tolerance (metres).

    c = sqrt(8 R m - 4 m²), the mid-ordinate rule of route-surveying texts (memory).

    >>> round(chord_for(20.0, 0.01), 6)
    1.264753
    """
    r = checked.positive("radius", radius_m)
    m = min(checked.positive("chord tolerance", tolerance_m), r)
    return math.sqrt(8 * r * m - 4 * m * m)


def chords_needed(a: Arc, tolerance_m: float) -> int:
    """How many equal chords keep within the tolerance of the arc: at least two.

    Raises OutOfRange when the tolerance asks for more than half a degree a chord.
    """
    chord = chord_for(a.radius_m, tolerance_m)
    step = 2 * math.asin(min(chord / (2 * a.radius_m), 1.0))
    count = max(2, math.ceil(abs(a.turn_rad) / step - 1e-9))
    if count > MOST_CHORDS:
        raise OutOfRange(
            "The chord tolerance is too fine for this curved wall.",
            where=f"It asks for {count} chords on a radius of {a.radius_m:g} m.",
            do="Give a chord tolerance of a few millimetres or more.",
        )
    return count


def mid_ordinate(radius_m: float, chord_m: float) -> float:
    """Greatest distance between a chord and its arc (metres): R - sqrt(R² - c²/4).

    >>> round(mid_ordinate(20.0, chord_for(20.0, 0.01)), 9)
    0.01
    """
    r, c = checked.positive("radius", radius_m), checked.positive("chord", chord_m)
    if c > 2 * r * (1 + 1e-12):
        raise OutOfRange(
            "A chord cannot be longer than the diameter.",
            where=f"The chord is {c:g} m, the radius {r:g} m.",
        )
    half = min(c / 2, r)
    return half * half / (r + math.sqrt(max(r * r - half * half, 0.0)))
