"""The signs say by shape alone what they say by colour, and are safe in any page."""

from __future__ import annotations

import itertools
import re
import xml.etree.ElementTree as ElementTree
from pathlib import Path

import pytest

from stakes.drawings import shapes, signs, svg
from stakes.drawings.colours import COLOURS

TOKENS = Path(__file__).parents[2] / "jobs" / "config" / "static" / "css" / "tokens.css"
EVERY_COMBO = list(
    itertools.product(signs.PURPOSES, signs.STANDINGS, signs.TRUSTS, signs.CARRIES)
)


def colourless(drawn: str) -> str:
    """The sign as a black and white printer sees it."""
    return re.sub(r' (data-ink|color)="[^"]*"', "", drawn)


def test_the_colours_of_drawings_are_those_of_the_style_sheet():
    css = TOKENS.read_text()
    light = dict(re.findall(r"--([a-z-]+): light-dark\((#[0-9a-f]{6}),", css))
    field_page = css.index(".field {")
    light |= dict(
        re.findall(r"--([a-z-]+): light-dark\((#[0-9a-f]{6}),", css[:field_page])
    )

    assert {name: light.get(name) for name in COLOURS} == dict(COLOURS)


@pytest.mark.parametrize("combo", EVERY_COMBO)
def test_every_combination_is_well_formed_and_says_itself_in_words(combo):
    drawn = ElementTree.fromstring(signs.sign_svg(*combo))

    title = drawn.find("{http://www.w3.org/2000/svg}title")
    assert drawn.get("role") == "img"
    assert title is not None and title.text == signs.sentence(*combo)


@pytest.mark.parametrize("purpose", signs.PURPOSES)
def test_posture_and_filling_combine_without_two_signs_looking_alike(purpose):
    """Except plans not yet doubted, which are one sign, and retired dots that carry no
    doubt: there the filling has nothing left to say."""
    seen: dict[str, tuple[str, str]] = {}
    alike = []
    for standing, trust in itertools.product(signs.STANDINGS, signs.TRUSTS):
        drawn = colourless(signs.sign(purpose, standing, trust))
        if drawn in seen:
            alike.append((seen[drawn], (standing, trust)))
        seen[drawn] = (standing, trust)

    assert alike == [
        (("planned", "not checked"), ("planned", "checked")),
        (("retired", "not checked"), ("retired", "checked")),
    ]


def test_purposes_differ_by_outline_not_by_colour():
    drawn = {colourless(signs.sign(p, "standing", "checked")) for p in signs.PURPOSES}

    assert len(drawn) == len(signs.PURPOSES)


@pytest.mark.parametrize("purpose", signs.PURPOSES)
def test_the_line_stands_under_a_mark_for_position_and_over_one_for_elevation(purpose):
    heights = [y for _, y in shapes.OUTLINES[purpose]]

    assert line_height(purpose, "position") > max(heights) + 2
    assert line_height(purpose, "elevation") < min(heights) - 2
    assert line_height(purpose, "both") is None


def test_doubt_keeps_its_colour_when_the_stake_is_gone_and_the_cross_keeps_its_own():
    drawn = signs.sign("stake", "gone", "in question")

    assert f'data-ink="in-question" color="{COLOURS["in-question"]}"' in drawn
    assert f'data-ink="gone" color="{COLOURS["gone"]}"' in drawn


@pytest.mark.parametrize("purpose", signs.PURPOSES)
def test_half_filled_means_half_the_area(purpose):
    outline = shapes.OUTLINES[purpose]

    assert area(shapes.left_half(outline)) == pytest.approx(area(outline) / 2)


@pytest.mark.parametrize("purpose", signs.PURPOSES)
def test_hatching_stays_inside_the_outline_and_covers_it(purpose):
    outline = shapes.OUTLINES[purpose]
    lines = shapes.hatching(outline)

    ends = [end for line in lines for end in line]
    assert len(lines) >= 3
    assert all(inside(outline, end) for end in ends)
    assert all((x1 - x2) == pytest.approx(-(y1 - y2)) for (x1, y1), (x2, y2) in lines)


def test_symbols_are_drawn_once_and_their_ids_carry_the_drawing_they_belong_to():
    combo = ("stake", "standing", "checked", "both")
    defs = ElementTree.fromstring(signs.symbols("plan", [combo, combo, combo[:3]]))

    assert [symbol.get("id") for symbol in defs] == [signs.symbol_id("plan", *combo)]
    assert signs.symbol_id("sheet", *combo) != signs.symbol_id("plan", *combo)


def test_an_ornament_beside_text_is_hidden_from_readers_of_the_page():
    drawn = signs.sign_svg("stake", "standing", "checked", title="")

    assert 'aria-hidden="true"' in drawn and "<title" not in drawn


def test_a_word_that_names_no_sign_is_refused_with_the_words_that_do():
    with pytest.raises(ValueError, match=r"'good'; known are not checked, checked"):
        signs.sign("stake", "standing", "good")


def test_no_label_can_leave_its_place_in_a_drawing():
    hostile = '"/><script>alert(1)</script>\x00\x1b'
    drawn = svg.document(
        svg.words("text", hostile), svg.tag("path", d=hostile), box=(0, 0, 1, 1)
    )

    parsed = ElementTree.fromstring(drawn)
    assert [element.tag.rpartition("}")[2] for element in parsed] == ["text", "path"]
    assert parsed[0].text == '"/><script>alert(1)</script>\ufffd\ufffd'


def test_a_coordinate_that_is_no_number_is_refused():
    with pytest.raises(ValueError, match="no place for nan"):
        svg.number(float("nan"))


def test_drawings_carry_nothing_that_the_policy_of_our_pages_would_refuse():
    for combo in EVERY_COMBO:
        for element in ElementTree.fromstring(signs.sign_svg(*combo)).iter():
            assert not element.tag.endswith(("style", "script"))
            assert not [name for name in element.attrib if name.startswith("on")]
            assert "style" not in element.attrib


def line_height(purpose: str, carries: str) -> float | None:
    drawn = signs.sign(purpose, "standing", "checked", carries)
    line = re.search(r'd="M-9,(-?[0-9.]+)H9"', drawn)
    return float(line[1]) if line else None


def area(outline: shapes.Outline) -> float:
    return abs(
        sum(
            x1 * y2 - x2 * y1
            for (x1, y1), (x2, y2) in zip(
                outline, outline[1:] + outline[:1], strict=True
            )
        )
        / 2
    )


def inside(outline: shapes.Outline, point: shapes.Point) -> bool:
    """In a convex outline every side has the point on the same hand, or on it."""
    x, y = point
    turns = [
        (x2 - x1) * (y - y1) - (y2 - y1) * (x - x1)
        for (x1, y1), (x2, y2) in zip(outline, outline[1:] + outline[:1], strict=True)
    ]
    return all(turn >= -1e-9 for turn in turns) or all(turn <= 1e-9 for turn in turns)
