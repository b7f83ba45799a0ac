"""What is still there, what is to be put back, and with what."""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import StrEnum

from numpy.typing import ArrayLike

from geometry.precision import Level, RightAngle, StringLine, Tape, TotalStation


class Sort(StrEnum):
    """What a mark is: it decides how it is put back, and what may be set from it."""

    CONTROL = "control"
    BENCHMARK = "benchmark"
    STAKE = "stake"
    LEGAL_MONUMENT = "legal monument"


@dataclass(frozen=True, slots=True)
class Survivor:
    """A mark that still stands, with its place as set or as adopted.

    `position` (E, N) metres; `covariance_m2` (2, 2), ignored where a lineage knows the
    mark. `usable` False, with `why_not`, when it may be no basis (put back by others,
    in question, failed, foreign). `trusted` False: not checked yet. `occupiable`
    False: an instrument cannot stand on it, but a tape can be held to it. Elevation
    with its own sigma and usability, because a hub tapped down is still good for line.
    """

    id: str
    position: tuple[float, float]
    covariance_m2: ArrayLike
    sort: Sort = Sort.STAKE
    usable: bool = True
    why_not: str = ""
    trusted: bool = True
    occupiable: bool = True
    elevation_m: float | None = None
    elevation_sd_m: float = 0.003
    elevation_usable: bool = True
    elevation_trusted: bool = True


@dataclass(frozen=True, slots=True)
class Target:
    """The lost mark: its place by the current design (E, N), and its tolerances."""

    id: str
    position: tuple[float, float]
    tolerance_m: float
    sort: Sort = Sort.STAKE
    elevation_m: float | None = None
    elevation_tolerance_m: float = 0.006


@dataclass(frozen=True, slots=True)
class Tools:
    """What the crew has with it; None for what it has not."""

    total_station: TotalStation | None = field(default_factory=TotalStation)
    tape: Tape | None = field(default_factory=Tape)
    string: StringLine | None = field(default_factory=StringLine)
    right_angle: RightAngle | None = field(default_factory=RightAngle)
    level: Level | None = field(default_factory=Level)


@dataclass(frozen=True, slots=True)
class Limits:
    """Where a way begins to be weak (warned, may be chosen with a word of reason) and
    where it has no answer at all. Common practice, to be edited by the firm.

    `weak_sine` 0.5: strings or ties that cross at less than 30 degrees. `flat_sine`
    0.05: no intersection. `extension` 0.5: a line run on by more than half its length.
    `between` -0.3..1.3: where along a string the point may lie. `longest_offset_m`:
    right angle without instrument. `spread_rad`: least angle a free station's marks
    must span. `beside_m`: how far a point may lie beside the string it is set from.
    """

    weak_sine: float = 0.5
    flat_sine: float = 0.05
    extension: float = 0.5
    between: tuple[float, float] = (-0.3, 1.3)
    longest_offset_m: float = 10.0
    spread_rad: float = 1.0471975511965976
    beside_m: float = 0.03
    nearest: int = 12
    per_kind: int = 2
