"""What a plan was made from, in local metres, kept so that further sets can be asked."""

from __future__ import annotations

from dataclasses import dataclass

from geometry.layout.direction import EnclosingRectangle, PrincipalDirection
from geometry.layout.excavation import Excavation
from geometry.layout.keepouts import Allowed
from geometry.layout.lines import WallLine
from geometry.layout.outline import Outline
from geometry.layout.words import Say


@dataclass(frozen=True, slots=True)
class Rules:
    """How offsets are chosen; lengths in metres, `say` writes one for a reader.

    `reach_m` is how far beyond its nominal place a stake may be moved out.
    """

    least_offset_m: float
    step_m: float
    one_value: bool
    clearance_m: float
    reach_m: float
    chord_tolerance_m: float
    stake_sd_m: float
    say: Say


@dataclass(frozen=True, slots=True)
class Scene:
    """Everything the placing of stakes needs. `rectangle` is None when the walls
    agree on no direction; offsets then count from the last wall on each line."""

    outline: Outline
    direction: PrincipalDirection
    rectangle: EnclosingRectangle | None
    lines: tuple[WallLine, ...]
    excavation: Excavation
    allowed: Allowed
    rules: Rules

    @property
    def middle(self) -> tuple[float, float]:
        if self.rectangle is not None:
            return self.rectangle.centre
        spot = self.outline.polygon.centroid
        return float(spot.x), float(spot.y)
