"""Marks as GeoJSON (RFC 7946), with the place in the properties.

GeoJSON geometry is longitude and latitude on WGS 84 and nothing else. Coordinates of a
job stand in its own frame and no transformation out of it is stated here, so that the
geometry is null; northing, easting and elevation stand beside it as texts, with unit and
frame, and nobody can mistake them for degrees.
"""

from __future__ import annotations

import json
from typing import Any

from stakes.exchange.writing import as_of_entry, in_unit
from stakes.queries.drawing import UNIT_NAMES, in_order
from stakes.queries.state import JobState, MarkView


def geojson(state: JobState, frame: str = "") -> str:
    """Every mark as a feature; `frame` as the sheets name it, empty: not recorded."""
    beside = {
        "job": state.record.number,
        "unit": UNIT_NAMES[state.record.unit],
        "frame": frame or None,
        "as_of_entry": as_of_entry(state),
    }
    features = [
        _feature(view, state, beside) for view in in_order(state.marks.values())
    ]
    collection = {"type": "FeatureCollection", **beside, "features": features}
    return json.dumps(collection, ensure_ascii=False)


def _feature(view: MarkView, state: JobState, beside: dict[str, Any]) -> dict[str, Any]:
    plan, unit = view.plan, state.record.length_unit
    return {
        "type": "Feature",
        "id": str(view.key),
        "geometry": None,
        "properties": {
            "number": view.label,
            "northing": in_unit(plan.northing_nm, unit) or None,
            "easting": in_unit(plan.easting_nm, unit) or None,
            "elevation": in_unit(plan.elevation_nm, unit) or None,
            **beside,
            "purpose": plan.purpose,
            "carries": plan.carries,
            "sort": plan.sort,
            "line": plan.line,
            "stage": plan.stage,
            "standing": str(view.standing),
            "trust": str(view.trust.trust),
            "held": view.held_back,
        },
    }
