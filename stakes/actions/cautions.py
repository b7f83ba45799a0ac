"""Record locates, flag hazards of a site, acknowledge cautions."""

from __future__ import annotations

import uuid
from collections.abc import Collection, Sequence
from datetime import datetime

from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.kinds.cautions import (
    CautionRead,
    HazardFlagged,
    LocateRecorded,
    Private,
    UtilityOwner,
)
from stakes.models import Entry, Record, Zone
from stakes.queries import locates
from stakes.queries.before_setting import Before
from stakes.record import By, Known, Refused, Said, append


def record_locate(
    *,
    record: Record,
    number: str,
    whose: str,
    area: str,
    valid_from: datetime,
    valid_to: datetime,
    by: By,
    owners: Sequence[UtilityOwner] = (),
    private_lines: Private = "not asked",
    private_by: str = "",
    zone: uuid.UUID | None = None,
    ticket: uuid.UUID | None = None,
    occasion: uuid.UUID | None = None,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Record a locate ticket, or what its owners have answered since; returns its key."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    named = ticket or follows(key, "locate")

    def do(act: Act) -> list[Entry]:
        _refuse_ticket(record, number, whose, area, valid_from, valid_to, zone)
        fact = LocateRecorded(
            ticket=named,
            number=short(number, "number", 60),
            whose=short(whose, "whose"),
            area=short(area, "area", 300),
            valid_from=valid_from,
            valid_to=valid_to,
            zone=zone,
            owners=tuple(owners),
            private_lines=private_lines,
            private_by=short(private_by, "private_by"),
            occasion=occasion,
        )
        said = Said(fact=fact, at=at, known=Known.TOLD, key=key)
        return append(record, said, by=by, act=act)

    once(record, key, asked, do)
    return named


def flag_hazard(
    *,
    record: Record,
    sort: str,
    words: str,
    by: By,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Flag a hazard of the site; returns its key."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    hazard = follows(key, "hazard")

    def do(act: Act) -> list[Entry]:
        if not words.strip():
            raise Refused(
                "The hazard is not described.", do="Say where and what.", field="words"
            )
        fact = HazardFlagged(
            hazard=hazard,
            sort=sort,  # type: ignore[arg-type]
            words=short(words, "words", 300),
        )
        return append(record, Said(fact=fact, at=at, key=key), by=by, act=act)

    once(record, key, asked, do)
    return hazard


def lift_hazard(
    *,
    record: Record,
    hazard: uuid.UUID,
    words: str,
    by: By,
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> None:
    """Say that a hazard is no longer there, and how that is known."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        flagged = {h.hazard: h for h in locates.hazards(record, at)}
        if hazard not in flagged:
            raise Refused("This hazard is not flagged here.", code="no hazard")
        if not words.strip():
            raise Refused("Say how it is known.", do="In a few words.", field="words")
        fact = HazardFlagged(
            hazard=hazard,
            sort=flagged[hazard].sort,
            words=short(words, "words", 300),
            gone=True,
        )
        return append(record, Said(fact=fact, at=at, key=key), by=by, act=act)

    once(record, key, asked, do)


def acknowledgements(
    before: Before,
    acknowledged: Collection[str],
    done: bool,
    occasion: uuid.UUID | None,
    key: uuid.UUID,
    at: datetime | None,
) -> list[Said]:
    """What was read before the act; Refused while a caution was not, unless it was done
    already: then only what was read is said."""
    missing = [c for c in before.cautions if c.sort not in acknowledged]
    if missing and not done:
        raise Refused(
            "A caution was not ticked as read: "
            + ", ".join(sorted({c.sort for c in missing}))
            + ".",
            do="Read it, then tick it.",
            field="acknowledged",
            code="caution",
        )
    return [
        Said(
            fact=CautionRead(
                sort=caution.sort,
                words=caution.words,
                listed=(before.view.key,),
                occasion=occasion,
            ),
            at=at,
            key=follows(key, f"caution {number}"),
        )
        for number, caution in enumerate(before.cautions)
        if caution.sort in acknowledged
    ]


def _refuse_ticket(
    record: Record,
    number: str,
    whose: str,
    area: str,
    valid_from: datetime,
    valid_to: datetime,
    zone: uuid.UUID | None,
) -> None:
    for field, text, what in (
        ("number", number, "The ticket has no number."),
        ("whose", whose, "It is not said whose ticket it is."),
        ("area", area, "The ticket does not say where."),
    ):
        if not text.strip():
            raise Refused(what, do="Copy it from the ticket.", field=field)
    if valid_to <= valid_from:
        raise Refused(
            "The ticket would expire before it is valid.",
            do="Copy both times from the ticket.",
            field="valid_to",
        )
    if zone is not None and not Zone.objects.filter(record=record, key=zone).exists():
        raise Refused(
            "There is no such zone on this job.",
            do="Choose one from the list, or the whole job.",
            field="zone",
        )
