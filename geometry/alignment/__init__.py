"""Alignments: where along a line, how far off it, and how high it should be there.

What is the line?
    straight, arc, spiral_element   its elements -> Element
    alignment           elements strung from a start and an azimuth -> Alignment
    alignment_through   the line through points of intersection and their Bend
    main_points         PC, PT, TS, SC, PRC, AP ... -> MainPoint
    total_turn_rad, sharpest_radius_m  how much it turns, and how sharply
Where is distance along and offset on the ground?
    place               distances and offsets to points -> Placed
Where on the line is this point?
    stations_and_offsets  many points to distance and offset -> OnLine
    feet_of             every foot of one point, or the one near a hint -> Foot
What does the stationing call it?
    stationing          regions from (back, ahead) equations -> Stationing
    stations_at         distances to stations -> Stations
    places_of           every place a station names -> StationPlace
    distance_of         the one distance a station names
How high is the design there?
    pvi, profile        points of vertical intersection to a Profile -> Pvi
    grade_at            elevations and grades -> Grade
    turning_points      its high and low points -> TurningPoint
"""

from __future__ import annotations

from geometry.alignment.elements import Element, arc, spiral_element, straight
from geometry.alignment.equations import (
    Stationing,
    StationPlace,
    Stations,
    distance_of,
    places_of,
    stationing,
    stations_at,
)
from geometry.alignment.feet import Foot, feet_of
from geometry.alignment.intersections import Bend, alignment_through
from geometry.alignment.inverse import OnLine, stations_and_offsets
from geometry.alignment.line import (
    Alignment,
    alignment,
    sharpest_radius_m,
    total_turn_rad,
)
from geometry.alignment.main_points import MainPoint, main_points
from geometry.alignment.placing import Placed, place
from geometry.alignment.profile import (
    Grade,
    Profile,
    Pvi,
    TurningPoint,
    grade_at,
    profile,
    pvi,
    turning_points,
)

__all__ = [
    "Alignment",
    "Bend",
    "Element",
    "Foot",
    "Grade",
    "MainPoint",
    "OnLine",
    "Placed",
    "Profile",
    "Pvi",
    "StationPlace",
    "Stationing",
    "Stations",
    "TurningPoint",
    "alignment",
    "alignment_through",
    "arc",
    "distance_of",
    "feet_of",
    "grade_at",
    "main_points",
    "place",
    "places_of",
    "profile",
    "pvi",
    "sharpest_radius_m",
    "spiral_element",
    "stationing",
    "stations_and_offsets",
    "stations_at",
    "straight",
    "total_turn_rad",
    "turning_points",
]
