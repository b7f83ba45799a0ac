"""Reading angles, azimuths and bearings as people write them.

A plain decimal such as 30.1520 is refused in a job that writes degrees, minutes and
seconds: it may be decimal degrees or 30°15'20" packed, and nothing tells which.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass, field
from fractions import Fraction

from geometry.errors import NotReadable
from geometry.units.angles import SECONDS_PER_TURN, AngleUnit

LONGEST_TEXT = 40
_SAME = str.maketrans(
    {
        "−": "-",
        "–": "-",
        "º": "°",
        "˚": "°",
        "’": "'",
        "′": "'",
        "”": '"',
        "″": '"',
        "\u00a0": " ",
    }
)
_NUMBER = r"([0-9]+(?:\.[0-9]*)?|\.[0-9]+)"
_PLAIN = re.compile(rf"^{_NUMBER}\s*(°|gon|g|deg)?$")
_MARKED = re.compile(
    rf"^([0-9]+)\s*[°d]\s*(?:([0-9]+)\s*['m]\s*(?:{_NUMBER}\s*[\"s])?|{_NUMBER}\s*')$"
)
_SPLIT = re.compile(rf"^([0-9]+)(?:-|\s+)([0-9]+)(?:(?:-|\s+){_NUMBER})?$")
_BEARING = re.compile(r"^(n|s)(.+?)\s*(e|w)$")
_DUE = re.compile(r"^due\s+(n|e|s|w)(?:orth|ast|outh|est)?$")
_EXAMPLE = "Write 30°15'20\", 30-15-20, 30.25° or 33.6 gon."
_BEARING_EXAMPLE = "Write N 30°15'20\" E."


@dataclass(frozen=True, slots=True, order=True)
class Angle:
    """An angle: `text` as entered and the exact `seconds` of arc it writes.

    Angles are equal, and ordered, by their seconds alone.

    >>> angle = Angle.parse("30-15-20.5", AngleUnit.DMS)
    >>> angle.seconds, round(angle.radians, 9)
    (Fraction(217841, 2), 0.528061486)
    """

    text: str = field(compare=False)
    seconds: Fraction

    @classmethod
    def parse(cls, text: str, unit: AngleUnit = AngleUnit.DMS) -> Angle:
        """Read a signed angle of at most a turn; `unit` is what a plain number means.

        Raises NotReadable, saying what is wrong and what to type.

        >>> Angle.parse("-0°30'").seconds, Angle.parse("100", AngleUnit.GON).seconds
        (Fraction(-1800, 1), Fraction(324000, 1))
        """
        plain = _plain(text)
        sign = -1 if plain.startswith("-") else 1
        return cls(text.strip(), sign * _unsigned(text, plain.lstrip("+-"), unit))

    @classmethod
    def parse_direction(cls, text: str, unit: AngleUnit = AngleUnit.DMS) -> Angle:
        """Read an azimuth or a quadrant bearing as an azimuth from 0 to a turn.

        Raises NotReadable.

        >>> Angle.parse_direction("S 29°38' E").seconds == (150 * 60 + 22) * 60
        True
        >>> Angle.parse_direction("due west").seconds == 270 * 3600
        True
        """
        plain = _plain(text)
        due, quadrant = _DUE.match(plain), _BEARING.match(plain)
        if due is not None:
            seconds = Fraction("nesw".index(due.group(1)) * SECONDS_PER_TURN, 4)
        elif quadrant is not None:
            seconds = _bearing(text, quadrant, unit)
        elif plain.startswith("-"):
            raise _refuse(text, "A direction has no sign.", "Write 0 to 360 degrees.")
        else:
            seconds = _unsigned(text, plain, unit)
        return cls(text.strip(), seconds % SECONDS_PER_TURN)

    @property
    def radians(self) -> float:
        """Radians as a float, for computing."""
        return float(self.seconds) * math.pi / 648000.0


def _plain(text: str) -> str:
    if len(text) > LONGEST_TEXT:
        raise _refuse(text[:20] + "…", "It is too long for an angle.", _EXAMPLE)
    plain = text.translate(_SAME).strip().lower().replace("''", '"')
    if not plain:
        raise _refuse(text, "It is empty.", _EXAMPLE)
    return plain


def _bearing(text: str, quadrant: re.Match[str], unit: AngleUnit) -> Fraction:
    side, angle, way = quadrant.groups()
    if angle.strip().startswith("-"):
        angle = angle.strip()[1:]
    seconds = _unsigned(text, angle.rstrip("- "), unit)
    quarter = Fraction(SECONDS_PER_TURN, 4)
    if seconds > quarter:
        raise _refuse(text, "A bearing is at most 90 degrees.", _BEARING_EXAMPLE)
    if side == "n":
        return seconds if way == "e" else SECONDS_PER_TURN - seconds
    return 2 * quarter - seconds if way == "e" else 2 * quarter + seconds


def _unsigned(text: str, plain: str, unit: AngleUnit) -> Fraction:
    plain = plain.strip()
    single = _PLAIN.match(plain)
    if single is not None:
        seconds = _single(text, single.group(1), single.group(2), unit)
    else:
        seconds = _sexagesimal(text, plain)
    if seconds > SECONDS_PER_TURN:
        raise _refuse(text, "It is more than a full turn.", _EXAMPLE)
    return seconds


def _single(text: str, number: str, mark: str | None, unit: AngleUnit) -> Fraction:
    value = Fraction(number + "0" if number.endswith(".") else number)
    if mark in ("gon", "g") or (mark is None and unit is AngleUnit.GON):
        return value * SECONDS_PER_TURN / 400
    if mark is None and unit is AngleUnit.DMS and value.denominator != 1:
        raise _refuse(
            text,
            "A plain decimal may be decimal degrees or minutes and seconds packed.",
            _EXAMPLE,
        )
    return value * 3600


def _sexagesimal(text: str, plain: str) -> Fraction:
    match = _MARKED.match(plain)
    if match is not None:
        degrees, minutes, seconds, decimal_minutes = match.groups()
        return _summed(text, degrees, minutes or decimal_minutes, seconds)
    match = _SPLIT.match(plain)
    if match is None:
        raise _refuse(text, "It is not an angle as the job writes them.", _EXAMPLE)
    return _summed(text, *match.groups())


def _summed(text: str, degrees: str, minutes: str, seconds: str | None) -> Fraction:
    parts = [
        Fraction(part + "0" if part.endswith(".") else part)
        for part in (minutes, seconds or "0")
    ]
    if max(parts) >= 60:
        raise _refuse(text, "Its minutes or seconds are 60 or more.", _EXAMPLE)
    return (int(degrees) * 60 + parts[0]) * 60 + parts[1]


def _refuse(text: str, why: str, do: str) -> NotReadable:
    return NotReadable(f"“{text}” cannot be read as an angle.", where=why, do=do)
