"""A row of a plan before it is issued, read from texts with a sentence for each fault.

The same reading serves a form's table, pasted text and a file, so that a fault is
called the same everywhere.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any, get_args
from uuid import UUID

import msgspec

from geometry.errors import GeometryError
from geometry.units import Length, Unit
from stakes.kinds.planning import PlannedMark
from stakes.kinds.words import Carries, Purpose
from stakes.record.lengths import Measured

LONGEST = {
    "label": 60,
    "sort": 40,
    "stage": 40,
    "line": 80,
    "words": 200,
    "refers_to": 80,
    "tolerance": 60,
    "lasts": 40,
}
LENGTHS = ("northing", "easting", "elevation", "offset")
NAMES = {
    "label": "number",
    "refers_to": "what cut and fill refer to",
    "lasts": "how long it must last",
    "line": "line",
    "words": "remark",
    "sort": "sort of stake",
    "stage": "stage",
    "tolerance": "tolerance class",
}
LEGAL = ("legal monument", "property corner", "boundary", "section corner")


class Complaint(msgspec.Struct, frozen=True):
    """What is wrong in one row (or line of a file); a grave one keeps it out."""

    row: int
    field: str
    what: str
    grave: bool = True

    @property
    def sentence(self) -> str:
        return self.said("Row")

    def said(self, noun: str) -> str:
        """What is wrong and where: in a row of a form, in a line of a file."""
        return f"{noun} {self.row}: {self.what}" if self.row else self.what


class Row(msgspec.Struct, frozen=True, kw_only=True):
    """One planned mark as somebody wrote it; `row` is where."""

    row: int
    label: str
    purpose: Purpose = "stake"
    carries: Carries = "both"
    northing: Measured | None = None
    easting: Measured | None = None
    elevation: Measured | None = None
    sort: str = ""
    stage: str = ""
    line: str = ""
    words: str = ""
    offset: Measured | None = None
    refers_to: str = ""
    tolerance: str = ""
    lasts: str = ""
    basis: tuple[UUID, ...] = ()

    def planned(self, mark: UUID, moved: bool) -> PlannedMark:
        """The row as the record keeps it."""
        said = {f: getattr(self, f) for f in self.__struct_fields__ if f != "row"}
        return PlannedMark(mark=mark, moved=moved, **said)

    @property
    def is_control(self) -> bool:
        return self.purpose in ("control", "benchmark")


def to_data(rows: Sequence[Row]) -> list[dict[str, Any]]:
    """Rows as plain data for a draft; what is empty is left out."""
    return [
        {k: v for k, v in row.items() if v not in ("", None, [])}
        for row in msgspec.json.decode(msgspec.json.encode(list(rows)))
    ]


def from_data(data: Sequence[Mapping[str, Any]]) -> list[Row]:
    return msgspec.convert(list(data), list[Row])


def read_row(
    written: Mapping[str, str],
    unit: Unit,
    row: int,
    basis: Sequence[UUID] = (),
    *,
    decimal_comma: bool = False,
) -> tuple[Row | None, list[Complaint]]:
    """The row that was written, and what is wrong with it; None when it cannot stand."""
    wrong: list[Complaint] = []
    texts = {name: _text(written, name, row, wrong) for name in LONGEST}
    lengths = {
        name: _length(written, name, unit, row, wrong, decimal_comma)
        for name in LENGTHS
    }
    purpose = _choice(written, "purpose", Purpose, "stake", row, wrong)
    carries = _carries(written, lengths, purpose, row, wrong)
    if not texts["label"]:
        wrong.append(Complaint(row, "label", "It has no number. Give it one."))
    said = {c.field for c in wrong}
    missing = _missing(texts["label"] or "it", carries, lengths, row)
    wrong += [c for c in missing if c.field not in said]
    if purpose == "stake" and any(w in texts["sort"].casefold() for w in LEGAL):
        wrong.append(
            Complaint(
                row,
                "sort",
                f"{texts['label']} is a legal monument. It is set and set again by the "
                "licensed surveyor under their own rules, and is no stake of a plan.",
            )
        )
    if any(c.grave for c in wrong):
        return None, wrong
    return (
        Row(
            row=row,
            purpose=purpose,  # type: ignore[arg-type]
            carries=carries,  # type: ignore[arg-type]
            basis=tuple(basis),
            **texts,
            **lengths,
        ),
        wrong,
    )


def _text(
    written: Mapping[str, str], name: str, row: int, wrong: list[Complaint]
) -> str:
    text = " ".join(str(written.get(name, "")).replace("\x00", "").split())
    if len(text) > LONGEST[name]:
        what = NAMES[name]
        wrong.append(
            Complaint(
                row,
                name,
                f"The {what} has {len(text)} letters. Say it in {LONGEST[name]}.",
            )
        )
    return text


def _length(
    written: Mapping[str, str],
    name: str,
    unit: Unit,
    row: int,
    wrong: list[Complaint],
    decimal_comma: bool,
) -> Measured | None:
    text = str(written.get(name, "")).strip()
    if not text:
        return None
    try:
        return Measured.of(Length.parse(text[:60], unit, decimal_comma=decimal_comma))
    except GeometryError as error:
        wrong.append(Complaint(row, name, f"The {name} cannot be read: {error}"))
        return None


def _choice(
    written: Mapping[str, str],
    name: str,
    words: Any,
    usual: str,
    row: int,
    wrong: list[Complaint],
) -> str:
    text = str(written.get(name, "")).strip().casefold() or usual
    if text not in get_args(words):
        listed = ", ".join(get_args(words))
        wrong.append(
            Complaint(row, name, f"{text[:30]!r} is no {name}. It is one of {listed}.")
        )
        return usual
    return text


def _carries(
    written: Mapping[str, str],
    lengths: Mapping[str, Measured | None],
    purpose: str,
    row: int,
    wrong: list[Complaint],
) -> str:
    """What the row says it carries, or what it has numbers for."""
    if str(written.get("carries", "")).strip():
        return _choice(written, "carries", Carries, "both", row, wrong)
    if purpose == "benchmark":
        return "elevation"
    if lengths["elevation"] is None:
        return "position"
    there = lengths["northing"] is not None or lengths["easting"] is not None
    return "both" if there else "elevation"


def _missing(
    label: str, carries: str, lengths: Mapping[str, Measured | None], row: int
) -> list[Complaint]:
    wanted = {
        "both": ("northing", "easting", "elevation"),
        "position": ("northing", "easting"),
        "elevation": ("elevation",),
    }[carries]
    missing = [name for name in wanted if lengths[name] is None]
    said = (
        f"{label} carries {'position and elevation' if carries == 'both' else carries}"
    )
    found = [
        Complaint(row, name, f"{said}, and its {name} is missing.") for name in missing
    ]
    half = (lengths["northing"] is None) != (lengths["easting"] is None)
    if half and not missing:
        name = "northing" if lengths["northing"] is None else "easting"
        found.append(Complaint(row, name, f"{label} has no {name} beside the other."))
    return found
