"""Matching: which shot is which mark, and do number and place agree.

Which planned mark is this shot?
    match_shots       many shots by number and place -> Matches of Status
    nearest_marks     by place alone -> Nearest
    Status, sentence  what a shot turned out to be, as a sentence
Do the numbers mean what they say?
    normal_number     case, spaces and punctuation aside
    look_alike        leading zeros and letters read as digits aside
    collisions        planned numbers that normalising would merge -> Collision
    number_index      planned numbers ready to be asked -> NumberIndex
    number_shift      numbers that run ahead or behind -> NumberShift
How does one set of points lie on another?
    fit_similarity    shift, rotation, scale with outliers set aside -> Similarity
"""

from __future__ import annotations

from geometry.match.nearest import Nearest, nearest_marks
from geometry.match.numbers import (
    Collision,
    NumberIndex,
    collisions,
    look_alike,
    normal_number,
    number_index,
)
from geometry.match.renumbered import NumberShift, number_shift
from geometry.match.shots import Matches, match_shots
from geometry.match.similarity import Similarity, fit_similarity
from geometry.match.status import Status, sentence

__all__ = [
    "Collision",
    "Matches",
    "Nearest",
    "NumberIndex",
    "NumberShift",
    "Similarity",
    "Status",
    "collisions",
    "fit_similarity",
    "look_alike",
    "match_shots",
    "nearest_marks",
    "normal_number",
    "number_index",
    "number_shift",
    "sentence",
]
