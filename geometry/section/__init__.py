"""Sections: how high the design is across a line, and where it meets the ground.

How high should it be at this station and offset?
    strip, strip_table   lanes and shoulders with superelevation -> Strip
    roadway              a profile with strips on both sides -> Roadway
    surface_at           design elevations at stations and offsets -> Surface
    breaks_at            the section's breaks on one side -> Breaks
How much to cut or fill?
    cut_fill             measured against design -> CutFill
    ladder               from a reference hub to each break -> Ladder
Where does the slope meet the ground?
    section_ground       the ground as shot -> Ground
    ground_at            its elevation at an offset
    SideSlopes           cut and fill slopes, and the ditch
    catch_point          every crossing, exactly -> Catch of CatchPoint
    trial_shot           the crew's trial and move -> Trial
    settles              whether trial and move will end
"""

from __future__ import annotations

from geometry.section.catch import Catch, CatchPoint, SideSlopes, catch_point
from geometry.section.cut import CutFill, Ladder, cut_fill, ladder
from geometry.section.ground import Ground, ground_at, section_ground
from geometry.section.surface import (
    Breaks,
    Roadway,
    Strip,
    Surface,
    breaks_at,
    roadway,
    strip,
    strip_table,
    surface_at,
)
from geometry.section.trial import Trial, settles, trial_shot

__all__ = [
    "Breaks",
    "Catch",
    "CatchPoint",
    "CutFill",
    "Ground",
    "Ladder",
    "Roadway",
    "SideSlopes",
    "Strip",
    "Surface",
    "Trial",
    "breaks_at",
    "catch_point",
    "cut_fill",
    "ground_at",
    "ladder",
    "roadway",
    "section_ground",
    "settles",
    "strip",
    "strip_table",
    "surface_at",
    "trial_shot",
]
