"""From rows to a plan: drafted, checked by another person, issued for staking."""

from __future__ import annotations

import hashlib
import json
import uuid
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from django.db import transaction
from django.utils import timezone

from stakes.actions.once import Act, follows, once
from stakes.actions.told import short
from stakes.exchange.rows import Complaint, Row, from_data, read_row, to_data
from stakes.kinds.control import CovarianceBlock, ValueAdopted
from stakes.kinds.planning import MarksPlanned
from stakes.models import Draft, Entry, Record
from stakes.queries.plan import Change, changes, complaints, known_marks
from stakes.record import By, Fact, Known, Refused, Said, append, held
from stakes.record.append import MOST_AT_ONCE

ROWS_PER_ENTRY = 1000
MOST_ROWS = 20_000
"""Rows of one plan: issuing them keeps others waiting for a few seconds, not more."""

MOST_TYPED = 1000


class RowsRefused(Refused):
    """Rows that cannot stand; `complaints` say why, row by row."""

    def __init__(
        self, wrong: Sequence[Complaint], what: str = "", noun: str = "Row"
    ) -> None:
        self.complaints = tuple(wrong)
        grave = sum(c.grave for c in wrong)
        first = next(c for c in wrong if c.grave)
        super().__init__(
            what or f"{grave} {'row needs' if grave == 1 else 'faults need'} mending.",
            where=first.said(noun),
            do="Nothing was kept.",
            code="rows",
        )


@dataclass(frozen=True, slots=True)
class Adoption:
    """The values of control rows are adopted as they are issued: from what source,
    dated when, and how well they are known (standard deviations in millimetres)."""

    source: str
    dated: str = ""
    position_mm: float | None = None
    elevation_mm: float | None = None

    @property
    def covariance(self) -> CovarianceBlock | None:
        if self.position_mm is None and self.elevation_mm is None:
            return None
        plan = _square(self.position_mm)
        return CovarianceBlock(nn=plan, ee=plan, zz=_square(self.elevation_mm))


def plan_marks(
    *,
    record: Record,
    rows: Sequence[Mapping[str, str]],
    title: str,
    by: By,
    basis: Sequence[uuid.UUID] = (),
    source: str = "typed from the sheets",
    key: uuid.UUID | None = None,
) -> Draft:
    """Draft a plan from rows as people type them; nothing is issued yet.

    A row has number (`label`), purpose, carries, northing, easting, elevation, sort,
    stage, line, words, offset, refers_to, tolerance, lasts: texts, in the job's unit;
    and its number on the page (`row`), if that is not its place in the list.
    Raises RowsRefused with a sentence for every row that cannot stand.
    """
    if len(rows) > MOST_TYPED:
        raise Refused(
            f"{len(rows)} rows were typed at once.",
            do=f"Send at most {MOST_TYPED}, or import them from a file.",
            code="too many",
        )
    read: list[Row] = []
    wrong: list[Complaint] = []
    for position, written in enumerate(rows, start=1):
        number = int(written.get("row", position))
        row, more = read_row(written, record.length_unit, number, basis)
        wrong += more
        read += [row] if row else []
    return keep_draft(
        record=record,
        rows=read,
        complained=wrong,
        title=title,
        sort="marks",
        source=source,
        by=by,
        key=key,
    )


def keep_draft(
    *,
    record: Record,
    rows: Sequence[Row],
    title: str,
    sort: str,
    by: By,
    source: str = "",
    about: Mapping[str, Any] | None = None,
    complained: Sequence[Complaint] = (),
    key: uuid.UUID | None = None,
) -> Draft:
    """Keep rows as a draft, unless something grave is wrong with them."""
    key = key or uuid.uuid4()
    known = Draft.objects.filter(key=key).first()
    data = to_data(rows)
    if known is not None:
        return _same(known, record, data)
    if len(rows) > MOST_ROWS:
        raise Refused(
            f"{len(rows):,} marks are too many for one plan.",
            do=f"Cut it in parts of at most {MOST_ROWS:,}.",
            field="file",
            code="too many",
        )
    if not rows and not complained:
        raise Refused("There is no row.", do="Fill in at least one.", code="empty")
    wrong = [*complained, *complaints(rows, known_marks(record))]
    if any(c.grave for c in wrong):
        raise RowsRefused(wrong)
    new = {
        "record": record,
        "title": short(title, "title") or "Plan",
        "sort": sort,
        "source": short(source, "source", 200),
        "rows": data,
        "about": dict(about or {}),
        "complaints": [[c.row, c.field, c.what, c.grave] for c in wrong],
        "computed_person": by.person,
        "computed_by": by.name,
    }
    made, _ = Draft.objects.get_or_create(key=key, defaults=new)
    return _same(made, record, data)


def check_plan(
    *, record: Record, draft: uuid.UUID, by: By, how: str, alone: bool = False
) -> Draft:
    """Say that a draft was checked: by another person, or `alone` where a firm has no
    other. What was looked at (`how`) stays with the plan."""
    with transaction.atomic():
        found = _open(record, draft)
        if found.state == Draft.CHECKED:
            return found
        if not how.strip():
            raise Refused(
                "It is not said how it was checked.",
                do="Say what was compared: another sheet, dimensions added up ...",
                field="how",
            )
        if by.person == found.computed_person and not alone:
            raise Refused(
                f"{by.name} computed this draft.",
                do="Another person checks it. Where the firm has no other, say so.",
                field="alone",
                code="same person",
            )
        found.state = Draft.CHECKED
        found.checked_person, found.checked_by = by.person, by.name
        found.checked_alone = by.person == found.computed_person
        found.checked_at = timezone.now()
        found.checked_how = short(how, "how", 200)
        found.save()
        return found


def leave_draft(*, record: Record, draft: uuid.UUID, by: By) -> None:
    """Put a draft aside; it was never part of the record."""
    with transaction.atomic():
        found = _open(record, draft)
        found.state = Draft.LEFT
        found.save(update_fields=["state"])


Keyed = tuple[Row, uuid.UUID]

MORE: dict[str, Callable[[Draft, Sequence[Keyed]], list[Fact]]] = {}
"""What issuing a draft of one sort says besides its marks: a file read, a layout."""


def issue_plan(
    *,
    record: Record,
    draft: uuid.UUID,
    by: By,
    adopt: Adoption | None = None,
    at: datetime | None = None,
) -> list[Entry]:
    """Issue a checked draft for staking; with `adopt`, the values of its control too.

    Sent twice it is issued once. Marks that stand as they were are left out. Raises
    Refused when the draft is not checked or the job has changed against it.
    """
    found = _draft(record, draft)
    key = follows(found.key, "issue")
    if found.state == Draft.ISSUED:
        return once(record, key, {"draft": str(found.key)}, lambda act: [])
    rows = from_data(found.rows)

    def do(act: Act) -> list[Entry]:
        with held(record):
            ready = _open(record, draft)
            _refuse_unchecked(ready)
            known = known_marks(record)
            wrong = complaints(rows, known)
            if any(c.grave for c in wrong):
                raise RowsRefused(wrong, "The job has changed since this was drafted.")
            said = _statements(ready, changes(rows, known, record.length_unit), adopt)
            entries = append(record, _keyed(said, key, at), by=by, act=act)
            ready.state, ready.issued_by = Draft.ISSUED, by.name
            ready.issued_at = entries[0].happened_at
            ready.first_entry = entries[0].number
            ready.save()
            return entries

    return once(record, key, {"draft": str(found.key)}, do)


def _refuse_unchecked(draft: Draft) -> None:
    if draft.state != Draft.CHECKED:
        raise Refused(
            "Nobody has checked this draft.",
            do="A second person checks it, then the surveyor issues it.",
            code="not checked",
        )


def _statements(
    draft: Draft, found: Sequence[Change], adopt: Adoption | None
) -> list[Fact]:
    told = [c for c in found if c.what != "same"]
    keyed = [(c, c.mark or follows(draft.key, f"mark {c.row.label}")) for c in told]
    facts: list[Fact] = [
        MarksPlanned(
            plan=draft.key,
            rows=tuple(c.row.planned(k, c.is_moved) for c, k in part),
            computed_by=draft.computed_by,
            checked_by=_checker(draft),
            source=draft.source or draft.title,
        )
        for part in _parts(keyed)
    ]
    if facts and draft.sort in MORE:
        facts += MORE[draft.sort](draft, [(c.row, key) for c, key in keyed])
    if adopt is not None:
        facts += _adopted(draft, keyed, adopt)
    if not facts:
        raise Refused(
            "Every mark of this draft stands on the job already, just so.",
            do="There is nothing to issue: leave the draft.",
            code="nothing new",
        )
    if len(facts) > MOST_AT_ONCE:
        raise Refused(
            f"Issuing this would make {len(facts)} entries at once.",
            do=f"Cut it into parts of at most {MOST_AT_ONCE} values.",
            code="too many",
        )
    return facts


def _checker(draft: Draft) -> str:
    who = f"{draft.checked_by} ({draft.checked_how})"
    return f"{who}, alone" if draft.checked_alone else who


def _adopted(
    draft: Draft, keyed: Sequence[tuple[Change, uuid.UUID]], adopt: Adoption
) -> list[Fact]:
    source = short(adopt.source, "source")
    control = [(c, key) for c, key in keyed if c.row.is_control and c.what == "new"]
    if control and not source:
        raise Refused(
            "It is not said where the values of the control come from.",
            do="Name the sheet, the traverse or whoever gave them.",
            field="source",
        )
    return [
        ValueAdopted(
            value=follows(draft.key, f"value {c.row.label}"),
            mark=key,
            carries=c.row.carries,
            northing=c.row.northing,
            easting=c.row.easting,
            elevation=c.row.elevation,
            source=source,
            dated=short(adopt.dated, "dated", 20),
            covariance=adopt.covariance,
            basis=c.row.basis,
        )
        for c, key in control
    ]


def _parts(keyed: list[Any]) -> list[list[Any]]:
    return [keyed[i : i + ROWS_PER_ENTRY] for i in range(0, len(keyed), ROWS_PER_ENTRY)]


def _keyed(facts: Sequence[Fact], key: uuid.UUID, at: datetime | None) -> list[Said]:
    return [
        Said(
            fact=fact,
            at=at,
            known=Known.DECIDED,
            key=key if n == 0 else follows(key, f"part {n}"),
        )
        for n, fact in enumerate(facts)
    ]


def rows_root(rows: Sequence[Row]) -> str:
    """SHA-256 over rows in order, each as its plain data."""
    digest = hashlib.sha256()
    for data in to_data(rows):
        digest.update(json.dumps(data, sort_keys=True).encode())
        digest.update(b"\n")
    return digest.hexdigest()


def _draft(record: Record, key: uuid.UUID) -> Draft:
    found = Draft.objects.filter(record=record, key=key).first()
    if found is None:
        raise Refused("There is no such draft on this job.", code="no draft")
    return found


def _open(record: Record, key: uuid.UUID) -> Draft:
    found = Draft.objects.select_for_update().filter(record=record, key=key).first()
    if found is None:
        raise Refused("There is no such draft on this job.", code="no draft")
    if not found.is_open:
        raise Refused(
            f"This draft was {found.state} already.",
            do="Look at it on the page of drafts.",
            code="closed draft",
        )
    return found


def _same(known: Draft, record: Record, data: list[dict[str, Any]]) -> Draft:
    if known.record_id == record.pk and known.rows == data:
        return known
    raise Refused(
        "This form was sent before, with other rows.",
        do="Open the form again to draft something more.",
        code="conflict",
    )


def _square(sd_mm: float | None) -> str:
    return "0" if sd_mm is None else f"{sd_mm * sd_mm:.6f}".rstrip("0").rstrip(".")
