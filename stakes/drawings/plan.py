"""The site plan: one drawing for the page, the download and print.

Pure: zones, lines and marks in metres, plain words in, SVG out. The one place where
northing, which grows up, becomes y, which grows down; everything is drawn from a local
origin, for seven-digit coordinates lose their decimals in a renderer.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from stakes.drawings.colours import COLOURS
from stakes.drawings.frame import Frame, Point
from stakes.drawings.signs import sentence, symbol_id, symbols
from stakes.drawings.svg import document, group, number, tag, words
from stakes.drawings.zones import DrawnZone, hatching, in_order, zone

MOST_LABELS = 500
"""More labels than this are neither readable nor quick to move."""

NICE_BARS = (1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000, 5000)


@dataclass(frozen=True, slots=True)
class DrawnMark:
    """A mark on the plan: where (E, N in metres), its sign, its number, its page."""

    e_m: float
    n_m: float
    label: str
    purpose: str
    standing: str
    trust: str
    carries: str = "both"
    href: str = ""
    held: bool = False


@dataclass(frozen=True, slots=True)
class Ray:
    """What the surveyor projects: a line held, a way back; dashed when it checks."""

    ends_m: tuple[Point, Point]
    dashed: bool = False


@dataclass(frozen=True, slots=True)
class DrawnEllipse:
    """A predicted 95 % ellipse at true shape, magnified by a stated factor."""

    at_m: Point
    semi_major_m: float
    semi_minor_m: float
    azimuth_rad: float
    magnified: float = 1.0


@dataclass(frozen=True, slots=True)
class Plan:
    """Everything one drawing shows. `unit_m` is the job's unit in metres, `unit` its
    name; the scale bar and the grid are in it."""

    marks: Sequence[DrawnMark] = ()
    zones: Sequence[DrawnZone] = ()
    rays: Sequence[Ray] = ()
    ellipses: Sequence[DrawnEllipse] = ()
    unit_m: float = 1.0
    unit: str = "m"
    title: str = "Site plan"

    def points(self) -> list[Point]:
        """All places the drawing must show."""
        return [
            *((m.e_m, m.n_m) for m in self.marks),
            *((c[0], c[1]) for z in self.zones for c in z.corners_m),
        ]


def draw(
    plan: Plan, prefix: str = "plan", width: float = 960.0, standalone: bool = False
) -> str:
    """The plan as SVG. `standalone` adds paper, so that it can be saved and printed."""
    frame = Frame.around(plan.points(), width)
    wide, high = frame.size
    parts = [
        words("title", plan.title),
        symbols(
            prefix, ((m.purpose, m.standing, m.trust, m.carries) for m in plan.marks)
        ),
        hatching(prefix),
    ]
    if standalone:
        parts.append(tag("rect", width=wide, height=high, fill=COLOURS["paper"]))
    parts += [
        _grid(frame, plan.unit_m),
        group(*(zone(frame, one, prefix) for one in in_order(plan.zones))),
        group(*(_ray(frame, ray) for ray in plan.rays)),
        group(*(_ellipse(frame, e) for e in plan.ellipses)),
        _marks(frame, plan.marks, prefix),
        _scale_bar(frame, plan),
        _north(wide),
    ]
    return document(
        *parts,
        box=(0, 0, wide, high),
        class_="site-plan",
        font_family="IBM Plex Sans, sans-serif",
        font_size=12,
        role="group",
        aria_label=plan.title,
    )


def _marks(frame: Frame, marks: Sequence[DrawnMark], prefix: str) -> str:
    labelled = set(_labelled(frame, marks))
    drawn = (_mark(frame, mark, prefix, i in labelled) for i, mark in enumerate(marks))
    return group(*drawn, ink="ink")


def _labelled(frame: Frame, marks: Sequence[DrawnMark]) -> list[int]:
    """Which marks get their number written: control first, then what needs care, then
    where there is room; never more than can be read or moved."""
    taken: set[tuple[int, int]] = set()
    chosen: list[int] = []
    order = sorted(range(len(marks)), key=lambda i: _precedence(marks[i]))
    for i in order:
        x, y = frame.xy((marks[i].e_m, marks[i].n_m))
        cell = (int(x // 34), int(y // 15))
        if cell in taken:
            continue
        taken |= {cell, (cell[0] + 1, cell[1])}
        chosen.append(i)
        if len(chosen) == MOST_LABELS:
            break
    return chosen


def _precedence(mark: DrawnMark) -> int:
    if mark.purpose in ("control", "benchmark"):
        return 0
    return (
        1 if mark.standing in ("gone", "disturbed") or "question" in mark.trust else 2
    )


def _mark(frame: Frame, mark: DrawnMark, prefix: str, labelled: bool) -> str:
    x, y = frame.xy((mark.e_m, mark.n_m))
    said = sentence(mark.purpose, mark.standing, mark.trust, mark.carries)
    held = ", on hold" if mark.held else ""
    sign_id = symbol_id(prefix, mark.purpose, mark.standing, mark.trust, mark.carries)
    inside = [
        words("title", f"{mark.label}: {said}{held}"),
        tag("use", href=f"#{sign_id}", x=x, y=y),
    ]
    if mark.held:
        inside.append(_hold_ring(x, y))
    if labelled:
        inside.append(_label(x + 12, y - 8, mark.label))
    drawn = "".join(inside)
    if mark.href:
        return tag("a", drawn, href=mark.href, class_="mark")
    return tag("g", drawn, class_="mark")


def _hold_ring(x: float, y: float) -> str:
    ink = COLOURS["gone"]
    return tag("circle", cx=x, cy=y, r=15, fill="none", stroke=ink, stroke_width=2)


def _label(x: float, y: float, text: str) -> str:
    """A number with paper about it, readable over lines and hatching."""
    return words(
        "text",
        text,
        x=x,
        y=y,
        font_weight="600",
        fill="currentColor",
        stroke=COLOURS["paper"],
        stroke_width=3,
        paint_order="stroke",
        data_halo="paper",
    )


def _ray(frame: Frame, ray: Ray) -> str:
    (x1, y1), (x2, y2) = frame.xy(ray.ends_m[0]), frame.xy(ray.ends_m[1])
    return tag(
        "line",
        x1=x1,
        y1=y1,
        x2=x2,
        y2=y2,
        stroke=COLOURS["pink"],
        stroke_width=2,
        stroke_dasharray="7 5" if ray.dashed else None,
    )


def _ellipse(frame: Frame, e: DrawnEllipse) -> str:
    x, y = frame.xy(e.at_m)
    grow = e.magnified * frame.scale
    turn = math.degrees(e.azimuth_rad) - 90
    return tag(
        "ellipse",
        cx=x,
        cy=y,
        rx=max(e.semi_major_m * grow, 1.5),
        ry=max(e.semi_minor_m * grow, 1.5),
        transform=f"rotate({number(turn)} {number(x)} {number(y)})",
        fill=COLOURS["pink"],
        fill_opacity=0.15,
        stroke=COLOURS["pink"],
        stroke_width=1.5,
    )


def bar_length(width_m: float, unit_m: float) -> int:
    """The longest round length, in the job's unit, that fits a fifth of the plan.

    >>> bar_length(100.0, 0.3048)
    50
    """
    fits = [bar for bar in NICE_BARS if bar * unit_m <= width_m / 5]
    return fits[-1] if fits else 1


def _grid(frame: Frame, unit_m: float) -> str:
    step = bar_length(frame.width_m, unit_m) * unit_m * frame.scale / 2
    wide, high = frame.size
    lines = [
        f"M{number(i * step)},0V{number(high)}" for i in range(int(wide / step) + 1)
    ]
    lines += [
        f"M0,{number(i * step)}H{number(wide)}" for i in range(int(high / step) + 1)
    ]
    return tag(
        "path", d="".join(lines), stroke=COLOURS["grid"], class_="grid", fill="none"
    )


def _scale_bar(frame: Frame, plan: Plan) -> str:
    bar = bar_length(frame.width_m, plan.unit_m)
    long = bar * plan.unit_m * frame.scale
    ink = COLOURS["ink"]
    return tag(
        "g",
        tag("path", d=f"M20,16v8M20,20h{number(long)}m0,-4v8", stroke=ink, fill="none"),
        words("text", "0", x=20, y=36, font_size=11, text_anchor="middle", fill=ink),
        words("text", f"{bar} {plan.unit}", x=20 + long, y=36, font_size=11, fill=ink),
        class_="scale-bar",
    )


def _north(wide: float) -> str:
    ink = COLOURS["ink"]
    return tag(
        "g",
        tag("path", d="M0,-16L6,12L0,6L-6,12Z", fill=ink),
        words("text", "N", y=26, font_size=11, text_anchor="middle", fill=ink),
        transform=f"translate({number(wide - 26)} 26)",
        class_="north",
    )
