"""Points along an alignment, close enough that the nearest one leads to the foot."""

from __future__ import annotations

import numpy as np

from geometry.alignment.line import Alignment
from geometry.alignment.placing import on_line
from geometry.checked import Array

SPACING_M = 5.0
_OF_THE_RADIUS = 0.15
_MOST = 200_000


def sample_distances(line: Alignment) -> Array:
    """Distances (m,) along the line, ends included, denser where it is sharp."""
    counts = [
        _pieces(
            e.length_m,
            max(abs(e.curvature_start), abs(e.curvature_end)),
            line.end_m - line.start_m,
        )
        for e in line.elements
    ]
    parts = [
        np.linspace(start, end, count, endpoint=False)
        for start, end, count in zip(
            line.distances_m[:-1], line.distances_m[1:], counts, strict=True
        )
    ]
    return np.concatenate([*parts, line.distances_m[-1:]])


def sample_points(line: Alignment, distances_m: Array) -> Array:
    """The samples' points (m, 2) about the line's origin."""
    return on_line(line, distances_m)[0]


def _pieces(length_m: float, bend: float, whole_m: float) -> int:
    """A line of any length stays within a number of samples a machine can hold."""
    spacing = min(SPACING_M, _OF_THE_RADIUS / bend if bend else SPACING_M)
    spacing = max(spacing, whole_m / _MOST)
    return max(2, int(np.ceil(length_m / spacing)))
