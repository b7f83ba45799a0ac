"""Points from a file into a draft: read, doubted, complained about line by line.

A file becomes part of the record only when its draft is issued; then one entry keeps
its hash, the answers, what was left out and every complaint with its line.
"""

from __future__ import annotations

import uuid
from collections.abc import Mapping, Sequence
from pathlib import Path

from django.conf import settings

from stakes.actions.issuing import MORE, Keyed, RowsRefused, keep_draft, rows_root
from stakes.exchange.comma import (
    BY_HEADER,
    ORDERS,
    Answers,
    Reading,
    Unreadable,
    read_points,
)
from stakes.exchange.doubts import Doubt, doubts
from stakes.exchange.rows import Complaint, Row
from stakes.kinds.importing import FileRead
from stakes.models import Draft, Mark, Record
from stakes.queries.plan import Known as KnownMark
from stakes.queries.plan import complaints, known_marks
from stakes.queries.tolerance import classes_of, control_class
from stakes.record import By, Fact, Refused

COMPLAINTS_KEPT = 500


class ImportRefused(RowsRefused):
    """A file that cannot become a draft as it is; nothing of it was kept."""

    def __init__(
        self, wrong: Sequence[Complaint], doubted: Sequence[Doubt], reading: Reading
    ) -> None:
        self.doubts, self.reading = tuple(doubted), reading
        grave = [c for c in wrong if c.grave]
        stand_in = Complaint(0, "", doubted[0].sentence if doubted else "")
        super().__init__(
            grave or [stand_in],
            f"{len(grave)} {'line needs' if len(grave) == 1 else 'lines need'} mending."
            if grave
            else "The points do not fit the job as answered.",
            "Line",
        )
        self.complaints = tuple(sorted(wrong, key=lambda c: c.row))


def import_points(
    *,
    record: Record,
    data: bytes,
    answers: Answers,
    by: By,
    title: str = "",
    name: str = "",
    sheet: uuid.UUID | None = None,
    leave_out: bool = False,
    doubts_seen: bool = False,
    key: uuid.UUID | None = None,
) -> Draft:
    """Read points and keep them as a draft to be checked and issued.

    Raises ImportRefused with every complaint and doubt. `leave_out` leaves the lines
    complained of out, by their numbers; `doubts_seen` says that the answers stand.
    """
    reading = read_file(data, answers, sheet)
    doubted = doubts(_places(reading.rows), _control_places(record))
    known = known_marks(record)
    rows, agreeing = _without_known_control(record, reading.rows, known)
    reading.complain(agreeing)
    wrong = list(reading.complaints)
    together = complaints(rows, known)
    grave = any(c.grave for c in [*wrong, *together])
    if (doubted and not doubts_seen) or (grave and not leave_out):
        raise ImportRefused([*wrong, *together], doubted, reading)
    out = {c.row for c in together if c.grave}
    rows = [r for r in rows if r.row not in out]
    left_out = sorted({*reading.left_out, *out})
    if not rows:
        raise ImportRefused([*wrong, *together], doubted, reading)
    return keep_draft(
        record=record,
        rows=rows,
        title=title or f"Points from {name or 'pasted text'}",
        sort="import",
        source=f"{name or 'pasted text'}, SHA-256 {reading.sha256[:16]}"[:200],
        about=_about(reading, answers, name, sheet, left_out, doubted, together),
        by=by,
        key=key,
    )


def read_file(data: bytes, answers: Answers, sheet: uuid.UUID | None) -> Reading:
    """The file as read; Refused when it cannot be read at all."""
    if answers.order != BY_HEADER and answers.order not in ORDERS:
        raise Refused("The order of the columns is not known.", field="order")
    try:
        return read_points(data, answers, [sheet] if sheet else [])
    except Unreadable as error:
        raise Refused(
            str(error), do="Mend the file and send it again.", field="file"
        ) from error


def _about(
    reading: Reading,
    answers: Answers,
    name: str,
    sheet: uuid.UUID | None,
    left_out: Sequence[int],
    doubted: Sequence[Doubt],
    together: Sequence[Complaint],
) -> dict:
    said = [c.said("Line") for c in [*reading.complaints, *together]]
    said = [*(f"Doubted and confirmed: {d.sentence}" for d in doubted), *said]
    more = len(said) - COMPLAINTS_KEPT + reading.more_complaints
    kept = said[:COMPLAINTS_KEPT]
    if more > 0:
        kept.append(f"And {more} more.")
    return {
        "file_sha256": reading.sha256,
        "file_name": name[:120],
        "encoding": reading.encoding,
        "lines": reading.lines,
        "unit": str(answers.unit),
        "order": reading.order,
        "frame": answers.frame,
        "sheet": str(sheet) if sheet else "",
        "purpose": answers.purpose,
        "stage": answers.stage,
        "left_out": list(left_out),
        "complaints": kept,
    }


def _file_read(draft: Draft, keyed: Sequence[Keyed]) -> list[Fact]:
    """What issuing an imported draft says of its file."""
    about = dict(draft.about)
    sheet = about.pop("sheet")
    return [
        FileRead(
            plan=draft.key,
            taken=len(keyed),
            rows_root=rows_root([row for row, _ in keyed]),
            sheet=uuid.UUID(sheet) if sheet else None,
            left_out=tuple(about.pop("left_out")),
            complaints=tuple(about.pop("complaints")),
            **about,
        )
    ]


MORE["import"] = _file_read


def keep_import(data: bytes, sha256: str) -> None:
    """Keep a file under its hash, so that it need not be sent again to mend answers."""
    target = import_file(sha256)
    target.parent.mkdir(parents=True, exist_ok=True)
    if not target.exists():
        part = target.with_name(f"{target.name}.{uuid.uuid4().hex}")
        part.write_bytes(data)
        part.replace(target)


def import_file(sha256: str) -> Path:
    if len(sha256) != 64 or set(sha256) - set("0123456789abcdef"):
        raise ValueError("Not a SHA-256 in hex.")
    return Path(settings.DATA_DIR) / "imports" / sha256[:2] / sha256


def _without_known_control(
    record: Record, rows: Sequence[Row], known: Mapping[str, KnownMark]
) -> tuple[list[Row], list[Complaint]]:
    """Files of stakes often carry the control too: what agrees with the job is left
    out with a note, and what does not stays to be complained of."""
    limit = control_class(classes_of(record)).position
    most = int(limit.nm) if limit else 0
    kept, notes = [], []
    for row in rows:
        mark = known.get(row.label)
        if mark is None or mark.purpose in ("stake", row.purpose):
            kept.append(row)
        elif _apart_nm(row, mark) <= most:
            what = f"{row.label} is {mark.purpose} on this job and agrees; left out."
            notes.append(Complaint(row.row, "label", what, grave=False))
        else:
            kept.append(row)
    return kept, notes


def _apart_nm(row: Row, mark: KnownMark) -> int:
    """The largest difference in a coordinate that both have."""
    pairs = (
        (row.northing, mark.northing_nm),
        (row.easting, mark.easting_nm),
        (row.elevation, mark.elevation_nm),
    )
    return max(
        (abs(int(now.nm) - int(was)) for now, was in pairs if now and was), default=0
    )


def _places(rows: Sequence[Row]) -> dict[str, tuple[float, float]]:
    return {
        r.label: (r.northing.metres, r.easting.metres)
        for r in rows
        if r.northing is not None and r.easting is not None
    }


def _control_places(record: Record) -> dict[str, tuple[float, float]]:
    """Where the control of the job is; without any, all its marks."""
    rows = Mark.objects.filter(record=record, northing_m__isnull=False)
    control = rows.filter(purpose="control")
    found = control if control.exists() else rows
    listed = found.values_list("label", "northing_m", "easting_m")
    return {label: (n, e) for label, n, e in listed if e is not None}
