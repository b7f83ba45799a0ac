"""Mark numbers as people write them: cp-1, CP 1 and CP1 are usually one mark.

Normal form: upper case, letters and digits only. Leading zeros stay, since 7 and 007
may be two marks; numbers that only differ so, or by letters read as digits, are
look-alikes: shown, never joined in silence.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

_NOT_WRITTEN = re.compile(r"[\W_]+")
_LEADING_ZEROS = re.compile(r"(?<!\d)0+(?=\d)")
_READ_AS_DIGIT = str.maketrans("OILSBZ", "011582")


def normal_number(text: str) -> str:
    """The number without case, spaces and punctuation.

    >>> normal_number(" cp-1 "), normal_number("CP 007")
    ('CP1', 'CP007')
    """
    return text.upper() if text.isalnum() else _NOT_WRITTEN.sub("", text).upper()


def look_alike(text: str) -> str:
    """What a hasty reader makes of it: no leading zeros, letters taken for digits.

    >>> look_alike("B-O7") == look_alike("8/007")
    True
    """
    digits = _LEADING_ZEROS.sub("", text.upper()).translate(_READ_AS_DIGIT)
    return normal_number(_LEADING_ZEROS.sub("", digits))


@dataclass(frozen=True, slots=True)
class Collision:
    """Different marks whose numbers become one when normalised; rows of the plan."""

    normal: str
    rows: tuple[int, ...]


def collisions(numbers: Sequence[str]) -> tuple[Collision, ...]:
    """Numbers that normalising would merge, to be settled before they are used.

    >>> collisions(["CP-1", "CP1", "CP2"])
    (Collision(normal='CP1', rows=(0, 1)),)
    """
    return number_index(numbers).collisions


@dataclass(frozen=True, slots=True)
class NumberIndex:
    """Planned numbers ready to be asked; a row of -1 stands for several marks."""

    exact: dict[str, int]
    normal: dict[str, int]
    collisions: tuple[Collision, ...]


def number_index(numbers: Sequence[str]) -> NumberIndex:
    """An index of planned numbers. Exact text wins over the normal form.

    >>> number_index(["CP-1", "CP1"]).normal
    {'CP1': -1}
    """
    normal = [normal_number(number) for number in numbers]
    single = _single(normal)
    merged: dict[str, list[int]] = {}
    if -1 in single.values():
        for row, text in enumerate(normal):
            if single.get(text) == -1:
                merged.setdefault(text, []).append(row)
    return NumberIndex(
        exact=_single(numbers),
        normal=single,
        collisions=tuple(Collision(t, tuple(rows)) for t, rows in merged.items()),
    )


def alike_index(numbers: Sequence[str]) -> dict[str, int]:
    """Rows of planned numbers by what they look like; -1 for several."""
    return _single([look_alike(number) for number in numbers])


def _single(texts: Sequence[str]) -> dict[str, int]:
    rows = {text: row for row, text in enumerate(texts)}
    if len(rows) != len(texts):
        seen: set[str] = set()
        for text in texts:
            if text in seen:
                rows[text] = -1
            seen.add(text)
    rows.pop("", None)
    return rows
