"""Coordinate geometry: points, lines, circles, traverses and level runs.

How do two points lie to each other?
    inverse                 azimuth and distance from one to the other -> Inverse
    inverses                the same for many -> Inverses
    forward                 the point at an azimuth and distance
    forwards                many points from one
    angle_at                the clockwise angle between two marks

Where do they meet?
    directions_cross        direction and direction -> Crossing
    lines_cross             two lines through two points each -> Crossing
    direction_and_distance  direction and distance -> up to two Crossings
    line_and_circle         line through two points and circle
    distances_cross         distance and distance, circle and circle
    crossing_angle          how well two lines cross at a point

Where does a point stand against a line?
    offsets_from_line       distance along and offset right -> Offsets
    points_off_line         the points at distances along and offsets

Where do I stand?
    resection               from directions to three marks -> Resection
    NEAR_CIRCLE             clearance from the danger circle below which it is weak

How large is it?
    area                    area of a figure, with arcs -> Area
    segment_area            between a chord and its arc

Does it close?
    traverse                courses closed and balanced by compass rule -> Traverse
    carried_azimuths        azimuths from the first and the angles
    balanced_loop_angles    angles of a closed figure -> BalancedAngles
    balanced_link_angles    angles between two known azimuths -> BalancedAngles
    level_notes             rod readings reduced -> LevelNotes
    level_run               a level loop or line closed and adjusted -> LevelRun
    linear_closure          traverse misclosure against a class -> Closure
    angular_closure         angular misclosure against a class -> Closure
    level_closure           level misclosure against a class -> Closure
    TraverseClass, TRAVERSE_CLASSES
    LevelClass, LEVEL_LOOP_CLASSES, LEVEL_SECTION_CLASSES
"""

from __future__ import annotations

from geometry.cogo.areas import Area, area, segment_area
from geometry.cogo.circles import (
    direction_and_distance,
    distances_cross,
    line_and_circle,
)
from geometry.cogo.closures import (
    LEVEL_LOOP_CLASSES,
    LEVEL_SECTION_CLASSES,
    TRAVERSE_CLASSES,
    Closure,
    LevelClass,
    TraverseClass,
    angular_closure,
    level_closure,
    linear_closure,
)
from geometry.cogo.crossings import (
    Crossing,
    crossing_angle,
    directions_cross,
    lines_cross,
)
from geometry.cogo.level_run import LevelNotes, LevelRun, level_notes, level_run
from geometry.cogo.offsets import Offsets, offsets_from_line, points_off_line
from geometry.cogo.polar import (
    Inverse,
    Inverses,
    angle_at,
    forward,
    forwards,
    inverse,
    inverses,
)
from geometry.cogo.resecting import NEAR_CIRCLE, Resection, resection
from geometry.cogo.traversing import (
    BalancedAngles,
    Traverse,
    balanced_link_angles,
    balanced_loop_angles,
    carried_azimuths,
    traverse,
)

__all__ = [
    "LEVEL_LOOP_CLASSES",
    "LEVEL_SECTION_CLASSES",
    "NEAR_CIRCLE",
    "TRAVERSE_CLASSES",
    "Area",
    "BalancedAngles",
    "Closure",
    "Crossing",
    "Inverse",
    "Inverses",
    "LevelClass",
    "LevelNotes",
    "LevelRun",
    "Offsets",
    "Resection",
    "Traverse",
    "TraverseClass",
    "angle_at",
    "angular_closure",
    "area",
    "balanced_link_angles",
    "balanced_loop_angles",
    "carried_azimuths",
    "crossing_angle",
    "direction_and_distance",
    "directions_cross",
    "distances_cross",
    "forward",
    "forwards",
    "inverse",
    "inverses",
    "level_closure",
    "level_notes",
    "level_run",
    "line_and_circle",
    "linear_closure",
    "lines_cross",
    "offsets_from_line",
    "points_off_line",
    "resection",
    "segment_area",
    "traverse",
]
