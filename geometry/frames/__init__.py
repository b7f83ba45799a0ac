"""Frames: which surface coordinates and distances are on, and how to cross over.

What does a ground distance measure on the grid?
    elevation_factor   ellipsoid distance over ground distance
    combined_factor    grid distance over ground distance
    line_scale         the grid scale of a long line
    second_term        arc-to-chord correction t - T of a Lambert zone
    grid_azimuth       grid azimuth from the geodetic one
    MEAN_RADIUS_M      the Earth's mean radius these rest on

Which surface is this on?
    GridFrame          a map projection's plane
    GroundFrame        a project's ground plane over a grid; crosses both ways
    GridPoints         points that only their grid accepts
    GroundPoints       points that only their ground plane accepts
    GridDistance       a distance on a grid
    GroundDistance     a distance on the ground

Where is it in another system? (needs the epsg extra)
    transformed        points from one EPSG system to another, with the exactness
    Transformed        the points, the operation, its accuracy, what was missing
    grid_scale         grid scale and convergence of a projection at places
    GridScale          the scales and convergences
    EpsgUnavailable    the extra is not installed, or the code is not known
"""

from __future__ import annotations

from geometry.frames.epsg import (
    EpsgUnavailable,
    GridScale,
    Transformed,
    grid_scale,
    transformed,
)
from geometry.frames.factors import (
    MEAN_RADIUS_M,
    combined_factor,
    elevation_factor,
    grid_azimuth,
    line_scale,
    second_term,
)
from geometry.frames.surfaces import (
    GridDistance,
    GridFrame,
    GridPoints,
    GroundDistance,
    GroundFrame,
    GroundPoints,
)

__all__ = [
    "MEAN_RADIUS_M",
    "EpsgUnavailable",
    "GridDistance",
    "GridFrame",
    "GridPoints",
    "GridScale",
    "GroundDistance",
    "GroundFrame",
    "GroundPoints",
    "Transformed",
    "combined_factor",
    "elevation_factor",
    "grid_azimuth",
    "grid_scale",
    "line_scale",
    "second_term",
    "transformed",
]
