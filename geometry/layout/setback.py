"""How close a building comes to its property line, and what uses the room up.

Clearance of each footprint corner and edge to the line, with the uncertainty of the
layout, and the rotation of the building about its middle at which the room is gone.
"""

from __future__ import annotations

import itertools
import math
from dataclasses import dataclass

import shapely
import shapely.affinity
import shapely.ops
from numpy.typing import ArrayLike

from geometry import checked
from geometry.errors import BadOutline
from geometry.verdicts import Verdict

ONE_SIDED_95 = 1.6449
"""Standard normal quantile: the share of layouts that keep the setback."""


@dataclass(frozen=True, slots=True)
class Setback:
    """The least distance from footprint to property line beside what is required.

    `spare_m` is what is left; `uses_up_rad` the smaller rotation about the building's
    middle that uses it up (None when none within a quarter turn does).
    """

    clearance_m: float
    required_m: float
    spare_m: float
    uncertainty_m: float
    verdict: Verdict
    nearest_building: tuple[float, float]
    nearest_line: tuple[float, float]
    uses_up_rad: float | None
    reason: str


def setback_clearance(
    footprint: ArrayLike,
    property_line: ArrayLike,
    required_m: float,
    *,
    layout_sd_m: float = 0.0,
) -> Setback:
    """Clearance of a footprint inside its property line (n, 2; E, N metres each).

    `required_m` is the setback, `layout_sd_m` the standard deviation of a laid-out
    corner across the line. Passes when the spare exceeds 1.645 of it, fails when it
    lacks that much, undecided between.

    Raises BadOutline for a figure that crosses itself or has no area; NotFinite,
    WrongShape, OutOfRange for bad numbers.

    >>> site = [(0, 0), (40, 0), (40, 30), (0, 30)]
    >>> house = [(6, 6), (30, 6), (30, 24), (6, 24)]
    >>> s = setback_clearance(house, site, 5.0, layout_sd_m=0.01)
    >>> round(s.clearance_m, 3), round(s.spare_m, 3), str(s.verdict)
    (6.0, 1.0, 'pass')
    """
    house = _figure("footprint", footprint)
    site = _figure("property line", property_line)
    required = checked.number("required_m", required_m)
    sd = checked.number("layout_sd_m", layout_sd_m)
    clearance = _clearance(house, site)
    spare = clearance - required
    near, line = shapely.ops.nearest_points(house, site.exterior)
    verdict = _verdict(spare, sd)
    return Setback(
        clearance_m=clearance,
        required_m=required,
        spare_m=spare,
        uncertainty_m=sd,
        verdict=verdict,
        nearest_building=(float(near.x), float(near.y)),
        nearest_line=(float(line.x), float(line.y)),
        uses_up_rad=_uses_up(house, site, required) if spare > 0 else 0.0,
        reason=_reason(clearance, required, verdict),
    )


def _figure(name: str, points: ArrayLike) -> shapely.Polygon:
    ring = checked.points(name, points)
    if len(ring) < 3:
        raise BadOutline(f"The {name} has fewer than three corners.")
    figure = shapely.Polygon(ring)
    if not figure.is_valid or figure.area < 1e-6:
        raise BadOutline(
            f"The {name} crosses itself or has no area.",
            do="List its corners once each, in order.",
        )
    return figure


def _clearance(house: shapely.Polygon, site: shapely.Polygon) -> float:
    """Distance to the line; negative by how far the building reaches over it."""
    if site.contains(house):
        return float(house.distance(site.exterior))
    over = house.difference(site)
    return -float(shapely.hausdorff_distance(over, over.intersection(site.exterior)))


def _verdict(spare: float, sd: float) -> Verdict:
    guard = ONE_SIDED_95 * sd
    if spare >= guard:
        return Verdict.PASS
    return Verdict.FAIL if spare <= -guard else Verdict.UNDECIDED


def _uses_up(
    house: shapely.Polygon, site: shapely.Polygon, required: float
) -> float | None:
    """The smaller of the turns either way at which the spare is gone, by bisection."""
    found = [
        turn
        for sense in (1.0, -1.0)
        if (turn := _turn(house, site, required, sense)) is not None
    ]
    return min(found) if found else None


def _turn(
    house: shapely.Polygon, site: shapely.Polygon, required: float, sense: float
) -> float | None:
    def spare(turn: float) -> float:
        turned = shapely.affinity.rotate(
            house, sense * turn, origin="centroid", use_radians=True
        )
        return _clearance(turned, site) - required

    steps = [math.pi / 2 * i / 180 for i in range(181)]
    for low, high in itertools.pairwise(steps):
        if spare(high) <= 0:
            for _ in range(40):
                middle = (low + high) / 2
                low, high = (middle, high) if spare(middle) > 0 else (low, middle)
            return high
    return None


def _reason(clearance: float, required: float, verdict: Verdict) -> str:
    if clearance < 0:
        return "the building reaches over the property line"
    words = {
        Verdict.PASS: "keeps the setback with room for the layout's uncertainty",
        Verdict.FAIL: "is nearer to the property line than the setback allows",
        Verdict.UNDECIDED: "is within the layout's uncertainty of the setback",
    }
    return f"the building {words[verdict]}"
