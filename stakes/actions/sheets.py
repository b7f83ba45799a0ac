"""Receive sheets, read them, sort them to the marks they touch."""

from __future__ import annotations

import hashlib
import os
import tempfile
import uuid
from collections.abc import Sequence
from datetime import datetime
from pathlib import Path
from typing import Protocol

from django.conf import settings

from stakes.actions.once import Act, follows, once
from stakes.actions.told import kept_apart, short
from stakes.kinds.sheets import SheetRead, SheetReceived, Status
from stakes.models import Entry, Mark, Record, Sheet
from stakes.record import By, Known, Refused, Said, append

MOST_BYTES = 60 * 1024 * 1024
PIECE = 1 << 20
STATUSES = ("preliminary", "for construction", "superseded", "information")


class Upload(Protocol):
    """What a form hands over for a file."""

    name: str | None
    size: int | None

    def read(self, size: int = -1, /) -> bytes: ...


def receive_sheet(
    *,
    record: Record,
    number: str,
    revision: str,
    status: Status,
    by: By,
    title: str = "",
    from_whom: str = "",
    received_on: str = "",
    replaces: uuid.UUID | None = None,
    what_changed: str = "",
    touched: Sequence[uuid.UUID] = (),
    touches_all: bool = False,
    file_sha256: str = "",
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> uuid.UUID:
    """Record that a sheet came in; returns its key.

    A revision that replaces another and names no marks touches all until it is sorted.
    """
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}
    sheet = follows(key, "sheet")

    def do(act: Act) -> list[Entry]:
        _refuse_sheet(record, number, revision, status, replaces)
        fact = SheetReceived(
            sheet=sheet,
            number=short(number, "number", 60),
            revision=short(revision, "revision", 20),
            status=status,
            title=short(title, "title", 200),
            from_whom=short(from_whom, "from_whom"),
            received_on=received_on,
            replaces=replaces,
            file_sha256=file_sha256,
            what_changed=short(what_changed, "what_changed", 500),
            touched=marks_here(record, touched),
            touches_all=touches_all or bool(replaces and not touched),
        )
        said = Said(fact=fact, at=at, known=Known.SEEN, key=key)
        return append(record, said, by=by, act=act)

    once(record, key, asked, do)
    return sheet


def read_sheet(
    *,
    record: Record,
    sheet: uuid.UUID,
    by: By,
    sorted_to: Sequence[uuid.UUID] = (),
    changes_nothing: bool = False,
    remark: str = "",
    at: datetime | None = None,
    key: uuid.UUID | None = None,
) -> Entry:
    """Say that somebody read a sheet and, if they did, sorted it to marks."""
    key = key or uuid.uuid4()
    asked = {k: v for k, v in locals().items() if k not in ("record", "by", "key")}

    def do(act: Act) -> list[Entry]:
        _found(record, sheet)
        if sorted_to and changes_nothing:
            raise Refused(
                "It is said to change nothing and to touch marks.",
                do="Say one of both.",
                field="changes_nothing",
            )
        fact = SheetRead(
            sheet=sheet,
            sorted_to=marks_here(record, sorted_to),
            changes_nothing=changes_nothing,
        )
        said = Said(
            fact=fact, at=at, known=Known.SEEN, key=key, private=kept_apart(remark)
        )
        return append(record, said, by=by, act=act)

    return once(record, key, asked, do)[0]


def marks_here(record: Record, marks: Sequence[uuid.UUID]) -> tuple[uuid.UUID, ...]:
    """The marks, once each; Refused when one is not of this job."""
    listed = tuple(dict.fromkeys(marks))
    here = Mark.objects.filter(record=record, key__in=listed).count()
    if here != len(listed):
        raise Refused(
            f"{len(listed) - here} of these marks are not on this job.",
            do="Name them again.",
            code="no mark",
        )
    return listed


def keep_file(upload: Upload) -> str:
    """Keep a sheet's file as received under its SHA-256; returns it. Twice is harmless."""
    name = (upload.name or "the file")[:60]
    too_large = Refused(
        f"{name} is larger than {MOST_BYTES >> 20} MB.",
        do="Send the one sheet, or a smaller print of it.",
        field="file",
        code="too large",
    )
    if upload.size is not None and upload.size > MOST_BYTES:
        raise too_large
    folder = Path(settings.DATA_DIR) / "sheets"
    folder.mkdir(parents=True, exist_ok=True)
    handle, temporary = tempfile.mkstemp(dir=folder)
    digest, size = hashlib.sha256(), 0
    try:
        with os.fdopen(handle, "wb") as file:
            while piece := upload.read(PIECE):
                size += len(piece)
                if size > MOST_BYTES:
                    raise too_large
                digest.update(piece)
                file.write(piece)
        if not size:
            raise Refused(f"{name} is empty.", do="Choose it again.", field="file")
        target = file_of(digest.hexdigest())
        target.parent.mkdir(parents=True, exist_ok=True)
        os.replace(temporary, target)
    finally:
        Path(temporary).unlink(missing_ok=True)
    return digest.hexdigest()


def file_of(sha256: str) -> Path:
    """Where the file with this SHA-256 is kept."""
    if len(sha256) != 64 or set(sha256) - set("0123456789abcdef"):
        raise ValueError("Not a SHA-256 in hex.")
    return Path(settings.DATA_DIR) / "sheets" / sha256[:2] / sha256


def _refuse_sheet(
    record: Record,
    number: str,
    revision: str,
    status: str,
    replaces: uuid.UUID | None,
) -> None:
    for field, text in (("number", number), ("revision", revision)):
        if not text.strip():
            raise Refused(
                f"The sheet has no {field}.",
                do="Copy it from its title block; a sketch gets one from you.",
                field=field,
            )
    if status not in STATUSES:
        raise Refused(
            f"{status[:30]!r} is no status of a sheet.",
            do=f"It is one of {', '.join(STATUSES)}.",
            field="status",
        )
    twin = Sheet.objects.filter(
        record=record,
        sheet_number__iexact=" ".join(number.split()),
        revision__iexact=" ".join(revision.split()),
    ).first()
    if twin is not None:
        raise Refused(
            f"Sheet {twin} was received already.",
            do="Open it, or correct the revision.",
            field="revision",
            code="known sheet",
        )
    if replaces is not None:
        _found(record, replaces)


def _found(record: Record, sheet: uuid.UUID) -> Sheet:
    row = Sheet.objects.filter(record=record, key=sheet).first()
    if row is None:
        raise Refused("There is no such sheet on this job.", code="no sheet")
    return row
