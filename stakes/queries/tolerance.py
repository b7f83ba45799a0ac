"""Tolerance classes: what stakes of one kind of work are held to.

The classes of a job stand in its terms, which this package does not know: whoever
knows sets SOURCE. Without one the short table below serves.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from datetime import datetime

from geometry.decide import Reach, Rule
from geometry.units import Length, Unit
from stakes.models import Mark, Record
from stakes.record.lengths import Measured

CONTROL = "Control"
"""The class that setups and control are checked by."""


@dataclass(frozen=True, slots=True)
class ToleranceClass:
    """How far off a stake may be, how that is judged, and what its checks must show.

    `reaches` and `grade`: what checks must see and how independent they must be before
    handover. `default`: no contract or surveyor has confirmed it.
    """

    name: str
    position: Measured | None = None
    elevation: Measured | None = None
    rule: Rule = Rule.SIMPLE
    grade: int = 1
    reaches: tuple[Reach, ...] = ()
    source: str = ""
    default: bool = False

    @property
    def position_mm(self) -> float | None:
        return self.position.metres * 1000 if self.position else None

    @property
    def elevation_mm(self) -> float | None:
        return self.elevation.metres * 1000 if self.elevation else None

    def limit(self, component: str) -> Measured | None:
        """The tolerance of "p"osition or "e"levation."""
        return self.position if component == "p" else self.elevation


Source = Callable[[Record, datetime | None], Sequence[ToleranceClass]]

SOURCE: Source | None = None
"""Answers with the classes in force at a moment (None: now); set by `jobs.config`."""

_TABLE = (
    (CONTROL, "0.01", "0.003", (Reach.PLACE, Reach.HEIGHT)),
    (
        "Building corners and gridlines",
        "0.02",
        "0.006",
        (Reach.SHAPE, Reach.PLACE, Reach.FIT),
    ),
)


def classes_of(record: Record, at: datetime | None = None) -> dict[str, ToleranceClass]:
    """The tolerance classes of a job by name."""
    found = SOURCE(record, at) if SOURCE else ()
    return {c.name: c for c in (found or _usual(record.length_unit))}


def class_of(mark: Mark, classes: dict[str, ToleranceClass]) -> ToleranceClass:
    """The class a mark is held to: its own, or the one for its purpose."""
    if mark.tolerance in classes:
        return classes[mark.tolerance]
    if mark.is_control and CONTROL in classes:
        return classes[CONTROL]
    return _without_a_name(mark, classes)


def control_class(classes: dict[str, ToleranceClass]) -> ToleranceClass:
    """What a setup's own checks are held to."""
    return classes.get(CONTROL) or tightest(classes.values())


def tightest(classes: Iterable[ToleranceClass]) -> ToleranceClass:
    """The class with the smallest tolerance of position: the careful choice."""
    listed = [(c.position.metres, c.name, c) for c in classes if c.position]
    return min(listed)[2] if listed else _BARE


def _without_a_name(mark: Mark, classes: dict[str, ToleranceClass]) -> ToleranceClass:
    """A mark that names no class of the job is held to the one for buildings."""
    found = classes.get(_TABLE[1][0])
    if found is None:
        found = tightest(c for c in classes.values() if c.name != CONTROL)
    return found


def _usual(unit: Unit) -> tuple[ToleranceClass, ...]:
    return tuple(
        ToleranceClass(
            name=name,
            position=_measured(feet if unit.is_foot else metres, unit),
            elevation=_measured(feet if unit.is_foot else metres, unit),
            reaches=reaches,
            source="common practice, from memory",
            default=True,
        )
        for name, feet, metres, reaches in _TABLE
    )


def _measured(text: str, unit: Unit) -> Measured:
    return Measured.of(Length.parse(text, unit))


_BARE = ToleranceClass(name="no class", source="no tolerance class is set")
