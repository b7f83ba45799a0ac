"""Points out: comma text and GeoJSON of marks, as the record has them at a moment."""

from __future__ import annotations

import csv
import io
import json
from collections.abc import Iterable
from typing import Any

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
    known = state.known if state.known is not None else state.record.head
    for view in in_order(state.marks.values()):
        writer.writerow([*map(safe, _cells(view, state)), known])
    return out.getvalue()


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


def geojson(state: JobState) -> str:
    """Marks with a place as points. Coordinates are easting, northing and elevation in
    the job's own frame and unit, which is said beside them: not longitude, latitude."""
    features = [
        feature
        for view in in_order(state.marks.values())
        if (feature := _feature(view, state)) is not None
    ]
    known = state.known if state.known is not None else state.record.head
    return json.dumps(
        {
            "type": "FeatureCollection",
            "job": state.record.number,
            "unit": UNIT_NAMES[state.record.unit],
            "axes": ["easting", "northing", "elevation"],
            "as_of_entry": known,
            "features": features,
        },
        ensure_ascii=False,
    )


def _feature(view: MarkView, state: JobState) -> dict[str, Any] | None:
    north, east, up = (in_unit(nm, state.record.length_unit) for nm in _places(view))
    if not north or not east:
        return None
    return {
        "type": "Feature",
        "id": str(view.key),
        "geometry": {"type": "Point", "coordinates": _numbers(east, north, up)},
        "properties": {
            "number": view.label,
            "purpose": view.plan.purpose,
            "carries": view.plan.carries,
            "line": view.plan.line,
            "stage": view.plan.stage,
            "standing": str(view.standing),
            "trust": str(view.trust.trust),
            "held": view.held_back,
        },
    }


def _numbers(*texts: str) -> Iterable[float]:
    return [float(text) for text in texts if text]
