"""Levelling: field notes reduced, a loop or line closed, and the misclosure shared.

The misclosure is shared by length (or by setups, given as lengths of one each), which
is least squares for one loop whose variance grows with its length. Ghilani & Wolf,
*Elementary Surveying*, chapter 5 (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from geometry import checked
from geometry.checked import Array
from geometry.errors import EmptyInput, OutOfRange, WrongShape


@dataclass(frozen=True, slots=True, eq=False)
class LevelNotes:
    """Reduced notes of n setups: heights of instrument (n,), the rises (n,) and the
    elevations (n + 1,) they lead to, and the page check: backsights less foresights."""

    instrument_m: Array
    rises_m: Array
    elevations_m: Array
    page_check_m: float


@dataclass(frozen=True, slots=True, eq=False)
class LevelRun:
    """A run of n sections between known elevations, measured and adjusted.

    `misclosure_m` is what was reached less what is known. `cofactors_m` (n + 1,) times
    the variance per metre of line is the variance of each elevation, zero at the ends.
    Redundancy is one.
    """

    misclosure_m: float
    length_m: float
    corrections_m: Array = field(repr=False)
    elevations_m: Array
    cofactors_m: Array = field(repr=False)
    redundancy: int = 1


def level_notes(
    start_m: float, backsights_m: ArrayLike, foresights_m: ArrayLike
) -> LevelNotes:
    """Reduce rod readings (n,) backsight and (n,) foresight from a known elevation.

    Raises EmptyInput, WrongShape, NotFinite.

    >>> notes = level_notes(100.0, [1.5, 1.2], [0.7, 2.0])
    >>> notes.elevations_m.round(3).tolist(), round(notes.page_check_m, 3)
    ([100.0, 100.8, 100.0], 0.0)
    """
    back = _metres("backsights", backsights_m)
    fore = _metres("foresights", foresights_m)
    if back.shape != fore.shape:
        raise WrongShape(
            "Every setup has one backsight and one foresight.",
            where=f"There are {len(back)} and {len(fore)}.",
        )
    if len(back) == 0:
        raise EmptyInput("There are no setups to reduce.")
    rises = back - fore
    begin = _elevation("start elevation", start_m)
    elevations = begin + np.concatenate([[0.0], np.cumsum(rises)])
    page = float(back.sum() - fore.sum())
    return LevelNotes(elevations[:-1] + back, rises, elevations, page)


def level_run(
    start_m: float,
    rises_m: ArrayLike,
    lengths_m: ArrayLike,
    end_m: float | None = None,
) -> LevelRun:
    """Close a run of rises (n,) over lengths (n,) on `end_m`, or on its start.

    Raises EmptyInput, WrongShape, NotFinite, OutOfRange for a length not positive.

    >>> run = level_run(50.0, [1.000, -1.012], [300.0, 100.0])
    >>> round(run.misclosure_m, 4), run.elevations_m.round(4).tolist()
    (-0.012, [50.0, 51.009, 50.0])
    """
    rises = _metres("rises", rises_m)
    lengths = _lengths(lengths_m, len(rises))
    begin = _elevation("start elevation", start_m)
    finish = begin if end_m is None else _elevation("end elevation", end_m)
    misclosure = float(rises.sum()) - (finish - begin)
    along, whole = np.concatenate([[0.0], np.cumsum(lengths)]), float(lengths.sum())
    corrections = -misclosure * lengths / whole
    elevations = begin + np.concatenate([[0.0], np.cumsum(rises + corrections)])
    elevations[-1] = finish
    cofactors = along * (whole - along) / whole
    cofactors[-1] = 0.0
    return LevelRun(misclosure, whole, corrections, elevations, cofactors)


def _metres(name: str, values: ArrayLike) -> Array:
    found = checked.numbers(name, values)
    far = np.abs(found) > checked.LARGEST_M
    if far.any():
        raise OutOfRange(
            f"The {name} hold a value larger than the Earth.",
            where=f"It is in row {int(np.argmax(far)) + 1}.",
            do="Check its unit.",
        )
    return found


def _elevation(name: str, value: float) -> float:
    return float(_metres(name, [value])[0])


def _lengths(lengths_m: ArrayLike, count: int) -> Array:
    lengths = _metres("lengths", lengths_m)
    if count == 0:
        raise EmptyInput("There are no rises to close.")
    if len(lengths) != count:
        raise WrongShape(
            "Every rise has one length.",
            where=f"There are {count} rises and {len(lengths)} lengths.",
            do="Without lengths, give 1 for every setup.",
        )
    if float(lengths.min()) <= 0:
        raise OutOfRange(
            "A length of levelling must be greater than zero.",
            where=f"It is section {int(np.argmin(lengths)) + 1}.",
        )
    return lengths
