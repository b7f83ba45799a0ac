"""The causes a pattern of residuals can have."""

from __future__ import annotations

from enum import StrEnum


class Kind(StrEnum):
    """One cause, small or gross, of how as-staked shots lie off the design."""

    NOTHING = "nothing"
    SHIFT = "shift"
    ROTATION = "rotation"
    PRISM = "prism constant"
    SCALE = "scale"
    SEVERAL = "several at once"
    PRISM_AND_ROTATION = "prism constant and rotation"
    PRISM_AND_SHIFT = "prism constant and shift"
    US_FOOT = "international foot read as survey foot"
    INTERNATIONAL_FOOT = "survey foot read as international foot"
    KNOWN = "known field"
    SWAPPED = "swapped axes"
    WRONG_BACKSIGHT = "wrong backsight"
    WRONG_STATION = "wrong station"
    WRONG_VALUE = "another mark's coordinates"
    EXCHANGED = "station and backsight exchanged"
    REVERSED = "backsight reversed"
    ANGLE_SENSE = "angles turned the wrong way"
    FEET_AS_METRES = "feet read as metres"
    METRES_AS_FEET = "metres read as feet"
    NUMBERING = "numbers shifted"
    MOVED = "moved as a whole"
    MIRRORED = "mirrored"
    HEIGHT_CONSTANT = "constant height"
    ROD = "rod height"
    HEIGHT_FROM = "constant height from one shot on"
    HEIGHT_ANGLE = "vertical angle"
    TILT = "tilted plane"
    CURVATURE = "curvature and refraction"
    SIGN = "cut and fill exchanged"
    REFERENCE = "another reference surface"
    REVISION = "another revision"


GROSS = frozenset(
    {
        Kind.SWAPPED,
        Kind.WRONG_BACKSIGHT,
        Kind.WRONG_STATION,
        Kind.WRONG_VALUE,
        Kind.EXCHANGED,
        Kind.REVERSED,
        Kind.ANGLE_SENSE,
        Kind.FEET_AS_METRES,
        Kind.METRES_AS_FEET,
        Kind.NUMBERING,
        Kind.MOVED,
        Kind.MIRRORED,
    }
)
"""Blunders of the catalogue, large unless marks happen to lie close together."""
