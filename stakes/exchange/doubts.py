"""Doubts about a whole file of points: axes, unit, frame, beside known control.

Pure. Each doubt says what fits better than what was answered; a person decides.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

FOOT_M = 0.3048
SURVEY_FOOT_M = 1200 / 3937
NEAR_M = 0.5
"""A file and the job that name one mark agree within this, or something is wrong."""

FARTHEST_SITE_M = 5000.0

Points = Mapping[str, tuple[float, float]]
"""Labels with (N, E) in metres."""


@dataclass(frozen=True, slots=True)
class Doubt:
    """What seems wrong with a file: a short name, a sentence, and the answer that
    would fit ("" when none does)."""

    name: str
    sentence: str
    fits: str = ""


_TRIES = (
    ("swapped axes", "northing and easting the other way round", 1.0, True),
    ("other unit", "feet where metres were answered", FOOT_M, False),
    ("other unit", "metres where feet were answered", 1 / FOOT_M, False),
    ("swapped axes and other unit", "axes swapped, in feet", FOOT_M, True),
    ("swapped axes and other unit", "axes swapped, in metres", 1 / FOOT_M, True),
)


def doubts(points: Points, known: Points) -> list[Doubt]:
    """What is doubtful about points (N, E; metres) beside the known ones of the job.

    Marks that both name are compared one by one; without any, the two boxes are.

    >>> known = {"CP1": (1000.0, 2000.0), "CP2": (1200.0, 2000.0)}
    >>> [d.name for d in doubts({"CP1": (2000.0, 1000.0)}, known)]
    ['swapped axes']
    """
    if not points or not known:
        return []
    shared = [label for label in points if label in known]
    if shared:
        ours = np.array([known[x] for x in shared])
        theirs = np.array([points[x] for x in shared])
        return _shared(shared, theirs, ours)
    return _apart(np.array(list(points.values())), np.array(list(known.values())))


def _shared(names: Sequence[str], theirs: np.ndarray, ours: np.ndarray) -> list[Doubt]:
    off = np.hypot(*(theirs - ours).T)
    worst = int(np.argmax(off))
    if off[worst] <= NEAR_M:
        return _survey_feet(names, theirs, ours)
    if found := _survey_feet(names, theirs, ours):
        return found
    for name, words, factor, swapped in _TRIES:
        tried = (theirs[:, ::-1] if swapped else theirs) * factor
        if float(np.median(np.hypot(*(tried - ours).T))) <= NEAR_M:
            return [
                Doubt(
                    name,
                    f"{_named(names)} the job with {words}.",
                    words,
                )
            ]
    far = f"{off[worst]:.2f} m" if off[worst] < 1e5 else f"{off[worst] / 1000:.0f} km"
    return [
        Doubt(
            "known mark elsewhere",
            f"{names[worst]} lies {far} from where the job has it. Is it another frame, "
            "or another mark of that number?",
        )
    ]


def _named(names: Sequence[str]) -> str:
    if len(names) == 1:
        return f"{names[0]} fits"
    return f"{names[0]} and {len(names) - 1} more fit"


def _survey_feet(
    names: Sequence[str], theirs: np.ndarray, ours: np.ndarray
) -> list[Doubt]:
    """The two feet differ by 2 parts in a million: of the coordinate, not the site."""
    size = np.hypot(*ours.T)
    for ratio, words in (
        (SURVEY_FOOT_M / FOOT_M, "US survey feet where international feet were meant"),
        (FOOT_M / SURVEY_FOOT_M, "international feet where US survey feet were meant"),
    ):
        off = np.hypot(*(theirs - ours).T)
        tried = np.hypot(*(theirs * ratio - ours).T)
        worth = float(np.median(size)) * abs(ratio - 1)
        if (
            worth > 0.02
            and np.median(off) > 0.6 * worth
            and np.median(tried) < 0.1 * worth
        ):
            return [
                Doubt(
                    "the other foot",
                    f"{names[0]} and the others are off by 2 parts in a million of "
                    f"their coordinates, {float(np.median(off)):.2f} m: the file seems "
                    f"to hold {words}.",
                    words,
                )
            ]
    return []


def _apart(theirs: np.ndarray, ours: np.ndarray) -> list[Doubt]:
    """No mark in common: is the file on the site at all?"""
    if _near(theirs, ours):
        return []
    for name, words, factor, swapped in _TRIES:
        tried = (theirs[:, ::-1] if swapped else theirs) * factor
        if _near(tried, ours):
            return [
                Doubt(name, f"The points lie on the site with {words}.", words),
            ]
    centre, site = np.median(theirs, axis=0), np.median(ours, axis=0)
    far = math.hypot(*(centre - site))
    return [
        Doubt(
            "not on the site",
            f"The points lie {far / 1000:.1f} km from the control of this job. Is it "
            "another frame?",
        )
    ]


def _near(theirs: np.ndarray, ours: np.ndarray) -> bool:
    span = max(float(np.ptp(ours, axis=0).max()), 200.0)
    reach = min(3 * span, FARTHEST_SITE_M)
    low, high = ours.min(axis=0) - reach, ours.max(axis=0) + reach
    middle = np.median(theirs, axis=0)
    return bool(((middle >= low) & (middle <= high)).all())
