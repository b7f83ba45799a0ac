"""Steel tape: temperature, pull, sag, standard length and slope.

Formulas as in Ghilani & Wolf, *Elementary Surveying*, chapter 6 (from memory). The
sign turns round between measuring and laying out: a tape that is too long reads too
little between two marks, and sets a mark too far when its reading is laid out.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from scipy.optimize import brentq

from geometry import checked
from geometry.errors import OutOfRange

EXPANSION_PER_C = 1.16e-5
"""Steel, per degree Celsius (6.45e-6 per Fahrenheit)."""


@dataclass(frozen=True, slots=True)
class SteelTape:
    """A tape as calibrated: its true length at its standard temperature and pull,
    lying flat. `true_m` over `nominal_m` is what its marks are really worth."""

    nominal_m: float = 30.0
    true_m: float = 30.0
    standard_c: float = 20.0
    standard_n: float = 50.0
    area_mm2: float = 3.0
    modulus_gpa: float = 200.0
    weight_n_per_m: float = 0.2354


@dataclass(frozen=True, slots=True)
class Pulled:
    """How it was used. `span_m` is the distance between supports, 0 when it lay on the
    ground; `rise_m` the difference in height between its ends."""

    temperature_c: float = 20.0
    tension_n: float = 50.0
    span_m: float = 0.0
    rise_m: float = 0.0


@dataclass(frozen=True, slots=True)
class TapeCorrections:
    """Metres to add to a reading when measuring; to take off it when laying out."""

    standard_m: float
    temperature_m: float
    pull_m: float
    sag_m: float

    @property
    def total_m(self) -> float:
        return self.standard_m + self.temperature_m + self.pull_m + self.sag_m


def tape_corrections(
    reading_m: float, tape: SteelTape, used: Pulled
) -> TapeCorrections:
    """The corrections of a reading along the tape, in metres, each with its sign.

    Raises OutOfRange for a reading, pull or section that is not positive, and for a
    pull so weak that the tape hangs in a loop; NotFinite for no number.

    >>> c = tape_corrections(30.0, SteelTape(), Pulled(temperature_c=35.0))
    >>> round(c.temperature_m * 1000, 2)
    5.22
    """
    length = checked.positive("reading_m", reading_m)
    _check(tape, used)
    return TapeCorrections(
        standard_m=(tape.true_m - tape.nominal_m) / tape.nominal_m * length,
        temperature_m=EXPANSION_PER_C * length * (used.temperature_c - tape.standard_c),
        pull_m=(used.tension_n - tape.standard_n)
        * length
        / (tape.area_mm2 * tape.modulus_gpa * 1000),
        sag_m=_sag(length, tape.weight_n_per_m, used),
    )


def measured_length(reading_m: float, tape: SteelTape, used: Pulled) -> float:
    """The true horizontal length between two marks of which `reading_m` was read."""
    along = reading_m + tape_corrections(reading_m, tape, used).total_m
    return slope_to_level(along, used.rise_m)


def length_to_lay_out(level_m: float, tape: SteelTape, used: Pulled) -> float:
    """The reading at which a mark stands `level_m` away, the inverse of measuring.

    >>> tape, used = SteelTape(true_m=30.01), Pulled(temperature_c=31.0, rise_m=0.8)
    >>> r = length_to_lay_out(25.0, tape, used)
    >>> round(measured_length(r, tape, used), 9)
    25.0
    """
    level = checked.positive("level_m", level_m)
    slope = math.hypot(level, used.rise_m)
    reading = slope
    for _ in range(20):
        better = slope - tape_corrections(reading, tape, used).total_m
        if abs(better - reading) < 1e-12 * slope:
            break
        reading = better
    return reading


def slope_to_level(slope_m: float, rise_m: float) -> float:
    """Horizontal length of a slope length, exactly.

    Raises OutOfRange when the rise is not less than the length.

    >>> round((slope_to_level(30.0, 1.5) - 30.0) * 1000, 3)
    -37.523
    """
    slope = checked.positive("slope_m", slope_m)
    rise = checked.number("rise_m", rise_m)
    if abs(rise) >= slope:
        raise OutOfRange(
            "The ends differ more in height than the tape is long.",
            where=f"Length {slope:g} m, rise {rise:g} m.",
            do="Check both numbers.",
        )
    return math.sqrt((slope - rise) * (slope + rise))


def normal_tension_n(length_m: float, tape: SteelTape) -> float:
    """The pull at which stretch and sag of one span cancel, in newtons.

    >>> round(normal_tension_n(30.0, SteelTape()), 1)
    127.1
    """
    length = checked.positive("length_m", length_m)
    _check(tape, Pulled(tension_n=tape.standard_n * 2))

    def both(tension: float) -> float:
        stretch = (
            (tension - tape.standard_n)
            * length
            / (tape.area_mm2 * tape.modulus_gpa * 1000)
        )
        weight = tape.weight_n_per_m
        return stretch - weight**2 * length**3 / (24 * tension**2)

    low, high = tape.standard_n, tape.standard_n * 2
    while both(high) < 0:
        high *= 2
    return float(brentq(both, low, high, xtol=1e-9))


def _sag(length: float, weight: float, used: Pulled) -> float:
    """Chord less arc over all spans; the last span may be shorter."""
    if used.span_m == 0:
        return 0.0
    spans, rest = divmod(length, used.span_m)
    total = spans * used.span_m**3 + rest**3
    sag = -(weight**2) * total / (24 * used.tension_n**2)
    if weight * used.span_m > 2 * used.tension_n:
        raise OutOfRange(
            "The pull is too weak for the span: the tape would hang in a loop.",
            where=f"Pull {used.tension_n:g} N over {used.span_m:g} m.",
            do="Pull harder or support it in between.",
        )
    return sag


def _check(tape: SteelTape, used: Pulled) -> None:
    for name in ("nominal_m", "true_m", "area_mm2", "modulus_gpa", "weight_n_per_m"):
        checked.positive(name, getattr(tape, name))
    checked.positive("tension_n", used.tension_n)
    checked.number("temperature_c", used.temperature_c)
    if checked.number("span_m", used.span_m) < 0:
        raise OutOfRange("span_m must not be negative.", do="Give 0 for on the ground.")
