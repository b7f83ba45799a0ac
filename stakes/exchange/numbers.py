"""Numbers of marks that people mistake for each other: O and 0, l and 1, 07 and 7."""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterable

_LETTERS = str.maketrans({"o": "0", "l": "1", "i": "1", "|": "1"})
_LEADING = re.compile(r"(?<!\d)0+(?=\d)")


def faces(label: str) -> tuple[str, str]:
    """Two keys; labels that share one are look-alikes.

    The first lets letters pass for digits and one case for the other, the second drops
    leading zeros. They are not mixed: CO1 and C1 are two numbers nobody mistakes.

    >>> faces("1O1") == faces("101"), faces("l01")[0] == faces("101")[0]
    (False, True)
    >>> faces("007")[1] == faces("7")[1], faces("CO1")[1] == faces("C1")[1]
    (True, False)
    """
    plain = re.sub(r"\s", "", label).casefold()
    return "letters " + plain.translate(_LETTERS), "zeros " + _LEADING.sub("", plain)


def look_alikes(labels: Iterable[str]) -> dict[str, str]:
    """Each label that looks like another, with the first one it looks like.

    >>> look_alikes(["101", "1O1", "102", "0102"])
    {'1O1': '101', '0102': '102'}
    """
    seen: dict[str, str] = {}
    found: dict[str, str] = {}
    for label in dict.fromkeys(labels):
        for face in faces(label):
            first = seen.setdefault(face, label)
            if first != label:
                found.setdefault(label, first)
    return found


def doubled(labels: Iterable[tuple[int, str]]) -> dict[str, list[int]]:
    """Labels that stand in more than one row, with those rows.

    >>> doubled([(1, "101"), (2, "102"), (3, "101")])
    {'101': [1, 3]}
    """
    rows: dict[str, list[int]] = defaultdict(list)
    for row, label in labels:
        rows[label].append(row)
    return {label: where for label, where in rows.items() if len(where) > 1}
