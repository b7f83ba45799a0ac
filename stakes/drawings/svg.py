"""SVG as text: the one place that escapes, formats a number and closes a tag."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable

from stakes.drawings.colours import COLOURS

Attribute = str | int | float | None

_ESCAPES = {
    ord("&"): "&amp;",
    ord("<"): "&lt;",
    ord(">"): "&gt;",
    ord('"'): "&quot;",
    ord("'"): "&#39;",
}
# XML 1.0 has no way to write these, not even as a reference; one in a label would make
# the whole drawing unreadable.
_UNWRITABLE = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\ud800-\udfff\ufffe\uffff]")
_NAME = re.compile(r"[A-Za-z][A-Za-z0-9:-]*")


def escape(text: object) -> str:
    """Text that cannot leave its place, in an element as in an attribute.

    >>> escape('<a href="x">&')
    '&lt;a href=&quot;x&quot;&gt;&amp;'
    """
    return _UNWRITABLE.sub("\N{REPLACEMENT CHARACTER}", str(text)).translate(_ESCAPES)


def number(value: float, places: int = 2) -> str:
    """A coordinate of the drawing, as short as it can be said.

    >>> number(12.0), number(-0.001), number(3.14159)
    ('12', '0', '3.14')
    """
    if not math.isfinite(value):
        raise ValueError(f"A drawing has no place for {value}.")
    text = f"{value:.{places}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def tag(name: str, /, *inside: str, **attributes: Attribute) -> str:
    """One element. Underscores in attribute names become hyphens, a closing underscore
    frees a Python word (`class_`); None leaves the attribute out. What goes inside is
    markup already; write words with `words`.

    >>> tag("line", x1=0, x2=2.50, stroke_width=1.5)
    '<line x1="0" x2="2.5" stroke-width="1.5"/>'
    """
    written = "".join(
        f' {_attribute_name(key)}="{_written(value)}"'
        for key, value in attributes.items()
        if value is not None
    )
    content = "".join(inside)
    return f"<{name}{written}>{content}</{name}>" if content else f"<{name}{written}/>"


def words(name: str, text: object, /, **attributes: Attribute) -> str:
    """One element that holds text.

    >>> words("title", "106 & 107")
    '<title>106 &amp; 107</title>'
    """
    return tag(name, escape(text), **attributes)


def group(*inside: str, ink: str | None = None, **attributes: Attribute) -> str:
    """A group; `ink` names the colour its `currentColor` stands for."""
    colour = COLOURS[ink] if ink else None
    return tag("g", *inside, data_ink=ink, color=colour, **attributes)


def path(points: Iterable[tuple[float, float]], closed: bool = True) -> str:
    """Path data through points.

    >>> path([(0, 0), (1, 0), (1, 1)])
    'M0,0 1,0 1,1Z'
    """
    run = " ".join(f"{number(x)},{number(y)}" for x, y in points)
    return f"M{run}Z" if closed else f"M{run}"


def document(
    *inside: str, box: tuple[float, float, float, float], **attributes: Attribute
) -> str:
    """A whole drawing that stands alone: left, top, width and height of its view."""
    return tag(
        "svg",
        *inside,
        xmlns="http://www.w3.org/2000/svg",
        viewBox=" ".join(number(side) for side in box),
        **attributes,
    )


def _attribute_name(key: str) -> str:
    name = key.rstrip("_").replace("_", "-")
    if not _NAME.fullmatch(name):
        raise ValueError(f"{key!r} is no attribute name.")
    return name


def _written(value: str | int | float) -> str:
    return escape(value) if isinstance(value, str) else number(value)
