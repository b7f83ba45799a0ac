"""Batter boards: where a line's string crosses a board, measured along the board.

Boards stand outside the building; nails or kerfs mark every line that crosses them, so
that strings can be hung again (common practice).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from numpy.typing import ArrayLike

from geometry import checked
from geometry.errors import CoincidentPoints
from geometry.layout.lines import WallLine

LEAST_SINE = 0.3


@dataclass(frozen=True, slots=True)
class Nail:
    """One nail on a board: which line, how far from the board's first end, where."""

    line_id: str
    along_m: float
    e_m: float
    n_m: float


@dataclass(frozen=True, slots=True)
class Board:
    """A board's nails in order from its first end, and the lines that miss it."""

    name: str
    nails: tuple[Nail, ...]
    missed: tuple[str, ...]


def board_nails(name: str, ends: ArrayLike, lines: Sequence[WallLine]) -> Board:
    """Where the straight lines cross a board given by its two ends (2, 2; E, N metres).

    Curved walls and lines nearly along the board are not asked of it; straight lines
    that pass beyond its ends are named as missed.

    Raises CoincidentPoints when the ends are one point.
    """
    board = checked.points("ends", ends)
    if len(board) != 2 or float(abs(board[1] - board[0]).max()) < 1e-6:
        raise CoincidentPoints(f"Board {name} needs two different ends.")
    along = board[1] - board[0]
    length = float((along @ along) ** 0.5)
    unit = along / length
    nails, missed = [], []
    for line in lines:
        if line.arc is not None:
            continue
        de, dn = line.end[0] - line.start[0], line.end[1] - line.start[1]
        sine = (unit[0] * dn - unit[1] * de) / line.length_m
        if abs(sine) < LEAST_SINE:
            continue
        fe, fn = line.start[0] - board[0, 0], line.start[1] - board[0, 1]
        t = float((fe * dn - fn * de) / (unit[0] * dn - unit[1] * de))
        if -1e-9 <= t <= length + 1e-9:
            place = board[0] + t * unit
            nails.append(Nail(line.id, t, float(place[0]), float(place[1])))
        else:
            missed.append(line.id)
    return Board(name, tuple(sorted(nails, key=lambda n: n.along_m)), tuple(missed))
