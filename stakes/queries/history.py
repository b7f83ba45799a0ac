"""The life of one mark, entry by entry: both clocks, who, how known, what it said."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime, timedelta
from uuid import UUID

from stakes.can import Asked, Can
from stakes.models import EntryMark, Mark, PrivatePart, Record
from stakes.record import Counted, entries
from stakes.record.lengths import Measured

LATE = timedelta(hours=12)
"""Recorded this long after it happened, a fact looks different from one on the spot."""


@dataclass(frozen=True, slots=True)
class Line:
    """One entry as a line of a history."""

    said: Counted
    sentence: str
    roles: tuple[str, ...] = ()
    details: tuple[tuple[str, str], ...] = ()
    missing: tuple[str, ...] = ()
    remark: str = ""

    @property
    def is_late(self) -> bool:
        return self.said.recorded_at - self.said.happened_at > LATE

    @property
    def counts(self) -> bool:
        return self.said.counts

    @property
    def tone(self) -> str:
        """The colour of its dot: what it did to the mark."""
        if self.verdict == "fail":
            return "failed"
        if self.verdict == "pass":
            return "checked"
        tones = {"set": "not checked", "destroyed": "gone", "superseded": "superseded"}
        return tones.get(self.said.kind, "")

    @property
    def verdict(self) -> str:
        judgement = getattr(self.said.fact, "judgement", None)
        return judgement.verdict if judgement else ""


def of_mark(
    record: Record,
    mark: UUID,
    at: datetime | None = None,
    known: int | None = None,
    *,
    with_remarks: bool = True,
) -> list[Line]:
    """Everything said of a mark, also what no longer counts, in the order of the facts."""
    said = entries(record, mark=mark, at=at, known=known, all_said=True)
    roles: dict[int, list[str]] = {}
    links = EntryMark.objects.filter(record=record, mark=mark)
    for number, role in links.values_list("number", "role"):
        roles.setdefault(number, []).append(role)
    remarks = _remarks(record, [c.number for c in said]) if with_remarks else {}
    return [
        line(c, tuple(roles.get(c.number, ())), remarks.get(c.number, "")) for c in said
    ]


KEPT_FROM: list[Callable[[Asked, list[Line]], list[Line]]] = []
"""Each takes out the lines a reader is not to be told. `jobs` knows the companies."""


def told_of_mark(
    asked: Asked, mark: UUID, at: datetime | None = None, known: int | None = None
) -> list[Line]:
    """A mark's history as this reader may have it: remarks and what no longer counts
    are for readers of the whole record."""
    whole = asked.can(Can.READ_RECORD)
    lines = of_mark(asked.record, mark, at, known, with_remarks=whole)
    lines = lines if whole else [x for x in lines if x.counts]
    for keep_from in KEPT_FROM:
        lines = keep_from(asked, lines)
    return lines


def line(said: Counted, roles: tuple[str, ...] = (), remark: str = "") -> Line:
    return Line(
        said=said,
        sentence=said.fact.sentence(),
        roles=roles,
        details=tuple(details(said)),
        missing=tuple(missing(said)),
        remark=remark,
    )


def _remarks(record: Record, numbers: list[int]) -> dict[int, str]:
    parts = PrivatePart.objects.filter(record=record, number__in=numbers, name="remark")
    return {p.number: p.text or "(erased)" for p in parts}


_SHOWN = (
    ("instrument", "instrument"),
    ("serial", "serial"),
    ("calibrated_on", "calibrated"),
    ("holds", "held by"),
    ("label", "label"),
    ("plain", "in plain words"),
    ("refers_to", "cut or fill to"),
    ("cut", "cut (+) or fill (−)"),
    ("off_north", "off north"),
    ("off_east", "off east"),
    ("off_up", "off up"),
    ("northing", "northing"),
    ("easting", "easting"),
    ("elevation", "elevation"),
    ("source", "source"),
    ("cause", "cause"),
    ("cause_by", "cause according to"),
    ("told_by", "told by"),
    ("old", "old stake"),
    ("authorised_by", "authorised by"),
    ("reason", "reason"),
    ("weather", "weather"),
)
_JUDGED = ("measured", "computed", "difference", "tolerance", "uncertainty")
_WANTED = {
    "setup opened": ("serial", "calibrated_on"),
    "set": ("holds", "setup"),
    "destroyed": ("cause",),
    "checked": ("setup",),
}


def details(said: Counted) -> list[tuple[str, str]]:
    """The facts of an entry worth a line of their own, as (word, text)."""
    found = [
        (word, text(value))
        for name, word in _SHOWN
        if (value := getattr(said.fact, name, None))
    ]
    judgement = getattr(said.fact, "judgement", None)
    if judgement is not None:
        found += [
            (name, text(value))
            for name in _JUDGED
            if (value := getattr(judgement, name)) is not None
        ]
    if (way := getattr(said.fact, "way", None)) is not None:
        found.append(("put back by", "; ".join([way.method, *way.numbers])))
    return found


def missing(said: Counted) -> list[str]:
    """What this kind of entry should say and does not: "not recorded" is not "no"."""
    return [
        name.replace("_", " ")
        for name in _WANTED.get(said.kind, ())
        if not getattr(said.fact, name, None)
    ]


def text(value: object) -> str:
    if isinstance(value, Measured):
        return f"{value.text.removesuffix(value.unit).strip()} {value.unit}"
    return str(value)


def labels(record: Record) -> dict[UUID, str]:
    """Every mark's number, to name marks in sentences."""
    return dict(Mark.objects.filter(record=record).values_list("key", "label"))
