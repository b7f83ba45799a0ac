"""The signs of marks: shape says what it is for, filling says what may be trusted,
posture says what happened to it. Colour only repeats them, so that a sign reads the
same in black and white. What is on the ground and what may be trusted are two facts,
and every pair of them has its own picture."""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

from stakes.drawings.colours import COLOURS
from stakes.drawings.shapes import OUTLINES, Outline, hatching, left_half
from stakes.drawings.svg import document, group, number, path, tag, words

PURPOSES = ("control", "benchmark", "stake", "foreign")
STANDINGS = ("planned", "standing", "disturbed", "gone", "retired")
TRUSTS = ("not checked", "checked", "in question", "failed", "superseded")
CARRIES = ("both", "position", "elevation")

_LEAN_DEGREES = 12
_PALE = 0.3
_GAP = 3.25
_DOT = 3.6
_BOX = (-16.0, -16.0, 32.0, 32.0)


class Combo(NamedTuple):
    """One sign: what it is for, what is on the ground, what may be trusted, and
    whether it carries position, elevation or both."""

    purpose: str
    standing: str
    trust: str
    carries: str = "both"


def sign(purpose: str, standing: str, trust: str, carries: str = "both") -> str:
    """The picture of a mark, centred on 0,0 and about 20 units wide."""
    combo = _known(purpose, standing, trust, carries)
    ink = _ink(combo)
    if standing == "retired":
        body = _retired(trust)
    elif standing == "gone":
        body = _body(combo, pale=True) + _under_cross(trust) + _cross()
    elif standing == "disturbed":
        upright = _body(combo) + _over(trust) + _lath()
        body = tag("g", upright, transform=f"rotate({_LEAN_DEGREES})")
    else:
        body = _body(combo) + _over(trust)
    return group(body + _base_line(combo), ink=ink, fill="currentColor")


def symbol_id(
    prefix: str, purpose: str, standing: str, trust: str, carries: str = "both"
) -> str:
    """The id under which `symbols` keeps a sign; the prefix keeps two drawings in one
    page apart.

    >>> symbol_id("plan", "stake", "gone", "in question")
    'plan-stake-gone-in-question-both'
    """
    combo = _known(purpose, standing, trust, carries)
    return "-".join((prefix, *combo)).replace(" ", "-")


def symbols(prefix: str, combos: Iterable[tuple[str, ...]]) -> str:
    """The definitions of the signs a drawing uses, each drawn once and placed with
    `<use href="#id" x= y=>`."""
    drawn = (
        tag("g", sign(*combo), id=symbol_id(prefix, *combo))
        for combo in sorted({Combo(*combo) for combo in combos})
    )
    return tag("defs", *drawn)


def sign_svg(
    purpose: str,
    standing: str,
    trust: str,
    carries: str = "both",
    *,
    size: float = 20,
    title: str | None = None,
) -> str:
    """A sign that stands alone in a list or a sentence, and says in words what it
    shows. `size` is the width of the shape; the picture is wider by the room that lath
    and base line need. An empty title makes it an ornament beside text that says it."""
    said = sentence(purpose, standing, trust, carries) if title is None else title
    drawn = sign(purpose, standing, trust, carries)
    side = number(size * _BOX[2] / 20)
    if not said:
        return document(drawn, box=_BOX, width=side, height=side, aria_hidden="true")
    return document(
        words("title", said), drawn, box=_BOX, width=side, height=side, role="img"
    )


def sentence(purpose: str, standing: str, trust: str, carries: str = "both") -> str:
    """What a sign says, in words.

    >>> sentence("stake", "gone", "in question", "position")
    'stake, gone, in question, position only'
    """
    combo = _known(purpose, standing, trust, carries)
    said = ["foreign mark" if purpose == "foreign" else purpose, standing]
    if not _plain_plan(combo):
        said.append(trust)
    if carries != "both":
        said.append(f"{carries} only")
    return ", ".join(said)


def _known(purpose: str, standing: str, trust: str, carries: str) -> Combo:
    for value, allowed in (
        (purpose, PURPOSES),
        (standing, STANDINGS),
        (trust, TRUSTS),
        (carries, CARRIES),
    ):
        if value not in allowed:
            raise ValueError(f"No sign for {value!r}; known are {', '.join(allowed)}.")
    return Combo(purpose, standing, trust, carries)


def _plain_plan(combo: Combo) -> bool:
    """Only planned, and nothing known against the plan: there is nothing to check."""
    return combo.standing == "planned" and combo.trust in ("not checked", "checked")


def _ink(combo: Combo) -> str:
    """The colour of the body: doubt first, then what happened, then what is known."""
    if combo.trust in ("in question", "failed"):
        return "in-question"
    if combo.trust == "superseded":
        return "superseded"
    if combo.standing != "standing":
        return combo.standing
    return combo.trust.replace(" ", "-")


def _body(combo: Combo, pale: bool = False) -> str:
    """Outline and filling. What is gone keeps its filling, but pale, and its outline
    only in dots."""
    outline = OUTLINES[combo.purpose]
    dashes = {"planned": "3.4 2.6", "gone": "0.1 3.3"}.get(combo.standing)
    edge = tag(
        "path",
        d=path(outline),
        fill="none",
        stroke="currentColor",
        stroke_width=2,
        stroke_linejoin="round",
        stroke_linecap="round" if combo.standing == "gone" else None,
        stroke_dasharray=dashes,
    )
    ground = tag("path", d=path(outline), fill=COLOURS["paper"], data_paper="fill")
    return ground + _filling(combo, outline, _PALE if pale else None) + edge


def _filling(combo: Combo, outline: Outline, opacity: float | None) -> str:
    if _plain_plan(combo) or combo.trust == "superseded":
        return ""
    if combo.trust == "checked":
        return tag("path", d=path(outline), fill_opacity=opacity)
    if combo.trust == "not checked":
        return tag("path", d=path(left_half(outline)), fill_opacity=opacity)
    lines = "".join(path(line, closed=False) for line in hatching(outline))
    return tag("path", d=lines, stroke="currentColor", stroke_width=1.1, fill="none")


def _over(trust: str) -> str:
    """What stands over the filling: the question, the bar, the strike."""
    if trust == "in question":
        return _with_halo(_QUESTION, 2, 5.5)
    if trust == "failed":
        return _with_halo("M-6.5,0H6.5", 3.4, 6.6)
    if trust == "superseded":
        return _with_halo("M-13,5.5L13,-5.5", 2.2, 4.4)
    return ""


def _under_cross(trust: str) -> str:
    """What the cross leaves readable: hatching alone is the question, the bar reaches
    out on both sides."""
    if trust == "in question":
        return ""
    if trust == "failed":
        return _with_halo("M-12.5,0H12.5", 2.6, 5)
    return _over(trust)


# Drawn, not set in type: a font that is missing must not change what a sign says.
_QUESTION = (
    "M-2.7,-2.6C-2.7,-4.3 -1.5,-5.3 0,-5.3C1.6,-5.3 2.8,-4.3 2.8,-2.8"
    "C2.8,-0.7 0,-0.6 0,1.7M0,4.8V4.9"
)


def _with_halo(line: str, width: float, halo: float) -> str:
    """A line that stays readable over hatching: paper under it, ink on top."""
    return _stroke(line, halo, COLOURS["paper"], data_paper="stroke") + _stroke(
        line, width, "currentColor"
    )


def _stroke(line: str, width: float, colour: str, data_paper: str | None = None) -> str:
    return tag(
        "path",
        d=line,
        fill="none",
        stroke=colour,
        stroke_width=width,
        stroke_linecap="round",
        data_paper=data_paper,
    )


def _cross() -> str:
    return group(_with_halo("M-8.5,-8.5L8.5,8.5M8.5,-8.5L-8.5,8.5", 2.4, 4), ink="gone")


def _lath() -> str:
    """The lath beside its stake, leaning further than the stake does."""
    return group(_stroke("M6,-4.5L11,-14.5", 2.2, "currentColor"), ink="disturbed")


def _retired(trust: str) -> str:
    dot = tag("circle", r=_DOT)
    if trust == "in question":
        return dot + tag(
            "g", _stroke(_QUESTION, 2, "currentColor"), transform="translate(8.5,0)"
        )
    if trust == "failed":
        return dot + _with_halo("M-7,0H7", 2.2, 4.4)
    if trust == "superseded":
        return dot + _stroke("M-8,3.4L8,-3.4", 1.8, "currentColor")
    return dot


def _base_line(combo: Combo) -> str:
    """A line under what carries position only, over what carries elevation only."""
    if combo.standing == "retired":
        above, below, half = -_DOT, _DOT, 5
    else:
        heights = [y for _, y in OUTLINES[combo.purpose]]
        above, below, half = min(heights), max(heights), 9
    if combo.carries == "position":
        return _line(below + _GAP, half)
    if combo.carries == "elevation":
        return _line(above - _GAP, half)
    return ""


def _line(height: float, half: float) -> str:
    return _stroke(
        f"M-{number(half)},{number(height)}H{number(half)}", 2, "currentColor"
    )
