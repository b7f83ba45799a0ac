"""Smallest losses that leave no way: minimal hitting sets of the ways.

Every way is a set of marks; a loss that touches every way leaves none. Sets of up to
three are found by branching on the shortest way not yet touched, the last level being
an intersection; hitting set is hard in general (Karp 1972, from memory) but small here.
"""

from __future__ import annotations

from collections.abc import Collection, Hashable, Iterable, Sequence
from typing import TypeVar

from geometry.errors import OutOfRange

Mark = TypeVar("Mark", bound=Hashable)


def kill_sets(
    routes: Iterable[Collection[Mark]], size: int = 2
) -> tuple[frozenset[Mark], ...]:
    """Minimal sets of at most `size` (0-3) marks whose loss touches all `routes`.

    Smallest first. With no route at all the empty set is the answer: nothing more need
    be lost. A route without marks can never be lost. Raises OutOfRange.

    >>> [sorted(s) for s in kill_sets([{"A", "B"}, {"A", "C"}])]
    [['A'], ['B', 'C']]
    """
    if not 0 <= size <= 3:
        raise OutOfRange("size must be from 0 to 3.", where=f"It is {size}.")
    names: list[Mark] = []
    number: dict[Mark, int] = {}
    masks = []
    for route in routes:
        mask = 0
        for mark in route:
            if mark not in number:
                number[mark] = len(names)
                names.append(mark)
            mask |= 1 << number[mark]
        masks.append(mask)
    found = minimal(_hitting(sorted(set(masks), key=int.bit_count), size))
    return tuple(frozenset(_named(mask, names)) for mask in found)


def minimal(masks: Iterable[int]) -> list[int]:
    """Those of `masks` that contain no other, smallest first."""
    kept: list[int] = []
    for mask in sorted(set(masks), key=lambda m: (m.bit_count(), m)):
        if not any(small & mask == small for small in kept):
            kept.append(mask)
    return kept


def _hitting(routes: Sequence[int], size: int) -> set[int]:
    if not routes:
        return {0}
    if size == 0 or routes[0] == 0:
        return set()
    if size == 1:
        return set(_bits(_common(routes)))
    found = set()
    for mark in _bits(routes[0]):
        rest = [route for route in routes if not route & mark]
        found |= {mark | more for more in _hitting(rest, size - 1)}
    return found


def _common(routes: Sequence[int]) -> int:
    common = routes[0]
    for route in routes[1:]:
        common &= route
    return common


def _bits(mask: int) -> list[int]:
    bits = []
    while mask:
        low = mask & -mask
        bits.append(low)
        mask ^= low
    return bits


def _named(mask: int, names: Sequence[Mark]) -> list[Mark]:
    return [names[bit.bit_length() - 1] for bit in _bits(mask)]
