"""Stations as texts: 64+27.46 in feet, 1+234.567 in metres, with their region.

A station is a distance along a line written with a plus sign. After a station
equation the same text can name two places, so a region number may follow: 12+50.00 R2
is the station 12+50.00 of the second region. Which place that is, the line knows.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from geometry.errors import NotReadable, OutOfRange
from geometry.units.length import Length, Unit

_STATION = re.compile(
    r"^([+-]?)\s*([0-9]{1,9})\s*\+\s*([0-9]+)(\.[0-9]{0,9})?\s*(?:R([0-9]{1,3}))?$",
    re.IGNORECASE,
)
_MINUS = str.maketrans({"−": "-", "–": "-"})


@dataclass(frozen=True, slots=True)
class Station:
    """A station as a length from zero station, and its region if one was named.

    Regions are printed counting from 1, one more than a stationing table's index;
    None where no equation makes the text ambiguous.

    >>> station = Station.parse("64+27.46", Unit.FOOT)
    >>> station.value.text, station.region, station.shown(Unit.FOOT)
    ('6427.46', None, '64+27.46')
    """

    value: Length
    region: int | None = None

    @classmethod
    def parse(cls, text: str, unit: Unit, full_station: int | None = None) -> Station:
        """Read `text`; a full station is 100 feet or 1000 metres unless given.

        Raises NotReadable, saying what is wrong and what to type.

        >>> Station.parse("1+234.5 R2", Unit.METRE).region
        2
        >>> Station.parse("-0+12.50", Unit.FOOT).value.shown(Unit.FOOT, 2)
        '-12.50'
        """
        places = _places(unit, full_station)
        example = f"Write {'12+' + '3456'[:places]}.50."
        match = _STATION.match(text[:41].translate(_MINUS).strip())
        if match is None or len(text) > 40:
            raise _refuse(text, "It is not a number, a plus and a number.", example)
        sign, full, rest, decimals, region = match.groups()
        if len(rest) != places:
            raise _refuse(
                text, f"There must be {places} digits between + and point.", example
            )
        if region == "0":
            raise _refuse(text, "Regions count from 1.", example)
        number = f"{sign}{int(full + rest)}{decimals or ''}".rstrip(".")
        return cls(Length.parse(number, unit), int(region) if region else None)

    def shown(
        self, unit: Unit, decimals: int = 2, full_station: int | None = None
    ) -> str:
        """The station in `unit`, rounded once, carrying into the full stations.

        >>> Station(Length.parse("6399.996", Unit.FOOT), 2).shown(Unit.FOOT)
        '64+00.00 R2'
        """
        places = _places(unit, full_station)
        number = self.value.shown(unit, decimals)
        sign = "-" if number.startswith("-") else ""
        whole, point, part = number.lstrip("-").partition(".")
        whole = whole.rjust(places + 1, "0")
        region = f" R{self.region}" if self.region else ""
        return f"{sign}{whole[:-places]}+{whole[-places:]}{point}{part}{region}"


def _places(unit: Unit, full_station: int | None) -> int:
    full = full_station or (100 if unit.is_foot else 1000)
    if full not in (10, 100, 1000):
        raise OutOfRange(
            "A full station is 10, 100 or 1000 units.", where=f"It is {full}."
        )
    return len(str(full)) - 1


def _refuse(text: str, why: str, do: str) -> NotReadable:
    shown = text if len(text) <= 40 else text[:20] + "…"
    return NotReadable(f"“{shown}” cannot be read as a station.", where=why, do=do)
