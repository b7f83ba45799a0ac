"""Signatures: why shots lie off the design as they do."""

from __future__ import annotations

from geometry.signature.findings import Cause, NextShot, Signature
from geometry.signature.kinds import GROSS, Kind
from geometry.signature.reading import signature
from geometry.signature.setups import Role, Setup, setup
from geometry.signature.small import grid_for_ground, known_field
from geometry.signature.words import FEET, METRES, US_SURVEY_FEET, Words

__all__ = [
    "FEET",
    "GROSS",
    "METRES",
    "US_SURVEY_FEET",
    "Cause",
    "Kind",
    "NextShot",
    "Role",
    "Setup",
    "Signature",
    "Words",
    "grid_for_ground",
    "known_field",
    "setup",
    "signature",
]
