"""From metres on the ground to the units of a drawing: the one place that flips north.

Northing grows up, y grows down; everything is drawn from a local origin, for seven-digit
coordinates lose their decimals in a renderer.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

Point = tuple[float, float]


@dataclass(frozen=True, slots=True)
class Frame:
    """From metres to the drawing: `scale` units a metre, northing up."""

    left_m: float
    top_m: float
    width_m: float
    height_m: float
    scale: float

    @classmethod
    def around(cls, points: Iterable[Point], width: float = 960.0) -> Frame:
        """A frame that shows all the points with some room about them."""
        seen = list(points) or [(0.0, 0.0), (50.0, 50.0)]
        east, north = [p[0] for p in seen], [p[1] for p in seen]
        span = max(max(east) - min(east), max(north) - min(north), 5.0)
        room = 0.07 * span
        w = max(max(east) - min(east), 0.4 * span) + 2 * room
        h = max(max(north) - min(north), 0.4 * span) + 2 * room
        middle_e, middle_n = (max(east) + min(east)) / 2, (max(north) + min(north)) / 2
        return cls(middle_e - w / 2, middle_n + h / 2, w, h, width / w)

    def xy(self, point: Point) -> Point:
        return (
            (point[0] - self.left_m) * self.scale,
            (self.top_m - point[1]) * self.scale,
        )

    @property
    def size(self) -> Point:
        return self.width_m * self.scale, self.height_m * self.scale
