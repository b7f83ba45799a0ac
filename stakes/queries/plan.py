"""What a draft would change in the plan, and what is wrong with it, row by row."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from uuid import UUID

from django.db.models import Q

from geometry.units import Length, Unit
from stakes.exchange.numbers import doubled, faces, look_alikes
from stakes.exchange.rows import Complaint, Row
from stakes.models import Draft, Mark, Record, Stake
from stakes.record.lengths import Measured

WORDS = ("sort", "stage", "line", "words", "refers_to", "tolerance", "lasts", "carries")
UP = ("standing", "disturbed")


@dataclass(frozen=True, slots=True)
class Known:
    """A mark the job has already, as far as a plan must know it."""

    key: UUID
    label: str
    purpose: str
    stage: str
    standing: str
    northing_nm: str
    easting_nm: str
    elevation_nm: str
    said: tuple[str, ...]
    basis: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Change:
    """One row beside what the job has: new, moved, in words only, or the same."""

    row: Row
    mark: UUID | None
    what: str
    north: Length | None = None
    east: Length | None = None
    up: Length | None = None
    across: Length | None = None
    standing: str = ""

    @property
    def is_moved(self) -> bool:
        return self.what == "moved"

    @property
    def supersedes(self) -> bool:
        """A stake stands where the mark was."""
        return self.is_moved and self.standing in UP


def decimals(unit: Unit) -> int:
    """How finely coordinates are shown: 1 mm, or a thousandth of a foot."""
    return 3


def known_marks(record: Record) -> dict[str, Known]:
    """Every mark of a job by its number, in one query."""
    names = ("key", "label", "purpose", "stage", "standing")
    places = ("northing_nm", "easting_nm", "elevation_nm")
    rows = Mark.objects.filter(record=record).values(*names, *places, *WORDS, "basis")
    return {
        row["label"]: Known(
            **{name: row[name] for name in (*names, *places)},
            said=tuple(row[name] for name in WORDS),
            basis=tuple(row["basis"]),
        )
        for row in rows
    }


def complaints(rows: Sequence[Row], known: Mapping[str, Known]) -> list[Complaint]:
    """What is wrong with rows taken together and beside the marks of the job."""
    found = []
    first: dict[str, int] = {}
    for row in rows:
        first.setdefault(row.label, row.row)
    for label, where in doubled((r.row, r.label) for r in rows).items():
        text = " and ".join(map(str, where[:6]))
        found += [
            Complaint(r, "label", f"{label} stands in rows {text}. Keep one of them.")
            for r in where[1:]
        ]
    for label, other in look_alikes(first).items():
        found.append(_alike(first[label], label, other))
    found += _alike_to_known(first, known)
    for row in rows:
        if (mark := known.get(row.label)) is not None:
            found += _against(row, mark)
    return sorted(found, key=lambda c: (c.row, c.field))


def _alike(row: int, label: str, other: str) -> Complaint:
    return Complaint(
        row,
        "label",
        f"{label} looks like {other}. On a lath nobody can tell them apart: give one "
        "of them another number.",
    )


def _alike_to_known(
    first: Mapping[str, int], known: Mapping[str, Known]
) -> list[Complaint]:
    by_face = {face: label for label in known for face in faces(label)}
    found = []
    for label, row in first.items():
        if label in known:
            continue
        other = next((by_face[f] for f in faces(label) if f in by_face), None)
        if other is not None:
            found.append(_alike(row, label, f"{other}, which this job has already"))
    return found


def _against(row: Row, mark: Known) -> list[Complaint]:
    """A row whose number the job has already."""
    found = []
    if mark.purpose != row.purpose:
        found.append(
            Complaint(
                row.row,
                "purpose",
                f"{row.label} is {mark.purpose} on this job and {row.purpose} here. "
                "Give this one another number.",
            )
        )
    elif mark.purpose != "stake" and _moved(row, mark):
        found.append(
            Complaint(
                row.row,
                "northing",
                f"{row.label} is {mark.purpose} and has other values here. Control is "
                "never moved by a plan: adopt a new value on the control page.",
            )
        )
    if mark.stage != row.stage and mark.purpose == "stake":
        found.append(
            Complaint(
                row.row,
                "stage",
                f"{row.label} belongs to stage {mark.stage or 'none'}. The mark of "
                f"stage {row.stage or 'none'} needs a number of its own.",
            )
        )
    if mark.standing == "retired":
        found.append(
            Complaint(
                row.row,
                "label",
                f"{row.label} was retired; issuing it brings it back.",
                grave=False,
            )
        )
    return found


def changes(
    rows: Iterable[Row], known: Mapping[str, Known], unit: Unit
) -> list[Change]:
    """Each row with what issuing it would change."""
    return [_change(row, known.get(row.label), unit) for row in rows]


def _change(row: Row, mark: Known | None, unit: Unit) -> Change:
    if mark is None:
        return Change(row, None, "new")
    if not _moved(row, mark):
        said = tuple(getattr(row, name) for name in WORDS)
        same = said == mark.said and {str(b) for b in row.basis} <= set(mark.basis)
        return Change(
            row, mark.key, "same" if same else "words", standing=mark.standing
        )
    north = _less(row.northing, mark.northing_nm, unit)
    east = _less(row.easting, mark.easting_nm, unit)
    across = None
    if north is not None and east is not None:
        far = math.hypot(north.metres, east.metres)
        across = Length.from_metres(far, unit, decimals(unit))
    up = _less(row.elevation, mark.elevation_nm, unit)
    return Change(row, mark.key, "moved", north, east, up, across, mark.standing)


def _moved(row: Row, mark: Known) -> bool:
    pairs = (
        (row.northing, mark.northing_nm),
        (row.easting, mark.easting_nm),
        (row.elevation, mark.elevation_nm),
    )
    return any((now.nm if now else "") != was for now, was in pairs)


def _less(now: Measured | None, was_nm: str, unit: Unit) -> Length | None:
    if now is None or not was_nm:
        return None
    return Length.from_nanometres(int(now.nm) - int(was_nm), unit, decimals(unit))


def open_drafts(record: Record) -> list[Draft]:
    """Drafts still to be checked or issued, the newest first; without their rows."""
    rows = Draft.objects.filter(record=record, state__in=("computed", "checked"))
    return list(rows.defer("rows", "about", "complaints").order_by("-computed_at"))


def stages(record: Record) -> list[tuple[str, int, int]]:
    """Each stage in use with its marks: how many are not retired, how many stand."""
    marks = Mark.objects.filter(record=record).exclude(stage="")
    counted: dict[str, list[int]] = {}
    for stage, standing in marks.values_list("stage", "standing"):
        numbers = counted.setdefault(stage, [0, 0])
        numbers[0] += standing != "retired"
        numbers[1] += standing in UP
    return [(stage, left, up) for stage, (left, up) in sorted(counted.items())]


def superseded_standing(record: Record) -> list[tuple[UUID, str]]:
    """Marks whose superseded stake still stands, or that have two hubs: tasks."""
    stakes = Stake.objects.filter(record=record, standing__in=UP, superseded=True)
    found = Q(key__in=stakes.values("mark")) | Q(doubled=True)
    marks = Mark.objects.filter(found, record=record).order_by("label")
    return list(marks.values_list("key", "label"))
