"""Which mark moved, and how far: named when the measurements say so, a set when not.

Ask
- `which_moved`: recorded marks against new measurements in the plane
- `which_benchmark_moved`: recorded heights against new levels
- `compare_epochs`, `compare_level_epochs`: two epochs of measurements

What comes back
- `MovedAnswer`: verdict, reason, and everything below
- `MarkReport`: one mark: moved, one of several, not moved, seen in part, not tested
- `Move`: how far a named mark moved, with its covariance
- `Suspects`: one of these, and the measurement that would tell (`Tell`)
- `EpochAnswer`, `Displacement`: two epochs, relative to the marks that stand

In words
- `say_moved`, `say_mark`, `say_epochs`: sentences built from a result

Prepare
- `common_and_relative`, `common_and_relative_heights`: joint covariance of a record
"""

from __future__ import annotations

from geometry.moved.answer import MarkReport, Move, MovedAnswer, Suspects, Tell
from geometry.moved.epochs import (
    Displacement,
    EpochAnswer,
    compare_epochs,
    compare_level_epochs,
)
from geometry.moved.joint import common_and_relative, common_and_relative_heights
from geometry.moved.which import which_benchmark_moved, which_moved
from geometry.moved.words import say_epochs, say_mark, say_moved

__all__ = [
    "Displacement",
    "EpochAnswer",
    "MarkReport",
    "Move",
    "MovedAnswer",
    "Suspects",
    "Tell",
    "common_and_relative",
    "common_and_relative_heights",
    "compare_epochs",
    "compare_level_epochs",
    "say_epochs",
    "say_mark",
    "say_moved",
    "which_benchmark_moved",
    "which_moved",
]
