"""Points out: comma text of marks, as the record has them at a moment."""

from __future__ import annotations

import csv
import io

from geometry.units import Length, Unit
from stakes.queries.drawing import UNIT_NAMES, in_order
from stakes.queries.state import JobState, MarkView

HEADER = (
    "number",
    "northing",
    "easting",
    "elevation",
    "unit",
    "purpose",
    "carries",
    "sort",
    "line",
    "stage",
    "cut and fill to",
    "on the ground",
    "trust",
    "as of entry",
)
_FORMULA = ("=", "+", "-", "@", "\t", "\r")


def comma_text(state: JobState) -> str:
    """All marks of a job as comma text with a header, one a line, ends CR LF."""
    out = io.StringIO(newline="")
    writer = csv.writer(out)
    writer.writerow(HEADER)
    known = as_of_entry(state)
    for view in in_order(state.marks.values()):
        writer.writerow([*map(safe, _cells(view, state)), known])
    return out.getvalue()


def comma_file(state: JobState, frame: str = "") -> str:
    """The same below a comment that says what the columns cannot: job, unit, frame."""
    # One line whatever they are called: a name cannot smuggle in rows of its own.
    job, named = (" ".join(words.split()) for words in (state.record.number, frame))
    unit = UNIT_NAMES[state.record.unit]
    said = f"# job {job}, unit {unit}, frame {named or 'not recorded'}"
    return f"{said}, as of entry {as_of_entry(state)}\r\n{comma_text(state)}"


def as_of_entry(state: JobState) -> int:
    """The number of the last entry a state knows."""
    return state.record.head if state.known is None else state.known


def safe(cell: str) -> str:
    """A cell that no spreadsheet runs as a formula; numbers stay numbers.

    >>> safe("=1+1"), safe("-12.5"), safe("wall")
    ("'=1+1", '-12.5', 'wall')
    """
    if not cell.startswith(_FORMULA):
        return cell
    try:
        float(cell)
    except ValueError:
        return f"'{cell}"
    return cell


def _cells(view: MarkView, state: JobState) -> list[str]:
    plan, unit = view.plan, state.record.length_unit
    return [
        plan.label,
        *(in_unit(nm, unit) for nm in _places(view)),
        str(unit),
        plan.purpose,
        plan.carries,
        plan.sort,
        plan.line,
        plan.stage,
        plan.refers_to,
        str(view.standing),
        str(view.trust.trust),
    ]


def _places(view: MarkView) -> tuple[str, str, str]:
    return view.plan.northing_nm, view.plan.easting_nm, view.plan.elevation_nm


def in_unit(nanometres: str, unit: Unit) -> str:
    """A coordinate in the job's unit to the tenth of a millimetre; empty: none."""
    if not nanometres:
        return ""
    return Length.from_nanometres(int(nanometres), unit, 4).text
