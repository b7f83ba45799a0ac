"""The colours of paper: what a drawing carries as attributes, so that it prints alone.

On a page the same elements name their ink (`data-ink`), and the style sheet gives the
ink the colour of the reader's theme. A test holds this table equal to tokens.css."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

COLOURS: Mapping[str, str] = MappingProxyType(
    {
        "paper": "#fbfaf5",
        "ink": "#1b2230",
        "quiet": "#5b6472",
        "grid": "#dfe8ea",
        "pink": "#d6006c",
        "planned": "#5b6472",
        "not-checked": "#0b5cad",
        "checked": "#00715a",
        "in-question": "#a85600",
        "disturbed": "#c2410c",
        "gone": "#9b1c1c",
        "superseded": "#6d4c9f",
        "retired": "#8a919c",
        "haul-road": "#edeae2",
        "limit": "#8a6d3b",
    }
)
