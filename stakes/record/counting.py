"""Which entries count, when some correct others. Pure; knows only numbers.

At K an entry counts unless a counting entry numbered at most K corrects it; of several
corrections of one target the highest number counts. A correction either brings facts
that stand in the place of what it corrects, or withdraws it. Withdrawing a correction
undoes it. So of one original and all that was ever said in its place at most one entry
brings facts that count.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping


def corrected(
    corrections: Mapping[int, int],
    withdrawals: Collection[int] = frozenset(),
    known: int | None = None,
) -> dict[int, int]:
    """Of each entry that does not count: the entry that took its place.

    `corrections` maps the number of each correcting entry to the number of its target,
    always lower; `withdrawals` are those that bring no facts; `known` is K, the last
    entry number to listen to (None: all).

    >>> corrected({5: 2, 7: 2})
    {2: 7, 5: 7}
    >>> corrected({5: 2, 7: 2, 9: 7}, withdrawals={9})  # 7 is undone: 5 counts again
    {7: 9, 2: 5}
    >>> corrected({5: 2, 9: 5})  # 9 says anew what 5 said of 2
    {5: 9, 2: 9}
    """
    heard = [n for n in corrections if known is None or n <= known]
    overruled: dict[int, int] = {}
    for number in sorted(heard, reverse=True):
        if number in overruled:
            continue
        target = corrections[number]
        overruled[number if target in overruled else target] = overruled.get(
            target, number
        )
    _keep_one_of_each_place(overruled, corrections, withdrawals, heard)
    return overruled


def _keep_one_of_each_place(
    overruled: dict[int, int],
    corrections: Mapping[int, int],
    withdrawals: Collection[int],
    heard: list[int],
) -> None:
    """Facts said in one place: the highest number that still counts overrules the rest."""
    places = roots(corrections, heard)
    best: dict[int, int] = {}
    for number in heard:
        if number not in overruled and number not in withdrawals:
            best[places[number]] = max(number, best.get(places[number], 0))
    for number in [*heard, *set(places.values())]:
        winner = best.get(places.get(number, number))
        if winner is None or number == winner or number in withdrawals:
            continue
        overruled.setdefault(number, winner)


def roots(corrections: Mapping[int, int], numbers: Iterable[int]) -> dict[int, int]:
    """For each entry, the original whose place it takes at the end of its chain.

    A replacement keeps that place among facts of the same moment.

    >>> roots({5: 2, 9: 5}, [9, 3])
    {9: 2, 3: 3}
    """
    found: dict[int, int] = {}
    for number in numbers:
        root = number
        while root in corrections:
            root = corrections[root]
        found[number] = root
    return found
