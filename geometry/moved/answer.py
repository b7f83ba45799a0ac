"""The answer to "which mark moved?", with what a screen needs to explain it."""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import combinations

from geometry.adjust.reliability import GlobalTest
from geometry.checked import Array
from geometry.ellipse import Ellipse
from geometry.errors import OutOfRange
from geometry.moved.evidence import Evidence
from geometry.moved.suspicion import likeness
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True, eq=False)
class Move:
    """One mark taken as moved: from its recorded place to where it is now.

    `move_m` is (2,) E, N in metres, or (1,) for a height. `ellipse_95` is None for
    heights and just above detection, where the estimate is too large on the average:
    only large moves get noticed.
    """

    mark: str
    move_m: Array
    covariance_m2: Array
    ellipse_95: Ellipse | None
    statistic: float
    p_value: float


@dataclass(frozen=True, slots=True, eq=False)
class Suspects:
    """One of these, and the measurements cannot say which.

    `moves` are marks, each as if it alone had moved; `measurements` are numbers of
    measurements any of which, if wrong, would explain the same. `tell` is the
    measurement that would decide best, in words, and `tell_sigmas` by how many of its
    standard deviations the explanations then differ; None when none of the distances
    between marks would.
    """

    moves: tuple[Move, ...]
    measurements: tuple[int, ...]
    measurement_words: tuple[str, ...]
    tell: Tell | None


@dataclass(frozen=True, slots=True)
class Tell:
    """The measurement that would separate two explanations.

    `expected_m` pairs each explanation (a mark or a measurement in words) with the
    value it predicts; `sigmas` is how far the two nearest lie apart.
    """

    words: str
    points: tuple[str, str]
    expected_m: tuple[tuple[str, float], ...]
    sigmas: float


@dataclass(frozen=True, slots=True)
class MarkReport:
    """One mark: moved, one of several, not moved, seen in part, or not tested.

    `smallest_m` is the smallest move that would have been found whichever way it went,
    `smallest_best_m` that in the best seen direction, whose azimuth is `best_rad`
    (None for heights); None where the mark was not seen.
    """

    mark: str
    verdict: Verdict
    reason: str
    rank: int
    statistic: float | None
    p_value: float | None
    smallest_m: float | None
    smallest_best_m: float | None
    best_rad: float | None


@dataclass(frozen=True, slots=True, eq=False)
class MovedAnswer:
    """Which mark moved.

    PASS: no mark stands out. FAIL: `moved` (or `wrong_measurements`) are named.
    AMBIGUOUS: one of each set in `suspects`. UNDECIDED: something does not fit and no
    single mark explains it. NOT_TESTED: nothing to spare. `test` is the whole before,
    `left` after what was named is taken out; `alpha` is for all marks together.
    """

    verdict: Verdict
    reason: str
    marks: tuple[MarkReport, ...]
    moved: tuple[Move, ...]
    suspects: tuple[Suspects, ...]
    wrong_measurements: tuple[int, ...]
    wrong_words: tuple[str, ...]
    not_tested: tuple[str, ...]
    test: GlobalTest
    left: GlobalTest
    alpha: float
    power: float
    marks_used: tuple[str, ...]
    evidence: Evidence = field(repr=False)

    def mark(self, name: str) -> MarkReport:
        """The report of one mark; OutOfRange for a name that is not there."""
        for report in self.marks:
            if report.mark == name:
                return report
        raise OutOfRange(f"Mark {name} is not among those asked about.")

    def hard_to_tell(self, limit: float = 0.9) -> tuple[tuple[str, str, float], ...]:
        """Pairs of marks these measurements can hardly tell apart, with their likeness.

        The likeness is the canonical correlation of their suspicions: 1 when a move of
        one always looks like some move of the other.
        """
        seen = [i for i, m in enumerate(self.marks) if m.rank]
        pairs = (
            (self.marks[i].mark, self.marks[j].mark, likeness(self.evidence, i, j))
            for i, j in combinations(seen, 2)
        )
        return tuple(pair for pair in pairs if pair[2] >= limit)
