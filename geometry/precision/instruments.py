"""How well each instrument measures: one-sigma figures, in metres and radians.

Two sigmas must not be confused: that of a *direction* (one pointing) and that of an
*angle* (the difference of two, larger by sqrt 2). Only directions are stored. Brochure
figures hold for a direction in two faces (ISO 17123-3, from memory); one face is worse
by sqrt 2.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, fields

from geometry import checked
from geometry.errors import OutOfRange

ARC_SECOND = math.pi / 648000

LARGEST_FIGURE = 1e6


@dataclass(frozen=True, slots=True)
class TotalStation:
    """Direction in one face, distance as fixed part and ppm, and the centring errors.

    `station_centring_m` counts only on an occupied mark, `backsight_centring_m` and
    `target_centring_m` are those of the prisms; `height_sd_m` is that of a measured
    instrument or prism height. `distance_m` is the longest distance to rely on.
    """

    direction_sd_rad: float = 5 * math.sqrt(2) * ARC_SECOND
    zenith_sd_rad: float = 5 * math.sqrt(2) * ARC_SECOND
    distance_sd_m: float = 0.002
    distance_ppm: float = 2.0
    station_centring_m: float = 0.0015
    backsight_centring_m: float = 0.001
    target_centring_m: float = 0.002
    height_sd_m: float = 0.001
    distance_m: float = 300.0

    def __post_init__(self) -> None:
        _sound(self)

    @property
    def angle_sd_rad(self) -> float:
        """Sigma of an angle: two directions."""
        return math.sqrt(2) * self.direction_sd_rad

    def distance_variance(self, distance_m: float) -> float:
        """Variance in m²: fixed and proportional part, squared and added.

        >>> TotalStation().distance_variance(1000.0)
        8e-06
        """
        part = 1e-6 * self.distance_ppm * distance_m
        return self.distance_sd_m**2 + part**2


@dataclass(frozen=True, slots=True)
class Tape:
    """A steel tape held by hand: fixed part, ppm, and its length."""

    sd_m: float = 0.0015
    ppm: float = 50.0
    length_m: float = 30.0

    def __post_init__(self) -> None:
        _sound(self)

    def variance(self, distance_m: float) -> float:
        """Variance in m² of a taped distance."""
        return self.sd_m**2 + (1e-6 * self.ppm * distance_m) ** 2


@dataclass(frozen=True, slots=True)
class StringLine:
    """A string pulled between two marks: how well it is held, and how far."""

    sd_m: float = 0.001
    length_m: float = 60.0

    def __post_init__(self) -> None:
        _sound(self)


@dataclass(frozen=True, slots=True)
class RightAngle:
    """How well a right angle is turned: 150" by a 3-4-5 tape, 60" optical square."""

    sd_rad: float = 150 * ARC_SECOND

    def __post_init__(self) -> None:
        _sound(self)


@dataclass(frozen=True, slots=True)
class Level:
    """A level: one rod reading, a double-run kilometre, and the collimation error
    left in it, which cancels between equal sights."""

    reading_sd_m: float = 0.0007
    per_km_sd_m: float = 0.002
    collimation_rad: float = 1e-5
    sight_m: float = 60.0

    def __post_init__(self) -> None:
        _sound(self)


def one_face(two_face_sd_rad: float) -> float:
    """Sigma of a direction in one face, from the brochure's two-face figure.

    >>> round(one_face(5.0), 4)
    7.0711
    """
    return math.sqrt(2) * checked.positive("two-face sigma", two_face_sd_rad)


def _sound(instrument: TotalStation | Tape | StringLine | RightAngle | Level) -> None:
    """Every figure is finite, not negative and not absurd; else OutOfRange."""
    for part in fields(instrument):
        name = f"{part.name} of a {type(instrument).__name__}"
        value = checked.not_negative(name, getattr(instrument, part.name))
        if value > LARGEST_FIGURE:
            raise OutOfRange(f"{name} is too large.", where=f"It is {value:g}.")
