"""Units, angles and stations: the texts people write, and the exact values behind.

What is a length?
    Unit             metre, international foot, US survey foot, exactly
    Length           the text as entered, its unit, and whole nanometres
    feet_inches      a length printed in feet, inches and fractions
    chains           the length of an old deed's chains, rods and links
    AreaUnit         square metres, feet, hectares and acres, exactly
    area_text        a computed area printed in a unit

What is a direction?
    AngleUnit        how a job writes angles: degrees-minutes-seconds, degrees, gon
    Angle            the text as entered and its exact seconds of arc
    angle_text       a signed angle printed
    azimuth_text     a direction from north, clockwise, printed
    bearing_text     a direction printed as quadrant and angle
    turn_text        a turn printed with its side, R or L
    full_turn        an angle brought into [0, 2 pi)
    half_turn        an angle brought into [-pi, pi)
    mean_direction   the mean of directions across north

Where along a line?
    Station          a station's text read and printed, with its region
"""

from __future__ import annotations

from geometry.units.angle_reading import Angle
from geometry.units.angles import (
    AngleUnit,
    angle_text,
    azimuth_text,
    bearing_text,
    turn_text,
)
from geometry.units.feet_inches import feet_inches
from geometry.units.land import AreaUnit, area_text, chains
from geometry.units.length import Length
from geometry.units.stations import Station
from geometry.units.turns import full_turn, half_turn, mean_direction
from geometry.units.unit import Unit

__all__ = [
    "Angle",
    "AngleUnit",
    "AreaUnit",
    "Length",
    "Station",
    "Unit",
    "angle_text",
    "area_text",
    "azimuth_text",
    "bearing_text",
    "chains",
    "feet_inches",
    "full_turn",
    "half_turn",
    "mean_direction",
    "turn_text",
]
