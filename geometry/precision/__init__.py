"""Precision: how well can a point be measured, and from where best?

What measures?
  TotalStation, Tape, StringLine, RightAngle, Level   one-sigma figures of each
  one_face            sigma of a direction in one face, from the two-face figure
What numbers set a point?
  setting_out, SettingOut   angle right from the backsight, distance
  azimuth             azimuth from one point to another
  cut_fill, CutFill, Grade, shown_cut_fill   cut or fill, and how it is labelled
How well is a point set?
  polar, Polar        by angle and distance from an occupied mark, control correlated
  free_station, FreeStation   predicted precision of a free station
  sighted, Placed     a point set or measured from it
  resected, Fix       the position of a free station that was measured
How sure is a height?
  trigonometric_height, HeightDifference   by slope distance and zenith angle
  curvature_refraction   what a level line of sight rises above the level surface
  level_run_variance, one_setup_variance   by spirit level
  combined_height, Combined   from several benchmarks, and whether they agree
How do satellite positions fit the site?
  localised, Localisation   shift and turn onto the control, residuals, alarms
  local_point, LocalPoint   a satellite position in local coordinates
  localised_heights, HeightFit, local_height   the same for heights
What is seen, and where to set up?
  obstacle, Obstacle, inside_any   what stands in the way
  clear, clear_lines  whether one line of sight, or each of many, is free
  seen_from, visibility   what is seen from many places
  best_setup, Setups, grid, finer   the best free station over many places
  best_occupied, Occupations   the best mark to occupy and the best backsight
"""

from __future__ import annotations

from geometry.precision.best_setup import Setups, best_setup, finer, grid
from geometry.precision.free_station import (
    FreeStation,
    Placed,
    free_station,
    sighted,
)
from geometry.precision.heights import (
    Combined,
    HeightDifference,
    combined_height,
    curvature_refraction,
    level_run_variance,
    one_setup_variance,
    trigonometric_height,
)
from geometry.precision.instruments import (
    Level,
    RightAngle,
    StringLine,
    Tape,
    TotalStation,
    one_face,
)
from geometry.precision.local_heights import (
    HeightFit,
    local_height,
    localised_heights,
)
from geometry.precision.localisation import (
    Localisation,
    LocalPoint,
    local_point,
    localised,
)
from geometry.precision.obstacles import Obstacle, inside_any, obstacle
from geometry.precision.occupied import Occupations, best_occupied
from geometry.precision.polar import Polar, polar
from geometry.precision.resection import Fix, resected
from geometry.precision.setting_out import (
    CutFill,
    Grade,
    SettingOut,
    azimuth,
    cut_fill,
    setting_out,
    shown_cut_fill,
)
from geometry.precision.sight import clear, clear_lines, seen_from, visibility

__all__ = [
    "Combined",
    "CutFill",
    "Fix",
    "FreeStation",
    "Grade",
    "HeightDifference",
    "HeightFit",
    "Level",
    "LocalPoint",
    "Localisation",
    "Obstacle",
    "Occupations",
    "Placed",
    "Polar",
    "RightAngle",
    "SettingOut",
    "Setups",
    "StringLine",
    "Tape",
    "TotalStation",
    "azimuth",
    "best_occupied",
    "best_setup",
    "clear",
    "clear_lines",
    "combined_height",
    "curvature_refraction",
    "cut_fill",
    "finer",
    "free_station",
    "grid",
    "inside_any",
    "level_run_variance",
    "local_height",
    "local_point",
    "localised",
    "localised_heights",
    "obstacle",
    "one_face",
    "one_setup_variance",
    "polar",
    "resected",
    "seen_from",
    "setting_out",
    "shown_cut_fill",
    "sighted",
    "trigonometric_height",
    "visibility",
]
