"""Signatures: why shots lie off the design as they do, and what would tell.

What is wrong with this setup's work?
    setup             a setup with its precision and its Role -> Setup
    signature         plane residuals: every cause weighed -> Signature
    height_signature  height residuals likewise -> Signature
    nearest_revision  an older plan fits better -> RevisionReading
    grid_for_ground, known_field  causes whose field is known -> Hypothesis
    Kind, GROSS       the causes, and which of them are gross
    Cause, NextShot   what an answer is made of
What is wrong with this one stake?
    explain_stake     wrong side, other offset, station, digits -> StakeReading
    explain_height    round step, reference, sign, digits -> StakeReading
    Line, Hint, Slip  a line it refers to, one explanation, its name
    slips             copies of a number with a digit wrong -> DigitSlip
    divisible_by_nine the hint of exchanged digits
In which words?
    Words             unit and digits of sentences; METRES, FEET, US_SURVEY_FEET
"""

from __future__ import annotations

from geometry.signature.digits import DigitSlip, divisible_by_nine, slips
from geometry.signature.findings import Cause, NextShot, Signature
from geometry.signature.heights import height_signature
from geometry.signature.hypotheses import Hypothesis
from geometry.signature.kinds import GROSS, Kind
from geometry.signature.one_height import explain_height
from geometry.signature.one_stake import (
    Hint,
    Line,
    Slip,
    StakeReading,
    explain_stake,
)
from geometry.signature.reading import signature
from geometry.signature.revisions import RevisionReading, nearest_revision
from geometry.signature.setups import Role, Setup, setup
from geometry.signature.small import grid_for_ground, known_field
from geometry.signature.words import FEET, METRES, US_SURVEY_FEET, Words

__all__ = [
    "FEET",
    "GROSS",
    "METRES",
    "US_SURVEY_FEET",
    "Cause",
    "DigitSlip",
    "Hint",
    "Hypothesis",
    "Kind",
    "Line",
    "NextShot",
    "RevisionReading",
    "Role",
    "Setup",
    "Signature",
    "Slip",
    "StakeReading",
    "Words",
    "divisible_by_nine",
    "explain_height",
    "explain_stake",
    "grid_for_ground",
    "height_signature",
    "known_field",
    "nearest_revision",
    "setup",
    "signature",
    "slips",
]
