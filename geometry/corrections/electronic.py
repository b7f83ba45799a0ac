"""Electronic distances: prism constant, parts per million, standard deviation."""

from __future__ import annotations

import math

from geometry import checked
from geometry.errors import OutOfRange

LARGEST_PRISM_M = 0.2
LARGEST_PPM = 1000.0


def edm_distance(
    read_m: float,
    *,
    prism_set_m: float = 0.0,
    prism_true_m: float = 0.0,
    ppm_set: float = 0.0,
    ppm_true: float = 0.0,
) -> float:
    """A slope distance as it would read with the right prism constant and ppm.

    A wrong prism constant adds the same amount at any distance, a wrong ppm adds in
    proportion. Raises OutOfRange for constants no prism and no weather has.

    >>> round(edm_distance(100.0, prism_set_m=0.0, prism_true_m=-0.030), 3)
    99.97
    """
    read = checked.positive("read_m", read_m)
    for name, value, most in (
        ("prism_set_m", prism_set_m, LARGEST_PRISM_M),
        ("prism_true_m", prism_true_m, LARGEST_PRISM_M),
        ("ppm_set", ppm_set, LARGEST_PPM),
        ("ppm_true", ppm_true, LARGEST_PPM),
    ):
        if abs(checked.number(name, value)) > most:
            raise OutOfRange(
                f"{name} is {value:g}, more than any in use.",
                do="Check its unit: prism constants are often printed in millimetres.",
            )
    bare = (read - prism_set_m) / (1 + ppm_set * 1e-6)
    return bare * (1 + ppm_true * 1e-6) + prism_true_m


def atmospheric_ppm(
    temperature_c: float,
    pressure_hpa: float,
    *,
    reference_c: float = 12.0,
    reference_hpa: float = 1013.25,
) -> float:
    """Parts per million to add for the air, zero at the instrument's reference.

    Infrared light in dry air: the excess of the refractive index falls with absolute
    temperature and rises with pressure (Barrell & Sears 1939 form, group index 281.8
    at the reference of many instruments; from memory). A degree is about 1 ppm.

    >>> round(atmospheric_ppm(12.0, 1013.25), 6)
    0.0
    >>> 0.9 < atmospheric_ppm(13.0, 1013.25) < 1.1
    True
    """
    return _excess(reference_c, reference_hpa) - _excess(temperature_c, pressure_hpa)


def edm_sigma_m(distance_m: float, constant_m: float, ppm: float) -> float:
    """Standard deviation of a distance: constant and proportional part, independent.

    >>> round(edm_sigma_m(30.48, 0.003, 3.0) / 0.3048, 6)
    0.009847
    """
    distance = checked.number("distance_m", distance_m)
    constant = checked.number("constant_m", constant_m)
    return math.hypot(constant, checked.number("ppm", ppm) * 1e-6 * distance)


def _excess(temperature_c: float, pressure_hpa: float) -> float:
    kelvin = checked.positive("absolute temperature", temperature_c + 273.15)
    pressure = checked.positive("pressure_hpa", pressure_hpa)
    return 281.8 * (285.15 / kelvin) * (pressure / 1013.25)
