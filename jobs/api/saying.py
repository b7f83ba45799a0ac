"""Saying one item to the record: the same for a program, a phone and the tray.

An item is a new statement, a correction of an entry or its withdrawal. Whatever is
wrong with it is a Refused with a code; nothing of it is then kept.
"""

from __future__ import annotations

import json
import logging
import uuid
from dataclasses import dataclass, replace
from datetime import datetime
from typing import Any

from django.db import InterfaceError, OperationalError, transaction

from geometry.errors import GeometryError
from jobs.actions.checked import refuse_unknown_marks
from jobs.api import plain
from jobs.api.acts import act_called
from jobs.api.items import Item
from jobs.queries.visits import visits_seen
from stakes.actions.correcting import LEFT_TO_THEIR_OWN_PAGES, may_correct
from stakes.actions.once import follows
from stakes.actions.passing import NO_PASSAGE, Gated, Passage
from stakes.can import Asked, Can
from stakes.forms.correcting import editable
from stakes.kinds.correcting import Withdrawn
from stakes.models import Entry, Mark, Record, Setup
from stakes.record import Fact, Known, Refused, Said, Told, append
from stakes.record.canonical import moment_text
from stakes.record.kinds import fact_from, facts_as_data
from stakes.record.reading import corrections, decoded

log = logging.getLogger("lathbook.api")


@dataclass(frozen=True, slots=True)
class Spoken:
    """What became of an item: the entry it is, new or known before."""

    entry: Entry
    before: bool

    @property
    def outcome(self) -> str:
        return "already" if self.before else "recorded"


def say(who: Asked, item: Item, at: datetime | None, *, done: bool = False) -> Spoken:
    """Append what an item says. `done`: it was done already, so no gate stops it.

    A fault of ours in one item must not stop the others: it is logged and refused.
    """
    before = entry_called(who.record, item.key)
    try:
        with transaction.atomic():
            _say(_told(who, item), item, at, done)
    except Refused as refused:
        now = entry_called(who.record, item.key)
        if refused.code == "conflict" and before is None and now is not None:
            # The same item came twice at one moment and the other was first.
            return say(who, item, at, done=done)
        raise
    except (OperationalError, InterfaceError):
        raise
    except GeometryError as error:
        raise plain.unreadable(str(error)) from error
    except Exception as error:
        log.exception("An item of the kind %r could not be taken in.", item.kind)
        raise Refused(
            "This could not be taken in; what went wrong is in the log.",
            do="Send it again later, or record it on its page.",
            code="fault",
        ) from error
    entry = entry_called(who.record, item.key)
    assert entry is not None
    return Spoken(entry, before is not None)


def first_moment(
    record: Record, key: uuid.UUID, device_time: datetime
) -> datetime | None:
    """When it happened by the sending that came first; None: this is the first.

    A later sending measures the clock a little otherwise; the first one counts.
    """
    before = entry_called(record, key)
    if before is None:
        return None
    said: str = json.loads(before.body).get("device_time", "")
    return before.happened_at if said == moment_text(device_time) else None


def entry_called(record: Record, key: uuid.UUID) -> Entry | None:
    return Entry.objects.filter(record=record, key=key).first()


def _told(who: Asked, item: Item) -> Asked:
    told = who.by.told or Told()
    known = Known(item.known) if item.known else None
    return replace(
        who, by=replace(who.by, told=replace(told, counter=item.counter, known=known))
    )


def _say(who: Asked, item: Item, at: datetime | None, done: bool) -> None:
    if item.corrects is not None:
        _correct(who, item, at)
        return
    if item.withdraws or item.kind == Withdrawn.KIND:
        raise Refused(
            "It takes something back and does not say what.",
            do="Send the key of that entry as corrects, with withdraws true.",
            field="corrects",
            code="no target",
        )
    act = act_called(item.kind)
    if act.right not in who.rights:
        raise Refused(
            f"{item.kind!r} takes the right to {act.right}.",
            do="Ask somebody who has it.",
            code="not yours",
        )
    _refuse_key_of_another_job(who.record, item.key)
    plain.refuse_strange_photos(item.facts)
    said = act.arguments(who, plain.measured(item.facts))
    _refuse_strange_visit(who, said)
    _refuse_passage(who, said)
    said |= {"record": who.record, "by": who.by, "at": at, "key": item.key}
    try:
        act.do(**said)
    except Refused as refused:
        # Sent again, what had passed its gate as done is known as that.
        stopped = isinstance(refused, Gated) or refused.code == "conflict"
        if not (done and stopped and said.get("passage") == NO_PASSAGE):
            raise
        act.do(**said | {"passage": Passage(done=True)})


def _refuse_strange_visit(who: Asked, said: dict[str, Any]) -> None:
    """A visit of another job, or another crew's, is none to record for."""
    visit = said.get("occasion") or said.get("visit")
    if visit is None or Can.SCHEDULE in who.rights:
        return
    if not visits_seen(who).filter(key=visit).exists():
        raise Refused(
            "There is no such visit for you on this job.",
            field="visit",
            code="no visit",
        )


def _refuse_passage(who: Asked, said: dict[str, Any]) -> None:
    passage = said.get("passage")
    if passage and passage.authorised_by and Can.PROCEED_HELD not in who.rights:
        raise Refused(
            f"To {Can.PROCEED_HELD} is not yours.",
            do="Say that it was done already, if it was.",
            code="not yours",
        )


def _refuse_key_of_another_job(record: Record, key: uuid.UUID) -> None:
    """Marks and setups take their key from the item's; no two jobs share one."""
    elsewhere = (
        Mark.objects.filter(key=follows(key, "mark")).exclude(record=record).exists()
        or Setup.objects.filter(key=follows(key, "setup"))
        .exclude(record=record)
        .exists()
    )
    if elsewhere:
        raise Refused(
            "This key was used on another job.",
            do="Make a new key for each statement.",
            field="key",
            code="conflict",
        )


def _correct(who: Asked, item: Item, at: datetime | None) -> None:
    target = Entry.objects.filter(record=who.record, key=item.corrects).first()
    if target is None:
        raise Refused("The entry to correct is not in this record.", code="no target")
    _refuse_correcting(who, target, item)
    fact: Fact = Withdrawn()
    if not item.withdraws:
        fact, at = _changed(target, item), at or target.happened_at
    known = item.known or (Known.DECIDED if item.withdraws else target.known)
    said = Said(
        fact=fact,
        at=at,
        known=Known(known),
        key=item.key,
        corrects=item.corrects,
        withdraws=item.withdraws,
        why=item.why.strip(),
    )
    append(who.record, said, by=who.by)


def _refuse_correcting(who: Asked, target: Entry, item: Item) -> None:
    first = target
    while first.kind == Withdrawn.KIND and first.corrects:
        # Undoing a withdrawal takes the right of what that took back.
        first = Entry.objects.get(record=who.record, number=first.corrects)
    if first.kind in LEFT_TO_THEIR_OWN_PAGES:
        raise Refused(
            f"An entry of the kind {first.kind!r} is not corrected here.",
            do="Use the page it was made on.",
            code="other page",
        )
    if not may_correct(first, who.by, who.rights):
        raise Refused(
            f"Correcting {first.kind!r} is not yours.",
            do="Ask somebody who may.",
            code="not yours",
        )
    newer = corrections(who.record).get(target.number)
    if newer is not None and entry_called(who.record, item.key) is None:
        raise Refused(
            f"Entry {target.number} no longer counts: entry {newer} took its place.",
            do=f"Correct entry {newer}.",
            code="already corrected",
        )


def _changed(target: Entry, item: Item) -> Fact:
    """The target's facts with some changed; all are replaced by the result."""
    if item.kind not in ("", target.kind):
        raise Refused(
            f"A correction keeps the kind of its target, {target.kind!r}.",
            do="Take the entry back and record what happened instead.",
            code="other kind",
        )
    before = decoded(target, {}).fact
    strange = item.facts.keys() - editable(type(before)).keys()
    if strange or target.withdraws:
        raise plain.unreadable(
            f"{sorted(strange)} of {target.kind!r} cannot be said anew: it follows from "
            "other facts. Take the entry back and record it again."
        )
    changes = plain.measured(item.facts)
    after = fact_from(target.kind, {**facts_as_data(before), **changes})
    refuse_unknown_marks(target.record, [link.mark for link in after.marks()])
    return after
