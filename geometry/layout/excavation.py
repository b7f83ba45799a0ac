"""The excavation limit that stakes must stay outside of.

Greatest slopes, horizontal to vertical, of 29 CFR 1926 Subpart P Appendix B, Table B-1
(looked up on a secondary page): stable rock vertical, type A 3/4:1, type B 1:1, type C
1 1/2:1, for excavations less than 20 ft deep; type A open at most 24 hours and at most
12 ft deep 1/2:1 (note 2, from memory).

The limit is for placing stakes. It is never an instruction to dig: the competent
person on site classifies the soil and decides.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from enum import StrEnum
from typing import Any

import shapely

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange

TABLE_DEPTH_M = 20 * 0.3048
SHORT_TERM_DEPTH_M = 12 * 0.3048
EDGE_M = 2 * 0.3048
"""Spoil and equipment stay 2 ft from the edge: 29 CFR 1926.651(j)(2) (memory)."""

MITRE_LIMIT = 2.0


class Soil(StrEnum):
    """The competent person's classification."""

    ROCK = "stable rock"
    A = "type A"
    A_SHORT_TERM = "type A, open at most 24 hours"
    B = "type B"
    C = "type C"


RATIO = {
    Soil.ROCK: 0.0,
    Soil.A_SHORT_TERM: 0.5,
    Soil.A: 0.75,
    Soil.B: 1.0,
    Soil.C: 1.5,
}
"""Horizontal per vertical."""


class Ground(StrEnum):
    """Conditions under which the table does not serve and an engineer must decide."""

    LAYERED = "the soil is layered"
    WET = "the ground is wet"
    SURCHARGED = "the edge carries a load"
    BESIDE_STRUCTURE = "it lies beside a structure"


@dataclass(frozen=True, slots=True)
class Excavation:
    """The excavation limit, in the coordinates of the outline it was made from.

    `limit` is the outer ring (n, 2) without closing point; `polygon` the shapely
    polygon. `assumed`: the soil is not classified yet and type C was drawn.
    `engineer_reasons` is empty when the table serves. `caution` ends with who decides.
    """

    limit: Array
    polygon: Any
    soil: Soil
    ratio: float
    depth_m: float
    workspace_m: float
    reach_m: float
    assumed: bool
    engineer_reasons: tuple[str, ...]
    area_m2: float

    @property
    def needs_engineer(self) -> bool:
        return bool(self.engineer_reasons)

    @property
    def caution(self) -> str:
        basis = (
            "Soil not classified: drawn at 1 1/2:1, assumed."
            if self.assumed
            else f"Drawn for {self.soil} at {self.ratio:g}:1."
        )
        engineer = (
            f" An engineer must design the excavation: {'; '.join(who)}."
            if (who := self.engineer_reasons)
            else ""
        )
        return (
            f"{basis}{engineer} The limit is for placing stakes, not for digging; "
            "local code, the competent person on site and the engineer decide."
        )


def excavation(
    footprint: Any,
    *,
    depth_m: float,
    workspace_m: float = 0.6,
    soil: Soil | None = None,
    conditions: Iterable[Ground] = (),
) -> Excavation:
    """The limit of an excavation of `depth_m` round a footprint (shapely polygon).

    `workspace_m` is the room to work outside the wall at the bottom. `soil` is None
    until a competent person has classified it. The corners are mitred, which covers
    the rounded limit everywhere.

    Raises OutOfRange for a negative depth or work space, NotFinite for no number.

    >>> e = excavation(shapely.box(0, 0, 10, 10), depth_m=3.0, soil=Soil.B)
    >>> round(e.reach_m, 9), round(e.area_m2, 4), e.assumed, e.needs_engineer
    (3.6, 295.84, False, False)
    """
    depth = _not_negative("excavation depth", depth_m)
    workspace = _not_negative("work space", workspace_m)
    used = Soil.C if soil is None else Soil(soil)
    reach = workspace + depth * RATIO[used] if depth else workspace
    polygon = _widened(footprint, reach)
    return Excavation(
        limit=shapely.get_coordinates(polygon.exterior)[:-1],
        polygon=polygon,
        soil=used,
        ratio=RATIO[used],
        depth_m=depth,
        workspace_m=workspace,
        reach_m=reach,
        assumed=soil is None and depth > 0,
        engineer_reasons=_engineer(depth, used, conditions),
        area_m2=float(polygon.area),
    )


def _not_negative(name: str, value: float) -> float:
    result = checked.number(name, value)
    if result < 0:
        raise OutOfRange(f"The {name} is negative.", where=f"It is {result:g} m.")
    return result


def _widened(footprint: Any, reach: float) -> Any:
    """Mitred; courtyards too small for an excavation of their own disappear."""
    if reach == 0:
        return footprint
    return footprint.buffer(reach, join_style="mitre", mitre_limit=MITRE_LIMIT)


def _engineer(
    depth: float, soil: Soil, conditions: Iterable[Ground]
) -> tuple[str, ...]:
    if depth <= 0:
        return ()
    reasons = []
    if depth >= TABLE_DEPTH_M - 1e-9:
        reasons.append("the table holds for less than 20 ft (6.1 m)")
    elif soil is Soil.A_SHORT_TERM and depth > SHORT_TERM_DEPTH_M + 1e-9:
        reasons.append("the short-term slope holds to 12 ft (3.66 m)")
    return (*reasons, *(str(Ground(c)) for c in conditions))
