"""Makes fixtures/verdict_cases.json: what every language must show and decide alike.

Run `python -m tests.geometry.decide_cases` to write it again. The answers come from
exact fractions and 60-digit decimals, never from the functions under test: inputs are
decimal strings as they would be typed, answers are the words and digits to show.
"""

from __future__ import annotations

import json
import random
from decimal import ROUND_HALF_UP, Decimal, getcontext
from pathlib import Path

PATH = Path(__file__).parents[2] / "fixtures" / "verdict_cases.json"
SEED = 20260117
SIMPLE, GUARDED = "simple acceptance", "guard band"
getcontext().prec = 60

ABOUT = (
    "Inputs are decimal strings in one unit of length per case. An uncertainty not "
    "recorded is null. Differences are measured less computed. Verdicts: simple "
    "acceptance passes |d| <= T and else fails; a guard band g = factor x uncertainty "
    "passes |d| <= T - g (for positions |d| <= sqrt((T - g)^2 - u^2)), fails "
    "|d| >= T + g, and is undecided between or without an uncertainty. Lengths that "
    "differ by up to 1e-8 are equal. Digits: half of the last place goes away from "
    "zero, and so does what lies under half by less than a ten-thousandth of the last "
    "place; zero has no sign. Polar numbers: azimuth from north, clockwise; the angle "
    "right is turned from the backsight to the target; degrees, minutes and seconds "
    "carry at 60 and 360. Cut is stake above design."
)


def rounded(value: Decimal, places: int) -> str:
    """Half away from zero, exactly; zero without a sign."""
    text = f"{value.quantize(Decimal(1).scaleb(-places), rounding=ROUND_HALF_UP):f}"
    return text.lstrip("-") if Decimal(text) == 0 else text


def verdict(size: Decimal, accept: Decimal | None, reject: Decimal | None) -> str:
    """The word, from exact limits; None where no size can reach that side."""
    if accept is not None and size <= accept:
        return "pass"
    if reject is not None and size >= reject:
        return "fail"
    return "undecided"


def offset_limits(
    tolerance: Decimal, guard: Decimal | None, rule: str
) -> tuple[Decimal | None, Decimal | None]:
    if rule == SIMPLE:
        return tolerance, tolerance
    if guard is None:
        return None, None
    return tolerance - guard, tolerance + guard


def radial_limits(
    tolerance: Decimal, u: Decimal | None, factor: Decimal, rule: str
) -> tuple[Decimal | None, Decimal | None]:
    if rule == SIMPLE:
        return tolerance, tolerance
    if u is None:
        return None, None
    inner = tolerance - factor * u
    square = inner * inner - u * u
    accept = square.sqrt() if inner > 0 and square > 0 else None
    return (tolerance if u == 0 else accept), tolerance + factor * u


def clear(size: Decimal, limits: tuple[Decimal | None, Decimal | None]) -> bool:
    """Exactly on a limit, or farther from it than any float could blur."""
    gaps = [abs(size - limit) for limit in limits if limit is not None]
    return all(gap == 0 or gap > Decimal("0.0000002") for gap in gaps)


def steady(value: Decimal, places: int) -> bool:
    """Exactly on a tie, or farther from it than the tie rule reaches."""
    part = (abs(value).scaleb(places) % 1) - Decimal("0.5")
    return part == 0 or abs(part) > Decimal("0.001")


def text(rng: random.Random, low: float, high: float, places: int) -> str:
    return f"{rng.uniform(low, high):.{places}f}"


def offset_case(rng: random.Random) -> dict[str, object] | None:
    places = rng.choice((2, 3, 3, 4))
    tolerance = rng.choice(("0.005", "0.01", "0.02", "0.04", "0.0625", "0.10", "0.25"))
    base = text(rng, -50, 5_000_000 if rng.random() < 0.3 else 400, places)
    u = rng.choice((None, "0", "0.001", "0.002", "0.003", "0.0065", "0.02"))
    rule = rng.choice((SIMPLE, GUARDED, GUARDED))
    factor = rng.choice(("1.645", "1.645", "2"))
    below = rng.choice((None, None, None, "0.17"))
    guard = None if u is None else Decimal(factor) * Decimal(u)
    edge = Decimal(tolerance) + rng.choice((-1, 0, 1)) * (guard or Decimal(0))
    kind = rng.random()
    d = edge if kind < 0.35 else Decimal(text(rng, 0, 2.2, 3)) * Decimal(tolerance)
    d = d if rng.random() < 0.5 else -d
    measured = Decimal(base) + d
    limit = Decimal(below) if below is not None and d < 0 else Decimal(tolerance)
    limits = offset_limits(limit, guard, rule)
    if not (clear(abs(d), limits) and steady(d, places)):
        return None
    return {
        "measured": f"{measured:f}",
        "computed": base,
        "tolerance": tolerance,
        "tolerance_below": below,
        "uncertainty": u,
        "rule": rule,
        "factor": factor,
        "places": places,
        "difference": rounded(d, places),
        "verdict": verdict(abs(d), *limits),
    }


TRIPLES = ((3, 4, 5), (5, 12, 13), (8, 15, 17), (7, 24, 25), (20, 21, 29))


def position_case(rng: random.Random) -> dict[str, object] | None:
    places = rng.choice((2, 3, 4))
    tolerance = rng.choice(("0.01", "0.02", "0.025", "0.05", "0.10"))
    u = rng.choice((None, "0", "0.001", "0.002", "0.004", "0.01"))
    rule, factor = rng.choice((SIMPLE, GUARDED)), "1.645"
    if rng.random() < 0.3:
        a, b, c = rng.choice(TRIPLES)
        scale = Decimal(tolerance) / c if c in (5, 25) else Decimal("0.001")
        east, north = a * scale, b * scale
    else:
        east = Decimal(text(rng, -1.6, 1.6, 2)) * Decimal(tolerance)
        north = Decimal(text(rng, -1.6, 1.6, 2)) * Decimal(tolerance)
    base = text(rng, 0, 600_000, 3), text(rng, 0, 5_000_000, 3)
    size = (east * east + north * north).sqrt()
    limits = radial_limits(
        Decimal(tolerance), None if u is None else Decimal(u), Decimal(factor), rule
    )
    shown = (size, east, north)
    if not (clear(size, limits) and all(steady(v, places) for v in shown)):
        return None
    return {
        "measured": [f"{Decimal(base[0]) + east:f}", f"{Decimal(base[1]) + north:f}"],
        "computed": list(base),
        "tolerance": tolerance,
        "uncertainty": u,
        "rule": rule,
        "factor": factor,
        "places": places,
        "difference": rounded(size, places),
        "east": rounded(east, places),
        "north": rounded(north, places),
        "verdict": verdict(size, *limits),
    }


def digits_case(rng: random.Random) -> dict[str, object] | None:
    places = rng.choice((0, 1, 2, 3, 4, 6))
    value = Decimal(text(rng, -5, 5_000, places + 2))
    if rng.random() < 0.5:
        half = Decimal(5).scaleb(-places - 1)
        value = value.quantize(Decimal(1).scaleb(-places)) + half
    if not steady(value, places):
        return None
    return {"value": f"{value:f}", "places": places, "shown": rounded(value, places)}


def arctan(x: Decimal) -> Decimal:
    """Halved until small, then the series; exact to fifty digits."""
    doublings = 0
    while abs(x) > Decimal("0.01"):
        x, doublings = x / (1 + (1 + x * x).sqrt()), doublings + 1
    term, total, n = x, Decimal(0), 1
    while abs(term) > Decimal(10) ** -58:
        total, term, n = total + term / n, -term * x * x, n + 2
    return total * 2**doublings


PI = 4 * arctan(Decimal(1))


def azimuth_seconds(east: Decimal, north: Decimal) -> Decimal:
    """Seconds of arc clockwise from north, 0 to 1,296,000."""
    if abs(east) < abs(north):
        angle = arctan(east / north) + (PI if north < 0 else 0)
    else:
        angle = PI / 2 - arctan(north / east) + (PI if east < 0 else 0)
    return (angle * 648_000 / PI) % 1_296_000


def dms(seconds: Decimal) -> str:
    whole = int(seconds.quantize(Decimal(1), rounding=ROUND_HALF_UP)) % 1_296_000
    degrees, rest = divmod(whole, 3600)
    return f"{degrees}°{rest // 60:02d}'{rest % 60:02d}\""


def polar_case(rng: random.Random) -> dict[str, object] | None:
    places = rng.choice((2, 3))
    base = rng.choice(((0, 0), (5_000, 10_000), (600_000, 4_200_000)))
    station, backsight, target = (
        [text(rng, origin - 150, origin + 150, 3) for origin in base] for _ in range(3)
    )
    if rng.random() < 0.2:
        target[rng.randrange(2)] = station[0]
    s, b, t = ([Decimal(x) for x in p] for p in (station, backsight, target))
    east, north = t[0] - s[0], t[1] - s[1]
    distance = (east * east + north * north).sqrt()
    if distance < 1 or abs(b[0] - s[0]) + abs(b[1] - s[1]) < 1:
        return None
    azimuth = azimuth_seconds(east, north)
    angle = (azimuth - azimuth_seconds(b[0] - s[0], b[1] - s[1])) % 1_296_000
    exact = (azimuth, 0), (angle, 0), (distance, places)
    if not all(steady(value, digits) for value, digits in exact):
        return None
    return {
        "station": station,
        "backsight": backsight,
        "target": target,
        "places": places,
        "azimuth": dms(azimuth),
        "angle_right": dms(angle),
        "distance": rounded(distance, places),
    }


def cut_case(rng: random.Random) -> dict[str, object] | None:
    design = text(rng, -20, 1500, 2)
    amount = Decimal(text(rng, -9, 9, 3)) * rng.choice((1, 1, Decimal("0.001")))
    if not steady(amount, 2):
        return None
    digits = rounded(abs(amount), 2)
    word = "on grade" if Decimal(digits) == 0 else "cut" if amount > 0 else "fill"
    stake = Decimal(design) + amount
    return {"stake": f"{stake:f}", "design": design, "word": word, "shown": digits}


def gather(make, rng: random.Random, count: int) -> list[dict[str, object]]:
    cases: list[dict[str, object]] = []
    while len(cases) < count:
        case = make(rng)
        if case is not None:
            cases.append(case)
    return cases


def cases() -> dict[str, object]:
    rng = random.Random(SEED)
    return {
        "about": ABOUT,
        "offsets": gather(offset_case, rng, 160),
        "positions": gather(position_case, rng, 120),
        "digits": gather(digits_case, rng, 80),
        "polar": gather(polar_case, rng, 80),
        "cuts": gather(cut_case, rng, 40),
    }


def written(content: dict[str, object]) -> str:
    """One case per line, so that a change shows as one line."""
    parts = [f' "about": {json.dumps(content["about"])}']
    for name, rows in content.items():
        if name != "about":
            lines = ",\n".join(
                "  " + json.dumps(row, ensure_ascii=False) for row in rows
            )
            parts.append(f' "{name}": [\n{lines}\n ]')
    return "{\n" + ",\n".join(parts) + "\n}\n"


if __name__ == "__main__":
    PATH.write_text(written(cases()), encoding="utf-8")
