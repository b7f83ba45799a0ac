"""Reading a length as people write it: decimals, feet and inches, a unit behind it.

What cannot be read without guessing is refused with a sentence that says what to
type instead: thousands separators, exponents, a comma that may be either mark.
"""

from __future__ import annotations

import re
from fractions import Fraction

from geometry.errors import NotReadable
from geometry.units.unit import Unit

LONGEST_TEXT = 40
"""Longer than any length anyone writes; refused before it is looked at."""

_SAME = str.maketrans(
    {
        "−": "-",
        "–": "-",
        "’": "'",
        "′": "'",
        "´": "'",
        "”": '"',
        "“": '"',
        "″": '"',
        "\u00a0": " ",
        "\u202f": " ",
        "\u2009": " ",
    }
)
_SUFFIX = re.compile(r"^(.*?[0-9.'\"])\s*(ftus|ft|m)$", re.IGNORECASE)
_SUFFIXES = {unit.value.lower(): unit for unit in Unit}
_SIGN = re.compile(r"^([+-]?)\s*(.*)$")
_DECIMAL = re.compile(r"^(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)$")
_INCHES = re.compile(r"^(?:([0-9]+)(?:[ -]+|$))?(?:([0-9]+)\s*/\s*([0-9]+))?$")
_DENOMINATORS = frozenset({2, 4, 8, 16, 32, 64})


def read_length(text: str, unit: Unit, decimal_comma: bool) -> tuple[Fraction, Unit]:
    """The number `text` writes and the unit it is in: `unit` unless the text says.

    Feet and inches in a metre job are international feet. Raises NotReadable.

    >>> read_length('''12'-7 5/16"''', Unit.FOOT, False)
    (Fraction(807, 64), <Unit.FOOT: 'ft'>)
    """
    plain = _plain(text)
    body, said = _without_suffix(plain)
    signed = _SIGN.match(body)
    sign, digits = (signed.group(1), signed.group(2)) if signed else ("", body)
    if "'" in digits or '"' in digits:
        value, foot = _feet_and_inches(text, digits, decimal_comma), said or unit
        if said is Unit.METRE:
            raise _refuse(text, "It mixes feet and metres.", "Write one of the two.")
        foot = foot if foot.is_foot else Unit.FOOT
    else:
        value, foot = _decimal(text, digits, decimal_comma), said or unit
    return (-value if sign == "-" else value), foot


def _plain(text: str) -> str:
    if len(text) > LONGEST_TEXT:
        raise _refuse(
            text[:20] + "…", "It is too long for a length.", "Write it as 12.34."
        )
    plain = text.translate(_SAME).strip().replace("''", '"')
    if not plain:
        raise _refuse(text, "It is empty.", "Write a number such as 12.34.")
    return plain


def _without_suffix(plain: str) -> tuple[str, Unit | None]:
    match = _SUFFIX.match(plain)
    if match is None:
        return plain, None
    return match.group(1), _SUFFIXES[match.group(2).lower()]


def _decimal(text: str, digits: str, decimal_comma: bool) -> Fraction:
    if decimal_comma:
        if "." in digits:
            raise _refuse(
                text,
                "A point stands where this job writes a comma.",
                "Write 12,34 and leave thousands separators out.",
            )
        digits = digits.replace(",", ".")
    if _DECIMAL.match(digits):
        return Fraction(digits + "0" if digits.endswith(".") else digits)
    raise _why_not_decimal(text, digits)


def _why_not_decimal(text: str, digits: str) -> NotReadable:
    if re.search(r"[0-9][eE][+-]?[0-9]", digits):
        return _refuse(text, "It has an exponent.", "Write all digits out.")
    if re.search(r"[0-9][ ,_][0-9]", digits):
        return _refuse(
            text,
            "A comma, space or line stands between its digits, and a thousands "
            "separator cannot be told from a decimal mark.",
            "Write 1234.56: a point for decimals and no separators.",
        )
    if digits.count(".") > 1:
        return _refuse(
            text,
            "It has more than one decimal mark, and thousands separators are not read.",
            "Write 1234.56.",
        )
    return _refuse(
        text,
        "It is not a number, or its unit is not m, ft or ftUS.",
        "Write 12.34, 12.34 ft or 12'-7 5/16\".",
    )


def _feet_and_inches(text: str, digits: str, decimal_comma: bool) -> Fraction:
    feet, mark, rest = digits.partition("'")
    if not mark:
        return _inches(text, digits, decimal_comma) / 12
    rest = rest.strip()
    if not rest:
        return _decimal(text, feet.strip(), decimal_comma)
    if not re.match(r"^[0-9]+$", feet.strip()):
        raise _refuse(text, "The feet before the inches must be whole.", _EXAMPLE)
    inches = _inches(text, rest.removeprefix("-").strip(), decimal_comma)
    if inches >= 12:
        raise _refuse(text, "There are 12 or more inches after the feet.", _EXAMPLE)
    return int(feet) + inches / 12


def _inches(text: str, digits: str, decimal_comma: bool) -> Fraction:
    if not digits.endswith('"') or digits.count('"') != 1:
        raise _refuse(text, "The inches do not end in an inch mark.", _EXAMPLE)
    body = digits[:-1].strip()
    match = _INCHES.match(body)
    if match is None or not body:
        return _decimal(text, body, decimal_comma)
    whole, over, under = match.groups()
    if over is None:
        return Fraction(int(whole))
    if int(under) not in _DENOMINATORS or int(over) >= int(under):
        raise _refuse(
            text, "Its fraction is not a part of an inch from 1/2 to 63/64.", _EXAMPLE
        )
    return int(whole or 0) + Fraction(int(over), int(under))


_EXAMPLE = "Write 12'-7 5/16\"."


def _refuse(text: str, why: str, do: str) -> NotReadable:
    return NotReadable(f"“{text}” cannot be read as a length.", where=why, do=do)
