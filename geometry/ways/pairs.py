"""Precision of the ways that need only two marks, many pairs at once.

All arrays broadcast. Points (…, 2) metres; covariances (…, 3) of EE, EN, NN in m².
Each function answers the larger standard half-axis squared (m²) and the number by which
the figure is judged weak. The two marks are taken as uncorrelated here: this is for
sifting; the ways chosen are predicted with the joint covariance.
"""

from __future__ import annotations

import numpy as np

from geometry.checked import Array
from geometry.precision import RightAngle, StringLine, Tape, TotalStation


def ties(
    p: Array, a: Array, b: Array, ca: Array, cb: Array, tape: Tape
) -> tuple[Array, Array]:
    """Taped distances from `a` and `b`: (variance, sine of the angle between them)."""
    ua, da = _unit(p - a)
    ub, db = _unit(p - b)
    det = ua[..., 0] * ub[..., 1] - ua[..., 1] * ub[..., 0]
    qa = _along(ca, ua) + tape.sd_m**2 + (1e-6 * tape.ppm * da) ** 2
    qb = _along(cb, ub) + tape.sd_m**2 + (1e-6 * tape.ppm * db) ** 2
    square = np.maximum(det * det, 1e-12)
    ee = (ub[..., 1] ** 2 * qa + ua[..., 1] ** 2 * qb) / square
    nn = (ub[..., 0] ** 2 * qa + ua[..., 0] ** 2 * qb) / square
    en = -(ub[..., 0] * ub[..., 1] * qa + ua[..., 0] * ua[..., 1] * qb) / square
    return _larger(ee, en, nn), np.abs(det)


def in_line(
    p: Array, a: Array, b: Array, ca: Array, cb: Array, tape: Tape, string: StringLine
) -> tuple[Array, Array, Array]:
    """Lined up on `a` and `b`, taped from `b`: (variance, run beyond b over length,
    distance of `p` beside the line)."""
    u, length = _unit(b - a)
    n = _right(u)
    along, beside = _dot(p - b, u), _dot(p - b, n)
    k = along / length
    buu, bun, bnn = _turned(cb, u, n)
    ann = _turned(ca, u, n)[2]
    taped = tape.sd_m**2 + (1e-6 * tape.ppm * along) ** 2
    across = (1 + k) ** 2 * bnn + k**2 * ann + string.sd_m**2
    return _larger(buu + taped, (1 + k) * bun, across), k, np.abs(beside)


def right_angle(
    p: Array,
    a: Array,
    b: Array,
    ca: Array,
    cb: Array,
    tape: Tape,
    tool: RightAngle,
) -> tuple[Array, Array, Array]:
    """Foot on a-b taped from `a`, offset at a right angle: (variance, foot over length,
    offset, right positive)."""
    u, length = _unit(b - a)
    n = _right(u)
    s, o = _dot(p - a, u), _dot(p - a, n)
    auu, aun, ann = _turned(ca, u, n)
    bnn = _turned(cb, u, n)[2]
    f, g = s / length, o / length
    uu = auu + 2 * g * aun + g * g * (ann + bnn)
    uu = uu + tape.sd_m**2 + (1e-6 * tape.ppm * s) ** 2 + (o * tool.sd_rad) ** 2
    nn = (1 - f) ** 2 * ann + f * f * bnn
    nn = nn + tape.sd_m**2 + (1e-6 * tape.ppm * o) ** 2
    un = (1 - f) * (aun + g * ann) - g * f * bnn
    return _larger(uu, un, nn), f, o


def polar(
    p: Array, s: Array, b: Array, cs: Array, cb: Array, instrument: TotalStation
) -> Array:
    """Angle and distance from occupied `s`, oriented on `b`: the variance."""
    back, ray = b - s, p - s
    reach = np.maximum(_dot(back, back), 1e-12)[..., None]
    g = _right(back) / reach
    v = _right(ray)
    here, there = instrument.station_centring_m**2, instrument.backsight_centring_m**2
    see, sen, snn = cs[..., 0] + here, cs[..., 1], cs[..., 2] + here
    ge, gn = g[..., 0], g[..., 1]
    drift_e, drift_n = -(see * ge + sen * gn), -(sen * ge + snn * gn)
    across = instrument.angle_sd_rad**2 - (ge * drift_e + gn * drift_n)
    across = across + _along(cb, g) + there * _dot(g, g)
    square = np.maximum(_dot(ray, ray), 1e-12)
    along = instrument.distance_sd_m**2 / square + (1e-6 * instrument.distance_ppm) ** 2
    e, n, ve, vn = ray[..., 0], ray[..., 1], v[..., 0], v[..., 1]
    extra = instrument.target_centring_m**2
    ee = see + 2 * ve * drift_e + across * ve * ve + along * e * e + extra
    nn = snn + 2 * vn * drift_n + across * vn * vn + along * n * n + extra
    en = sen + ve * drift_n + vn * drift_e + across * ve * vn + along * e * n
    return _larger(ee, en, nn)


def _unit(vector: Array) -> tuple[Array, Array]:
    length = np.maximum(np.hypot(vector[..., 0], vector[..., 1]), 1e-9)
    return vector / length[..., None], length


def _right(u: Array) -> Array:
    return np.stack([u[..., 1], -u[..., 0]], axis=-1)


def _dot(a: Array, b: Array) -> Array:
    return np.asarray(a[..., 0] * b[..., 0] + a[..., 1] * b[..., 1])


def _along(c: Array, u: Array) -> Array:
    e, n = u[..., 0], u[..., 1]
    return np.asarray(c[..., 0] * e * e + 2 * c[..., 1] * e * n + c[..., 2] * n * n)


def _turned(c: Array, u: Array, n: Array) -> tuple[Array, Array, Array]:
    cross = (
        c[..., 0] * u[..., 0] * n[..., 0]
        + c[..., 1] * (u[..., 0] * n[..., 1] + u[..., 1] * n[..., 0])
        + c[..., 2] * u[..., 1] * n[..., 1]
    )
    return _along(c, u), cross, _along(c, n)


def _larger(aa: Array, ab: Array, bb: Array) -> Array:
    half = 0.5 * (aa - bb)
    return np.asarray(0.5 * (aa + bb) + np.sqrt(half * half + ab * ab))
