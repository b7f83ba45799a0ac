"""The stakes of a plan: where each stands, what it holds, and why there."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from enum import StrEnum


class Status(StrEnum):
    """How the place of a stake came about."""

    NOMINAL = "nominal"
    FAR_SIDE = "beyond the far side"
    EXTENDED = "extended"
    PULLED_IN = "pulled in"
    NO_ROOM = "no room"


class Role(StrEnum):
    """What a stake is for."""

    LINE_END = "line end"
    RADIAL = "radial offset"
    SECOND = "second stake on the same side"
    BESIDE = "beside the line"
    FAR = "far stake of a pair"
    SPARE = "spare on the line"
    FRAME = "corner of the frame"


@dataclass(frozen=True, slots=True)
class Hold:
    """A further line that a stake holds."""

    line_id: str
    end: str
    offset_m: float
    to_wall_m: float
    beside_m: float = 0.0


@dataclass(frozen=True, slots=True)
class Stake:
    """A stake position (E, N; metres), numbered clockwise from the northwest.

    `offset_m` counts along the line from `measured_from`; `to_wall_m` is the distance
    along the line to the last wall point. `beside_m`, when not 0, is how far the string
    lies from the line, right of its direction: print it. `differs` flags an offset
    other than the building's. `sd_m` is the predicted standard deviation of the line
    where the stake does not hold it from both ends, else None.
    """

    number: int
    e_m: float
    n_m: float
    line_id: str
    end: str
    side: str
    offset_m: float
    measured_from: str
    to_wall_m: float
    status: Status
    differs: bool
    reason: str
    role: Role = Role.LINE_END
    beside_m: float = 0.0
    also: tuple[Hold, ...] = ()
    sd_m: float | None = None

    @property
    def label(self) -> str:
        """The lines the stake holds, as they are printed beside its number."""
        return " + ".join([self.line_id, *(h.line_id for h in self.also)])


@dataclass(frozen=True, slots=True)
class StakeSet:
    """One way to stake the lines: the stakes, the ends nothing holds, what to know."""

    name: str
    stakes: tuple[Stake, ...]
    unserved: tuple[tuple[str, str], ...]
    sentences: tuple[str, ...]


def numbered(stakes: Iterable[Stake], middle: tuple[float, float]) -> tuple[Stake, ...]:
    """The stakes in clockwise order round `middle`, from the northwest, numbered 1.."""

    def order(s: Stake) -> tuple[float, float]:
        de, dn = s.e_m - middle[0], s.n_m - middle[1]
        turn = (math.atan2(de, dn) + math.pi / 4) % (2 * math.pi)
        return round(turn, 9) % (2 * math.pi), math.hypot(de, dn)

    ranked = sorted(stakes, key=order)
    return tuple(
        dataclasses.replace(s, number=i) for i, s in enumerate(ranked, start=1)
    )


def moved(stakes: Sequence[Stake], origin: tuple[float, float]) -> tuple[Stake, ...]:
    """The stakes in plane coordinates, from local ones."""
    return tuple(
        dataclasses.replace(s, e_m=s.e_m + origin[0], n_m=s.n_m + origin[1])
        for s in stakes
    )
