"""Zones and lines on a plan: ground before buildings, each with its own outline."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from shapely.geometry import Polygon
from shapely.ops import polylabel

from stakes.drawings.colours import COLOURS
from stakes.drawings.frame import Frame, Point
from stakes.drawings.svg import path, tag, words


@dataclass(frozen=True, slots=True)
class DrawnZone:
    """A polygon or line on the plan, its corners as (E, N) in metres."""

    corners_m: Sequence[Point]
    sort: str
    name: str
    closed: bool = True
    words: str = ""


_DRAWN_FIRST = ("property", "setback", "haul road", "excavation", "keep-out")

_STYLES: dict[str, dict[str, str | float | None]] = {
    "footprint": {
        "stroke": COLOURS["ink"],
        "stroke_width": 2.4,
        "fill": COLOURS["paper"],
    },
    "excavation": {"stroke": COLOURS["limit"], "stroke_width": 1.2},
    "haul road": {"stroke": COLOURS["retired"], "fill": COLOURS["haul-road"]},
    "keep-out": {"stroke": COLOURS["disturbed"], "stroke_width": 1.2},
    "property": {"stroke": COLOURS["quiet"], "stroke_width": 1.6},
    "setback": {"stroke": COLOURS["quiet"], "stroke_width": 1},
    "line": {"stroke": COLOURS["pink"], "stroke_width": 1},
    "obstacle": {"stroke": COLOURS["quiet"], "fill": COLOURS["grid"]},
}
_DASHES = {
    "excavation": "7 4",
    "haul road": "2 4",
    "keep-out": "10 4",
    "property": "14 4 3 4",
    "setback": "6 4",
    "line": "12 3 3 3",
}


def in_order(zones: Sequence[DrawnZone]) -> list[DrawnZone]:
    """Ground before buildings, so that nothing that matters is covered."""

    def place(zone: DrawnZone) -> int:
        known = zone.sort in _DRAWN_FIRST
        return _DRAWN_FIRST.index(zone.sort) if known else len(_DRAWN_FIRST)

    return sorted(zones, key=place)


def zone(frame: Frame, shown: DrawnZone, prefix: str) -> str:
    corners = [frame.xy((c[0], c[1])) for c in shown.corners_m]
    style = {"fill": "none", "stroke": COLOURS["quiet"], **_STYLES.get(shown.sort, {})}
    if shown.sort in ("excavation", "keep-out") and shown.closed:
        style["fill"] = f"url(#{prefix}-{shown.sort})"
    if not shown.closed:
        style["fill"] = "none"
    outline = tag(
        "path",
        d=path(corners, shown.closed),
        stroke_dasharray=_DASHES.get(shown.sort),
        **style,
    )
    return tag(
        "g",
        words("title", f"{shown.sort} {shown.name}"),
        outline,
        _zone_name(corners, shown),
        class_="zone",
        data_sort=shown.sort,
    )


def _zone_name(corners: Sequence[Point], zone: DrawnZone) -> str:
    (x, y), _anchor = _inside(corners), "middle"
    if zone.sort in ("excavation", "property", "setback", "line"):
        # Named at an edge: the middle belongs to the building.
        x, y, _anchor = corners[0][0] + 6, corners[0][1] + 14, "start"
    said = zone.words or zone.name
    return words(
        "text",
        said,
        x=x,
        y=y,
        font_size=11,
        fill=COLOURS["quiet"],
        data_ink_fill="quiet",
    )


def _inside(corners: Sequence[Point]) -> Point:
    """A point well inside, also where the middle of the corners falls into a notch."""
    if len(corners) < 3:
        return corners[0]
    shape = Polygon(corners)
    if not shape.is_valid or shape.area == 0:
        return corners[0]
    plump = shape.area > 0.9 * shape.convex_hull.area
    spot = shape.centroid if plump else polylabel(shape, 4.0)
    return float(spot.x), float(spot.y)


def hatching(prefix: str) -> str:
    return tag(
        "defs",
        *(
            tag(
                "pattern",
                tag("path", d="M0,9L9,0", stroke=COLOURS[ink], stroke_width=0.7),
                id=f"{prefix}-{sort}",
                width=9,
                height=9,
                patternUnits="userSpaceOnUse",
            )
            for sort, ink in (("excavation", "limit"), ("keep-out", "disturbed"))
        ),
    )
