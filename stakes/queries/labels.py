"""What goes on the wood: the label in trade form, and the same in plain words.

Cut and fill are computed from whole nanometres and rounded once, here.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime

from geometry.units import Length, Unit, feet_inches
from stakes.kinds.planning import MarksPlanned, PlannedMark
from stakes.models import Mark
from stakes.record import reading
from stakes.record.lengths import Measured


@dataclass(frozen=True, slots=True)
class Label:
    """The words on the stake, in the order they are written, and their plain twin."""

    lines: tuple[str, ...]
    plain: str
    cut: Measured | None

    @property
    def text(self) -> str:
        return " / ".join(self.lines)


def places(unit: Unit) -> int:
    """Decimals of a grade on a label: 0.01 ft or 1 mm."""
    return 2 if unit.is_foot else 3


def cut_of(mark: Mark, hub: Measured | None, unit: Unit) -> Measured | None:
    """Hub less design, positive for a cut; exact, its text rounded once."""
    if hub is None or not mark.elevation_nm:
        return None
    exact = int(hub.nm) - int(mark.elevation_nm)
    return Measured.of(Length.from_nanometres(exact, unit, places(unit)))


def grade_words(cut: Measured) -> tuple[str, str]:
    """`C` or `F` and the digits, as they are written: ("C", "1.07").

    A cut that rounds to nothing is on grade: ("", "0.00").
    """
    digits = cut.text.lstrip("-")
    if float(digits) == 0:
        return "", digits
    return ("F" if cut.text.startswith("-") else "C"), digits


def label_for(
    mark: Mark,
    planned: PlannedMark | None,
    hub: Measured | None,
    unit: Unit,
    *,
    at: datetime,
    initials: str = "",
) -> Label:
    """The label of a stake set for a mark, with its hub at an elevation."""
    cut = cut_of(mark, hub, unit)
    offset = planned.offset if planned else None
    lines = [
        " ".join(part for part in (mark.label, mark.sort) if part),
        _offset_line(mark, offset, unit),
        _grade_line(mark, cut, unit),
        _hub_line(hub, unit),
        " ".join(part for part in (f"{at:%Y-%m-%d}", initials) if part),
    ]
    said = tuple(line for line in lines if line)
    return Label(said, _plain(mark, offset, cut, unit), cut)


def planned_row(mark: Mark) -> PlannedMark | None:
    """The row of the plan a mark was last issued by: it holds the offset."""
    found = None
    for counted in reading.entries(
        mark.record, mark=mark.key, kinds=[MarksPlanned.KIND]
    ):
        fact = counted.fact
        assert isinstance(fact, MarksPlanned)
        found = next((r for r in fact.rows if r.mark == mark.key), found)
    return found


def initials_of(name: str) -> str:
    """Who set it, as short as wood asks for.

    >>> initials_of("Party chief")
    'PC'
    """
    return "".join(part[0].upper() for part in name.split()[:3] if part[0].isalpha())


def _offset_line(mark: Mark, offset: Measured | None, unit: Unit) -> str:
    if offset is None or int(offset.nm) == 0:
        return f"on {mark.line}" if mark.line else ""
    to = f" to {mark.line}" if mark.line else ""
    return f"{_length(offset, unit)} {unit} o/s{to}"


def _grade_line(mark: Mark, cut: Measured | None, unit: Unit) -> str:
    if cut is None:
        return ""
    letter, digits = grade_words(cut)
    to = mark.refers_to or "design"
    return f"{letter} {digits} {unit} to {to}" if letter else f"GRADE = {to}"


def _hub_line(hub: Measured | None, unit: Unit) -> str:
    if hub is None:
        return ""
    return f"hub el {hub.length.shown(unit, places(unit))}"


def _plain(
    mark: Mark, offset: Measured | None, cut: Measured | None, unit: Unit
) -> str:
    parts = [_walk(mark, offset, unit), _dig(mark, cut, unit)]
    said = ", then ".join(part for part in parts if part)
    return f"{said[:1].upper()}{said[1:]}." if said else ""


def _walk(mark: Mark, offset: Measured | None, unit: Unit) -> str:
    if offset is None or int(offset.nm) == 0:
        return ""
    where = mark.line or "the line it was offset from"
    return f"measure {_twin(offset, unit)} LEVEL toward {where}"


def _dig(mark: Mark, cut: Measured | None, unit: Unit) -> str:
    if cut is None:
        return ""
    letter, _ = grade_words(cut)
    to = mark.refers_to or "the design elevation"
    if not letter:
        return f"the top of the hub is at {to}"
    size = Measured.of(Length.from_nanometres(abs(int(cut.nm)), unit, places(unit)))
    verb = "dig" if letter == "C" else "fill"
    way = "down" if letter == "C" else "up"
    return f"{verb} {_twin(size, unit)} {way} from the top of the hub to {to}"


def _twin(length: Measured, unit: Unit) -> str:
    """A length with its twin in feet and inches to an eighth, or in millimetres."""
    shown = f"{_length(length, unit)} {unit}"
    if unit.is_foot:
        return f"{shown} ({feet_inches(length.length, 8, unit)})"
    millimetres = int(length.length.shown(unit, 3).replace(".", ""))
    return f"{shown} ({millimetres} mm)"


def _length(length: Measured, unit: Unit) -> str:
    return length.length.shown(unit, places(unit)).lstrip("-")
