"""Causes as sentences for a party chief, each with the number behind it."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from geometry.signature.kinds import Kind
from geometry.signature.words import Words, angle, hand, towards


@dataclass(frozen=True, slots=True)
class Said:
    """What a sentence is made of: parameters, names and the largest effect."""

    parameters: tuple[float, ...]
    effect_m: float
    setup: str
    mark: str
    about: str
    words: Words


def describe(kind: Kind, said: Said) -> str:
    """The cause in a sentence.

    >>> from geometry.signature.words import METRES
    >>> print(describe(Kind.PRISM, Said((0.03,), 0.03, "the setup", "", "", METRES)))
    Every stake is 30 mm too far from the setup at any distance: prism constant.
    """
    return _SAY[kind](said)


def mark_name(names: Sequence[str], row: int | None) -> str:
    """A mark's name, or its place in the list when it has none."""
    if row is None:
        return ""
    return names[row] if row < len(names) and names[row] else f"mark {row + 1}"


def _shift(s: Said) -> str:
    east, north = s.parameters
    size = s.words.length(math.hypot(east, north))
    return (
        f"Every stake is {size} to the {towards(east, north)}: check the coordinates "
        "and the centring of the occupied mark."
    )


def _rotation(s: Said) -> str:
    return (
        f"The stakes are turned {angle(s.parameters[0])} {hand(s.parameters[0])} about "
        f"{s.setup}, {s.words.length(s.effect_m)} at the farthest: check the backsight."
    )


def _prism(s: Said) -> str:
    far = "too far from" if s.parameters[0] > 0 else "too near to"
    return (
        f"Every stake is {s.words.length(s.parameters[0])} {far} {s.setup} at any "
        "distance: prism constant."
    )


def _scale(s: Said) -> str:
    more = "long" if s.parameters[0] > 0 else "short"
    return (
        f"Distances from {s.setup} are {abs(s.parameters[0]) * 1e6:.0f} ppm {more}, "
        f"{s.words.length(s.effect_m)} at the farthest: scale factor or weather."
    )


def _several(s: Said) -> str:
    east, north, turn, scale = s.parameters
    return (
        f"The stakes lie together, but {s.words.length(math.hypot(east, north))} to the "
        f"{towards(east, north)}, turned {angle(turn)} {hand(turn)} and "
        f"{scale * 1e6:+.0f} ppm in scale: more than one thing is wrong."
    )


def _prism_and_rotation(s: Said) -> str:
    radial, turn = s.parameters
    return (
        f"Two things at once: {s.words.length(radial)} along every ray (prism constant) "
        f"and {angle(turn)} {hand(turn)} about {s.setup} (backsight)."
    )


def _prism_and_shift(s: Said) -> str:
    radial, east, north = s.parameters
    return (
        f"Two things at once: {s.words.length(radial)} along every ray (prism constant) "
        f"and {s.words.length(math.hypot(east, north))} to the "
        f"{towards(east, north)} (occupied mark)."
    )


def _foot(s: Said, which: str) -> str:
    return (
        f"Every stake is {s.words.length(s.effect_m)} off, 2 millionths of its "
        f"coordinate: {which}."
    )


def _known(s: Said) -> str:
    return (
        f"The stakes are off by up to {s.words.length(s.effect_m)}, which is what "
        f"{s.about} would do."
    )


def _with_mark(text: str) -> Callable[[Said], str]:
    return lambda s: text.format(
        mark=s.mark, setup=s.setup, up_to=s.words.length(s.effect_m)
    )


def _numbering(s: Said) -> str:
    step = int(s.about)
    which = "before" if step > 0 else "after"
    off = "one" if abs(step) == 1 else str(abs(step))
    return f"Each shot stands where the mark {off} {which} it in the list is planned."


def _from_shot(s: Said) -> str:
    return (
        f"From shot {s.about} on every stake is {_height(s)}: rod height changed, or "
        "the instrument was hit."
    )


def _height(s: Said) -> str:
    return (
        f"{s.words.length(s.parameters[0])} {'high' if s.parameters[0] > 0 else 'low'}"
    )


def _height_constant(s: Said) -> str:
    step = f", close to {s.about}," if s.about else ""
    return (
        f"Every stake is {_height(s)}{step} at any distance: instrument height, rod "
        "height or the benchmark's value."
    )


def _rod(s: Said) -> str:
    return f"Only the shots with rod setting {s.about} are off: {_height(s)}."


def _height_angle(s: Said) -> str:
    up = "rise" if s.parameters[0] > 0 else "fall"
    return (
        f"Heights {up} with distance from {s.setup}, {s.words.length(s.effect_m)} at the "
        f"farthest: the vertical angle is {angle(s.parameters[0])} out."
    )


def _tilt(s: Said) -> str:
    _, east, north = s.parameters
    slope = math.hypot(east, north) * 1e6
    return (
        f"Heights lie on a plane tilted {slope:.0f} ppm up to the {towards(east, north)}, "
        f"{s.words.length(s.effect_m)} at most: localisation or a leaning instrument."
    )


_SAY: dict[Kind, Callable[[Said], str]] = {
    Kind.NOTHING: lambda s: "Nothing systematic.",
    Kind.SHIFT: _shift,
    Kind.ROTATION: _rotation,
    Kind.PRISM: _prism,
    Kind.SCALE: _scale,
    Kind.SEVERAL: _several,
    Kind.PRISM_AND_ROTATION: _prism_and_rotation,
    Kind.PRISM_AND_SHIFT: _prism_and_shift,
    Kind.US_FOOT: lambda s: _foot(s, "US survey feet against international feet"),
    Kind.INTERNATIONAL_FOOT: lambda s: _foot(
        s, "international feet against US survey feet"
    ),
    Kind.KNOWN: _known,
    Kind.SWAPPED: _with_mark("Northing and easting are swapped."),
    Kind.WRONG_BACKSIGHT: _with_mark(
        "{setup} was oriented on {mark} instead of its backsight; stakes are up to "
        "{up_to} off."
    ),
    Kind.WRONG_STATION: _with_mark(
        "The instrument stood on {mark}, not on the mark of {setup}; stakes are up to "
        "{up_to} off."
    ),
    Kind.WRONG_VALUE: _with_mark(
        "{setup} used the coordinates of {mark} for the mark it stood on; stakes are "
        "up to {up_to} off."
    ),
    Kind.EXCHANGED: _with_mark(
        "{setup} has its station and its backsight exchanged; stakes are up to {up_to} "
        "off."
    ),
    Kind.REVERSED: _with_mark(
        "{setup} has its backsight turned by half a circle; stakes are up to {up_to} "
        "off."
    ),
    Kind.ANGLE_SENSE: _with_mark(
        "Angles at {setup} were turned left for right; stakes are up to {up_to} off."
    ),
    Kind.FEET_AS_METRES: lambda s: f"{s.about} in feet were read as metres.",
    Kind.METRES_AS_FEET: lambda s: f"{s.about} in metres were read as feet.",
    Kind.NUMBERING: _numbering,
    Kind.MOVED: _with_mark(
        "The stakes hold together but lie elsewhere, up to {up_to} off, and no known "
        "mark explains it."
    ),
    Kind.MIRRORED: _with_mark(
        "The stakes hold together as in a mirror, up to {up_to} off, and no known line "
        "explains it."
    ),
    Kind.HEIGHT_CONSTANT: _height_constant,
    Kind.ROD: _rod,
    Kind.HEIGHT_FROM: _from_shot,
    Kind.HEIGHT_ANGLE: _height_angle,
    Kind.TILT: _tilt,
    Kind.CURVATURE: lambda s: (
        f"Heights fall off by {s.words.length(s.effect_m)} at the farthest, as the "
        "Earth curves: curvature and refraction were left out."
    ),
    Kind.SIGN: lambda s: "Cut was taken for fill: heights are off by twice the cut.",
    Kind.REFERENCE: lambda s: (
        f"Heights fit {s.about} instead of the surface the plan refers to."
    ),
    Kind.REVISION: lambda s: f"The stakes fit revision {s.about} better.",
}
