"""A length or coordinate as the record keeps it: text as entered, unit, nanometres."""

from __future__ import annotations

from fractions import Fraction

import msgspec

from geometry.units import Length, Unit


class Measured(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """Entered text and unit beside exact whole nanometres, all three as strings.

    Floats are derived for computing (`metres`) and never turned back.
    """

    text: str
    unit: str
    nm: str

    @classmethod
    def of(cls, length: Length) -> Measured:
        return cls(text=length.text, unit=str(length.unit), nm=str(length.nanometres))

    @property
    def length(self) -> Length:
        return Length(self.text, Unit(self.unit), int(self.nm))

    @property
    def metres(self) -> float:
        return float(Fraction(int(self.nm), 10**9))
