"""One way to put a mark back, with all that a page, a phone or a record needs of it."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from geometry.checked import Array
from geometry.ellipse import Ellipse


class Kind(StrEnum):
    """The ways there are."""

    POLAR = "polar"
    FREE_STATION = "free station"
    STRINGS = "crossing of two strings"
    TIES = "taped ties"
    IN_LINE = "in line and distance"
    RIGHT_ANGLE = "right-angle offset"
    BEST_FIT = "best fit of survivors"
    LEVELS = "levels from two benchmarks"


class Refusal(StrEnum):
    """The only four reasons for which a way is not offered."""

    SINGLE_SURVIVOR = "single survivor"
    BASIS_NOT_USABLE = "basis not usable"
    NO_CHECK = "no check possible"
    SINGULAR = "singular geometry"


class Caution(StrEnum):
    """Why a way is weak; each is a sentence to show. It may be chosen with a reason."""

    SHORT_BACKSIGHT = "The backsight is shorter than the foresight."
    WEAK_ANGLE = "The lines cross at less than 30 degrees."
    LONG_TAPE = "The distance is longer than the tape."
    LONG_STRING = "The string is longer than it can be pulled straight."
    LONG_OFFSET = "The offset is long for a right angle turned without instrument."
    EXTENSION = "The line is run on by more than half its length."
    THREE_MARKS = "Three marks show that one is wrong but not which."
    TWO_MARKS = "Two marks check only the distance between them."
    NARROW = "The marks span too narrow an angle as seen from the instrument."
    BLOCKED = "Something stands in a line of sight or along the tape."
    FAR = "A sight is longer than the instrument is to be trusted."
    NEAR = "A sight is too short to focus or to measure."
    NOT_CHECKED = "It rests on a mark that is not checked."
    OVER_TOLERANCE = "The predicted 95 % ellipse is larger than the tolerance."
    SETUP_CHECK_ONLY = "The check proves the setup, not the point itself."
    CHECK_IS_BLIND = "The checks leave a direction in which an error would not show."
    CHECK_NOT_TRUSTED = "The check is to a mark that is itself not checked."


@dataclass(frozen=True, slots=True)
class Number:
    """One number to set or pull: `value` in `unit` ("m" or "rad"), at mark `at`.

    `to` names the mark sighted or the point set; `note` a side or a word ("right").
    """

    name: str
    value: float
    unit: str
    at: str
    to: str
    note: str = ""


@dataclass(frozen=True, slots=True)
class Check:
    """A measurement that shares no mark with the way, and what it should give.

    `expected` and `sd` (one sigma of measured less expected, all sources) in `unit`.
    `gradient` (E, N): change of the number per metre that the point is off; zero for a
    check of the setup. `smallest_move_m`: smallest error of the point along its most
    sensitive direction that shows with 80 % at 0.001. `tolerance` is that of the point,
    in `unit`. `with_` is the tool.
    """

    name: str
    at: str
    to: str
    expected: float
    unit: str
    sd: float
    tolerance: float
    gradient: tuple[float, float]
    smallest_move_m: float
    with_: str
    trusted: bool = True


@dataclass(frozen=True, slots=True, eq=False)
class Way:
    """A way back. Offered when `refusal` is None; `reason` says why not.

    `marks` used in the order of their roles, `untrusted` those not checked. `numbers`
    to set or pull in order. `covariance_m2` (2, 2) of the point, or (1, 1) for an
    elevation; `ellipse_95` of it (None for an elevation); `semi_major_m` its 95 %
    half-width and `ratio` that over the tolerance. `checks`: the independent check
    first, a second one across it where there is any; `smallest_move_m` of both
    together, whatever the direction. `provisional`: it rests on stakes, so the mark
    stays not checked until it is tied to control. `to_marks`, `noise_m2` keep the
    Jacobians, so that what is set from it later carries its parents' errors.
    `stand_at` (E, N): where to set up, for a free instrument.
    """

    kind: Kind
    component: str
    target: str
    marks: tuple[str, ...]
    untrusted: tuple[str, ...]
    numbers: tuple[Number, ...]
    covariance_m2: Array
    ellipse_95: Ellipse | None
    semi_major_m: float
    tolerance_m: float
    ratio: float
    checks: tuple[Check, ...]
    smallest_move_m: float
    cautions: tuple[Caution, ...]
    refusal: Refusal | None
    reason: str
    provisional: bool
    cost_min: float
    to_marks: tuple[tuple[str, Array], ...]
    noise_m2: Array
    stand_at: tuple[float, float] | None = None
    rank: int = 0

    @property
    def offered(self) -> bool:
        """Whether the crew may choose it."""
        return self.refusal is None

    @property
    def needs_reason(self) -> bool:
        """Whether choosing it asks for a word of reason."""
        return self.offered and bool(self.cautions)
