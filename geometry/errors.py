"""What a computation says when it cannot answer: what is wrong, where, what to do.

Every error of this package is a `GeometryError`, so a caller can show its three
sentences to a person without knowing which computation failed.
"""

from __future__ import annotations


class GeometryError(ValueError):
    """A computation cannot answer from what it was given.

    `what` is wrong, `where` (which input, which row, which mark), `do` says what
    would help. All three are sentences for the person who asked.
    """

    def __init__(self, what: str, *, where: str = "", do: str = "") -> None:
        self.what, self.where, self.do = what, where, do
        super().__init__(" ".join(part for part in (what, where, do) if part))


class NotFinite(GeometryError):
    """A number is missing, not a number, or infinite."""


class WrongShape(GeometryError):
    """An array has another shape than the computation needs."""


class OutOfRange(GeometryError):
    """A number lies outside the range in which the method holds."""


class NotReadable(GeometryError):
    """A text cannot be read as the length, angle or station it should be."""


class EmptyInput(GeometryError):
    """Nothing was given where at least one thing is needed."""


class CoincidentPoints(GeometryError):
    """Two points that must differ are the same point."""


class NoIntersection(GeometryError):
    """The two lines, rays or circles do not meet."""


class CollinearPoints(GeometryError):
    """Points that must span a plane lie on one line."""


class DangerCircle(GeometryError):
    """A resection point lies on the circle through its three known points."""


class BadOutline(GeometryError):
    """A polygon crosses itself, has no area, or has too few corners."""


class Singular(GeometryError):
    """The observations do not determine the unknowns; `where` names them."""


class MixedFrames(GeometryError):
    """Values of different frames, surfaces or units were put together."""
