"""Corrections: what a tape, a long sight and an instrument add to the truth.

How long is it really, by steel tape?
    SteelTape            a tape as calibrated
    Pulled               how it was used: temperature, tension, supports
    tape_corrections     the corrections of one reading -> TapeCorrections
    measured_length      true level length of a reading
    length_to_lay_out    reading to lay out for a true length
    normal_tension_n     the pull at which sag and stretch cancel
    slope_to_level       horizontal length of a slope length
How much does the Earth bend a sight?
    curvature_m, refraction_m, curvature_and_refraction_m
What does the instrument add?
    edm_distance         slope distance with prism constant and ppm corrected
    atmospheric_ppm      parts per million for temperature and pressure
    edm_sigma_m          standard deviation of a distance, constant and ppm part
"""

from __future__ import annotations

from geometry.corrections.curvature import (
    curvature_and_refraction_m,
    curvature_m,
    refraction_m,
)
from geometry.corrections.electronic import (
    atmospheric_ppm,
    edm_distance,
    edm_sigma_m,
)
from geometry.corrections.tape import (
    Pulled,
    SteelTape,
    TapeCorrections,
    length_to_lay_out,
    measured_length,
    normal_tension_n,
    slope_to_level,
    tape_corrections,
)

__all__ = [
    "Pulled",
    "SteelTape",
    "TapeCorrections",
    "atmospheric_ppm",
    "curvature_and_refraction_m",
    "curvature_m",
    "edm_distance",
    "edm_sigma_m",
    "length_to_lay_out",
    "measured_length",
    "normal_tension_n",
    "refraction_m",
    "slope_to_level",
    "tape_corrections",
]
