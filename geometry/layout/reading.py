"""From the arguments of a plan to its scene: checked, in local metres."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange
from geometry.layout.direction import enclosing_rectangle, principal_direction
from geometry.layout.excavation import Excavation, Ground, Soil, excavation
from geometry.layout.gridlines import Gridline, with_gridlines
from geometry.layout.keepouts import Barrier, allowed_ground, read_property
from geometry.layout.lines import wall_lines
from geometry.layout.outline import Outline
from geometry.layout.placing import WINDOW
from geometry.layout.scene import Rules, Scene
from geometry.layout.words import Say

FARTHEST_M = 1000.0
MOST_STEPS = 1e4


def read_rules(
    *,
    least_offset_m: float,
    step_m: float,
    one_value: bool,
    clearance_m: float,
    reach_m: float,
    chord_tolerance_m: float,
    stake_sd_m: float,
    say: Say,
) -> Rules:
    """The rules of a plan; OutOfRange or NotFinite for a length that cannot be."""
    offset = _bounded("offset", checked.positive("offset", least_offset_m))
    step = _bounded("step", checked.positive("step", step_m))
    if max(offset, FARTHEST_M / 10) / step > MOST_STEPS:
        raise OutOfRange(
            "The step is too small to mean anything.", do="Check the unit."
        )
    return Rules(
        least_offset_m=offset,
        step_m=step,
        one_value=one_value,
        clearance_m=_bounded("clearance", clearance_m),
        reach_m=_bounded("reach", reach_m),
        chord_tolerance_m=checked.positive("chord tolerance", chord_tolerance_m),
        stake_sd_m=checked.positive("stake's standard deviation", stake_sd_m),
        say=say,
    )


def _bounded(name: str, value: float) -> float:
    number = checked.number(name, value)
    if not 0 <= number <= FARTHEST_M:
        raise OutOfRange(
            f"The {name} must lie between 0 and {FARTHEST_M:g} m.",
            where=f"It is {number:g} m.",
        )
    return number


def read_excavation(
    outline: Outline,
    barriers: tuple[Barrier, ...],
    rules: Rules,
    depth_m: float,
    workspace_m: float,
    soil: Soil | None,
    conditions: Iterable[Ground],
) -> Excavation:
    """The excavation limit; a structure that its slope would undercut is noticed."""
    given = {Ground(c) for c in conditions}
    polygon = outline.polygon
    if outline.is_curved:  # chords cut inside a wall that bows out
        polygon = polygon.buffer(rules.chord_tolerance_m, join_style="mitre")
    dig = excavation(
        polygon,
        depth_m=depth_m,
        workspace_m=workspace_m,
        soil=soil,
        conditions=sorted(given),
    )
    near = any(b.is_structure and b.shape.intersects(dig.polygon) for b in barriers)
    if not near or Ground.BESIDE_STRUCTURE in given:
        return dig
    return excavation(
        polygon,
        depth_m=depth_m,
        workspace_m=workspace_m,
        soil=soil,
        conditions=sorted(given | {Ground.BESIDE_STRUCTURE}),
    )


def read_scene(
    outline: Outline,
    rules: Rules,
    dig: Excavation,
    barriers: tuple[Barrier, ...],
    property_line: ArrayLike | None,
    gridlines: Sequence[Gridline],
) -> Scene:
    """Direction, rectangle, lines and allowed ground for what was read."""
    origin = np.asarray(outline.origin)
    direction = principal_direction(outline.straight_edges())
    rectangle = None
    if direction.is_coherent:
        rectangle = enclosing_rectangle(footprint_ring(outline), direction.azimuth_rad)
    lines = with_gridlines(wall_lines(outline), gridlines, rectangle, origin)
    farthest = max(rules.least_offset_m, dig.reach_m + rules.clearance_m)
    horizon = 2 * (farthest + WINDOW * rules.step_m) + rules.reach_m
    return Scene(
        outline=outline,
        direction=direction,
        rectangle=rectangle,
        lines=lines,
        excavation=dig,
        allowed=allowed_ground(
            dig.polygon,
            rules.clearance_m,
            read_property(property_line, origin),
            barriers,
            horizon,
        ),
        rules=rules,
    )


def footprint_ring(outline: Outline) -> Array:
    """The outer ring (n, 2; local metres) with curves as chords."""
    return np.asarray(outline.polygon.exterior.coords)[:-1, :2]
