"""What a shot turned out to be, in words a party chief understands."""

from __future__ import annotations

from enum import IntEnum


class Status(IntEnum):
    """How number and place of a shot agree with the plan."""

    MATCHED = 0
    REPEATED = 1
    FAR = 2
    OTHER_PLACE = 3
    SWAPPED = 4
    BY_PLACE = 5
    LOOK_ALIKE = 6
    LOOK_ALIKE_FAR = 7
    AMBIGUOUS = 8
    UNPLANNED = 9


_SENTENCES = {
    Status.MATCHED: "{shot}: number and place agree, {away} from plan.",
    Status.REPEATED: "{shot}: shot again, {away} from plan; a nearer shot stands.",
    Status.FAR: "{shot}: the number is planned, but {away} away.",
    Status.OTHER_PLACE: "{shot}: stands where {rival} is planned, {away} from its own "
    "place.",
    Status.SWAPPED: "{shot}: its number and that of {rival} look exchanged.",
    Status.BY_PLACE: "{shot}: no such number is planned; it stands {away} from "
    "{planned}.",
    Status.LOOK_ALIKE: "{shot}: reads like {planned} and stands {away} from it.",
    Status.LOOK_ALIKE_FAR: "{shot}: no such number is planned; it reads like {rival}, "
    "which is planned elsewhere.",
    Status.AMBIGUOUS: "{shot}: the plan has two marks it could be, and neither number "
    "nor place tells which.",
    Status.UNPLANNED: "{shot}: neither its number nor its place is in the plan.",
}


def sentence(status: Status, *, shot: str, planned: str, rival: str, away: str) -> str:
    """The status as a sentence; `away` is a distance as the reader's unit writes it.

    >>> sentence(Status.FAR, shot="A2", planned="A2", rival="", away="6.40 m")
    'A2: the number is planned, but 6.40 m away.'
    """
    return _SENTENCES[status].format(
        shot=shot or "No number", planned=planned, rival=rival, away=away
    )
