"""Points out of comma text: decoded, split and read line by line, in bounded size.

Nothing is guessed silently: what the file says by itself (its header, its separator,
its encoding) is noted, and everything odd is a complaint with the line it stands in.
"""

from __future__ import annotations

import codecs
import csv
import hashlib
import io
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from uuid import UUID

from geometry.units import Unit
from stakes.exchange.rows import Complaint, Row, read_row

MOST_BYTES = 20 * 1024 * 1024
MOST_LINES = 100_000
MOST_COMPLAINTS = 2000
MOST_COLUMNS = 40
LONGEST_FIELD = 10_000

ORDERS: dict[str, tuple[str, ...]] = {
    "number, northing, easting, elevation, remark": (
        "label",
        "northing",
        "easting",
        "elevation",
        "words",
    ),
    "number, easting, northing, elevation, remark": (
        "label",
        "easting",
        "northing",
        "elevation",
        "words",
    ),
    "northing, easting, elevation, number, remark": (
        "northing",
        "easting",
        "elevation",
        "label",
        "words",
    ),
    "easting, northing, elevation, number, remark": (
        "easting",
        "northing",
        "elevation",
        "label",
        "words",
    ),
    "number, elevation, remark": ("label", "elevation", "words"),
}
BY_HEADER = "as the header says"

_HEADS: dict[str, tuple[str, ...]] = {
    "label": (
        "p",
        "pt",
        "point",
        "no",
        "nr",
        "number",
        "name",
        "id",
        "mark",
        "pointno",
        "ptno",
    ),
    "northing": ("n", "north", "northing", "y"),
    "easting": ("e", "east", "easting", "x"),
    "elevation": ("z", "el", "elev", "elevation", "h", "height", "level"),
    "words": ("d", "desc", "description", "code", "remark", "note", "notes", "text"),
}
NO_ELEVATION = re.compile(r"(-?9{3,}(\.[09]+)?|nan|none|null|n/?a|-+|\*+|\?+)", re.I)
_NUMBER = re.compile(r"\s*[-+]?[\d.,'\s]*\d[\d.,'\s]*\s*(m|ft|ftus)?\s*", re.I)


@dataclass(frozen=True, slots=True)
class Answers:
    """What the file cannot say and a person answers."""

    unit: Unit
    order: str = BY_HEADER
    purpose: str = "stake"
    sort: str = ""
    stage: str = ""
    refers_to: str = ""
    tolerance: str = ""
    frame: str = ""


@dataclass(slots=True)
class Reading:
    """What was read: rows that can stand, complaints by line, and how it was read."""

    sha256: str
    encoding: str = ""
    separator: str = ","
    order: str = ""
    header: tuple[str, ...] = ()
    lines: int = 0
    rows: list[Row] = field(default_factory=list)
    complaints: list[Complaint] = field(default_factory=list)
    left_out: list[int] = field(default_factory=list)
    more_complaints: int = 0

    def complain(self, wrong: Sequence[Complaint]) -> None:
        """Keep complaints, a bounded number of them; the rest are counted."""
        room = max(0, MOST_COMPLAINTS - len(self.complaints))
        self.complaints += wrong[:room]
        self.more_complaints += len(wrong[room:])


class Unreadable(ValueError):
    """The file as a whole cannot be read; the words say why."""


def read_points(data: bytes, answers: Answers, basis: Sequence[UUID] = ()) -> Reading:
    """Read comma text. Raises Unreadable for what is no text, or too much of it.

    >>> read = read_points(b"101,1000.5,2000.25,-9999,corner", Answers(
    ...     Unit.METRE, order="number, northing, easting, elevation, remark"))
    >>> read.rows[0].label, read.rows[0].carries, read.complaints[0].row
    ('101', 'position', 1)
    """
    if len(data) > MOST_BYTES:
        raise Unreadable(f"The file is larger than {MOST_BYTES >> 20} MB.")
    reading = Reading(sha256=hashlib.sha256(data).hexdigest())
    text, reading.encoding = _decoded(data)
    if reading.encoding == "Windows-1252":
        reading.complain([Complaint(0, "", _NOT_UTF8, grave=False)])
    reading.separator = _separator(text)
    columns: tuple[str, ...] = ()
    for line, cells in _records(text, reading):
        if not columns:
            columns, is_header = _columns(cells, answers, reading)
            if is_header:
                continue
        _take(reading, line, cells, columns, answers, basis)
    if not reading.rows and not reading.complaints:
        raise Unreadable("There is no point in it.")
    return reading


_NOT_UTF8 = (
    "The file is not UTF-8; it was read as Windows-1252. Look at accented letters."
)


def _decoded(data: bytes) -> tuple[str, str]:
    for mark, name in (
        (codecs.BOM_UTF8, "utf-8-sig"),
        (codecs.BOM_UTF16_LE, "utf-16"),
        (codecs.BOM_UTF16_BE, "utf-16"),
    ):
        if data.startswith(mark):
            try:
                return data.decode(name), name.upper()
            except UnicodeDecodeError as error:
                raise Unreadable("The file is broken: it is no text.") from error
    if b"\x00" in data:
        raise Unreadable("This is no text file. Save the points as comma text first.")
    try:
        return data.decode("utf-8"), "UTF-8"
    except UnicodeDecodeError:
        return data.decode("cp1252", errors="replace"), "Windows-1252"


def _separator(text: str) -> str:
    """The separator most of the first lines agree on."""
    head = [line for line in text[:20_000].splitlines()[:50] if line.strip()]
    counted = {s: sum(s in line for line in head) for s in (";", "\t", ",")}
    # A semicolon or tab wins over a comma, which may be a decimal sign there.
    for separator in (";", "\t"):
        if head and counted[separator] >= 0.8 * len(head):
            return separator
    return ","


def _records(text: str, reading: Reading) -> Iterator[tuple[int, list[str]]]:
    """Each record with the line it starts in; blank and comment lines are passed."""
    csv.field_size_limit(LONGEST_FIELD)
    source = csv.reader(
        io.StringIO(text, newline=""), delimiter=reading.separator, strict=False
    )
    while True:
        line = source.line_num + 1
        if line > MOST_LINES + 1:
            raise Unreadable(f"The file has more than {MOST_LINES:,} lines.")
        try:
            cells = next(source)
        except StopIteration:
            reading.lines = source.line_num
            return
        except csv.Error as error:
            what = f"This line cannot be split: {error}. Is a quote left open?"
            reading.complain([Complaint(line, "", what)])
            reading.left_out.append(line)
            reading.lines = source.line_num
            return
        if source.line_num > line:
            what = f"A quote opened here closes only in line {source.line_num}."
            reading.complain([Complaint(line, "", what)])
            reading.left_out.append(line)
            continue
        if any(c.strip() for c in cells) and not cells[0].lstrip().startswith("#"):
            yield line, cells


def _columns(
    cells: Sequence[str], answers: Answers, reading: Reading
) -> tuple[tuple[str, ...], bool]:
    """What each column means, and whether this first line is a header."""
    heads = [_head(cell) for cell in cells]
    is_header = _is_header(cells, heads)
    if is_header:
        reading.header = tuple(c.strip()[:40] for c in cells[:MOST_COLUMNS])
    if answers.order == BY_HEADER:
        if not is_header or "label" not in heads:
            raise Unreadable(
                "The first line does not say what the columns are. Choose their order."
            )
        reading.order = ", ".join(h or "not read" for h in heads)
        return tuple(heads), True
    columns = ORDERS[answers.order]
    reading.order = answers.order
    told = [h for h in heads if h in ("northing", "easting")]
    chosen = [c for c in columns if c in ("northing", "easting")]
    if is_header and len(told) == 2 and told != chosen:
        what = (
            f"The header says {told[0]} first, and {chosen[0] if chosen else 'none'} "
            "first was answered."
        )
        reading.complain([Complaint(1, "order", what)])
    return columns, is_header


def _head(cell: str) -> str:
    plain = re.sub(r"[^a-z]", "", cell.casefold())
    return next((name for name, words in _HEADS.items() if plain in words), "")


def _is_header(cells: Sequence[str], heads: Sequence[str]) -> bool:
    numbers = sum(bool(_NUMBER.fullmatch(c)) for c in cells)
    return numbers == 0 and sum(bool(h) for h in heads) >= 2


def _take(
    reading: Reading,
    line: int,
    cells: Sequence[str],
    columns: Sequence[str],
    answers: Answers,
    basis: Sequence[UUID],
) -> None:
    written, notes = _written(line, cells, columns, answers)
    # Where a comma does not separate, it may be the decimal sign.
    comma = reading.separator != ","
    row, wrong = read_row(written, answers.unit, line, basis, decimal_comma=comma)
    reading.complain([*notes, *wrong])
    if row is None or any(n.grave for n in notes):
        reading.left_out.append(line)
    else:
        reading.rows.append(row)


def _written(
    line: int, cells: Sequence[str], columns: Sequence[str], answers: Answers
) -> tuple[Mapping[str, str], list[Complaint]]:
    notes: list[Complaint] = []
    written = {
        name: cell.strip() for name, cell in zip(columns, cells, strict=False) if name
    }
    extra = [c for c in cells[len(columns) : MOST_COLUMNS] if c.strip()]
    if extra and "words" in columns and columns[-1] == "words":
        written["words"] = " ".join([written.get("words", ""), *extra]).strip()
    wanted = [c for c in columns if c in ("northing", "easting")]
    if len(cells) < len(wanted) + 1:
        notes.append(
            Complaint(line, "", f"It has {len(cells)} values. Is a separator missing?")
        )
    height = written.get("elevation", "")
    if NO_ELEVATION.fullmatch(height):
        what = f"Elevation {height} stands for none; the mark carries position only."
        notes.append(Complaint(line, "elevation", what, grave=False))
        written["elevation"] = ""
    elif not height and "elevation" in columns and answers.purpose != "benchmark":
        what = "No elevation; the mark carries position only."
        notes.append(Complaint(line, "elevation", what, grave=False))
    if len(written.get("words", "")) > 200:
        notes.append(
            Complaint(line, "words", "The remark was cut at 200 letters.", False)
        )
        written["words"] = written["words"][:200]
    shared = ("purpose", "sort", "stage", "refers_to", "tolerance")
    return {**{n: getattr(answers, n) for n in shared}, **written}, notes
