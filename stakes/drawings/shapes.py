"""The outlines of the signs and what can be cut from a convex outline: its left half,
and a hatching. Worked out here rather than by clip paths and patterns, whose ids clash
when two drawings stand in one page and which not every PDF renderer honours."""

from __future__ import annotations

import math

Point = tuple[float, float]
Outline = tuple[Point, ...]
Segment = tuple[Point, Point]

_CORNERS_OF_A_CIRCLE = 36

# y grows downward, as in every SVG; the mark itself is at 0,0
OUTLINES: dict[str, Outline] = {
    "control": ((0, -11.5), (10, 5.75), (-10, 5.75)),
    "benchmark": ((-8, -8), (8, -8), (8, 8), (-8, 8)),
    "stake": ((0, -10), (10, 0), (0, 10), (-10, 0)),
    "foreign": tuple(
        (8.75 * math.cos(turn), 8.75 * math.sin(turn))
        for turn in (
            2 * math.pi * step / _CORNERS_OF_A_CIRCLE
            for step in range(_CORNERS_OF_A_CIRCLE)
        )
    ),
}


def left_half(outline: Outline) -> Outline:
    """What lies left of the middle of the sign."""
    kept: list[Point] = []
    for (x1, y1), (x2, y2) in _sides(outline):
        if x1 <= 0:
            kept.append((x1, y1))
        if (x1 < 0 < x2) or (x2 < 0 < x1):
            kept.append((0.0, y1 + (y2 - y1) * x1 / (x1 - x2)))
    return tuple(kept)


def hatching(outline: Outline, apart: float = 3.6) -> list[Segment]:
    """Parallel lines rising to the right inside a convex outline, `apart` from each
    other, one of them through the middle."""
    reach = max(abs(x) + abs(y) for x, y in outline)
    step = apart * math.sqrt(2)
    count = int(reach // step)
    lines = (_within(outline, turn * step) for turn in range(-count, count + 1))
    return [line for line in lines if line]


def _within(outline: Outline, height: float) -> Segment | None:
    """The piece inside the outline of the line x + y = height."""
    met: list[Point] = []
    for (x1, y1), (x2, y2) in _sides(outline):
        before, after = x1 + y1 - height, x2 + y2 - height
        if before == 0:
            met.append((x1, y1))
        elif before * after < 0:
            share = before / (before - after)
            met.append((x1 + (x2 - x1) * share, y1 + (y2 - y1) * share))
    if len(met) < 2:
        return None
    first, last = min(met), max(met)
    return (first, last) if first != last else None


def _sides(outline: Outline) -> list[Segment]:
    return [
        (outline[place], outline[(place + 1) % len(outline)])
        for place in range(len(outline))
    ]
