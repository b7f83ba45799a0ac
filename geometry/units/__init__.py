"""Units of length and the texts people write them in.

What is a length?
    Unit    metre, international foot, US survey foot, exactly
    Length  the text as entered, its unit, and whole nanometres
"""

from __future__ import annotations

from geometry.units.length import Length
from geometry.units.unit import Unit

__all__ = ["Length", "Unit"]
