"""The life of a mark as one line: what happened when, and what was recorded late."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime

from stakes.drawings.colours import COLOURS
from stakes.drawings.svg import document, group, tag, words

WIDTH, HEIGHT, LEFT, RIGHT = 960.0, 96.0, 24.0, 24.0
_ROWS = {"set": 0, "checked": 0, "judged again": 0, "seen": 1, "destroyed": 1}


@dataclass(frozen=True, slots=True)
class Moment:
    """One entry on the line."""

    at: datetime
    recorded_at: datetime
    kind: str
    words: str
    verdict: str = ""
    counts: bool = True
    late: bool = False


def timeline(moments: Sequence[Moment], label: str) -> str:
    """The line with a dot for each entry; a late one trails towards when it was
    recorded, at most to the end of the line."""
    if not moments:
        return ""
    start = min(m.at for m in moments)
    end = max(m.at for m in moments)
    span = max((end - start).total_seconds(), 1.0)

    def x(at: datetime) -> float:
        return LEFT + (WIDTH - LEFT - RIGHT) * (at - start).total_seconds() / span

    middle = HEIGHT / 2
    return document(
        words("title", f"Life of {label}: {len(moments)} entries"),
        tag(
            "path",
            d=f"M{LEFT},{middle}H{WIDTH - RIGHT}",
            stroke=COLOURS["ink"],
            data_ink="ink",
        ),
        group(*(_dot(m, x(m.at), x(min(m.recorded_at, end)), middle) for m in moments)),
        _ends(start, end),
        box=(0, 0, WIDTH, HEIGHT),
        class_="life",
        font_family="IBM Plex Sans, sans-serif",
        font_size=12,
        role="img",
    )


def _dot(moment: Moment, x: float, recorded: float, middle: float) -> str:
    ink = _ink(moment)
    y = middle - 14 if _ROWS.get(moment.kind, 2) == 0 else middle
    y = middle + 14 if _ROWS.get(moment.kind, 2) == 1 else y
    inside = [words("title", f"{moment.at:%Y-%m-%d %H:%M} UTC: {moment.words}")]
    if moment.late:
        late = f"M{x:.1f},{y + 8:.1f}H{recorded:.1f}"
        inside.append(
            tag("path", d=late, stroke=COLOURS["quiet"], stroke_dasharray="2 3")
        )
    if y != middle:
        inside.append(tag("path", d=f"M{x:.1f},{middle}V{y}", stroke=COLOURS[ink]))
    inside.append(_sign(moment, x, y, ink))
    return tag("g", *inside, opacity=None if moment.counts else 0.35)


def _sign(moment: Moment, x: float, y: float, ink: str) -> str:
    if moment.kind == "destroyed" or moment.verdict == "fail":
        cross = f"M{x - 5:.1f},{y - 5:.1f}l10,10m0,-10l-10,10"
        return tag("path", d=cross, stroke=COLOURS[ink], stroke_width=2.5, fill="none")
    filled = moment.kind in ("set", "checked", "value adopted")
    fill = COLOURS[ink] if filled else COLOURS["paper"]
    return tag(
        "circle", cx=x, cy=y, r=5, fill=fill, stroke=COLOURS[ink], stroke_width=2
    )


def _ink(moment: Moment) -> str:
    if moment.verdict == "fail":
        return "in-question"
    return {
        "set": "not-checked",
        "checked": "checked",
        "destroyed": "gone",
        "planned": "planned",
        "superseded": "superseded",
    }.get(moment.kind, "ink")


def _ends(start: datetime, end: datetime) -> str:
    quiet, y = COLOURS["quiet"], HEIGHT - 4
    return words("text", f"{start:%Y-%m-%d}", x=LEFT, y=y, fill=quiet) + words(
        "text", f"{end:%Y-%m-%d}", x=WIDTH - RIGHT, y=y, fill=quiet, text_anchor="end"
    )
