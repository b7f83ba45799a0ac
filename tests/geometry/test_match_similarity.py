"""The robust similarity: exact without noise, unmoved by outliers."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import CoincidentPoints, EmptyInput, WrongShape
from geometry.match import fit_similarity


def carried(points, shift, rotation, scale):
    c, s = math.cos(rotation), math.sin(rotation)
    return np.asarray(shift) + scale * points @ np.array([[c, -s], [s, c]])


@given(
    st.floats(-3.1, 3.1),
    st.floats(0.3, 3.0),
    st.floats(-1e3, 1e3),
    st.integers(0, 2**32 - 1),
)
def test_an_exact_similarity_is_recovered_whatever_its_size(turn, scale, shift, seed):
    points = np.random.default_rng(seed).uniform(-100, 100, (12, 2))
    target = carried(points, (shift, -shift), turn, scale)
    fit = fit_similarity(points + 4e6, target + 4e6)
    assert np.abs(fit.apply(points + 4e6) - target - 4e6).max() < 1e-6
    assert fit.scale == pytest.approx(scale, rel=1e-6)
    assert abs(math.remainder(fit.rotation_rad - turn, 2 * math.pi)) < 1e-6


def test_one_shot_in_five_may_be_wild():
    rng = np.random.default_rng(8)
    points = rng.uniform(0, 2000, (5000, 2))
    target = carried(points - 1000, (1000.0, 1000.0), math.radians(50 / 3600), 1.00003)
    target += rng.normal(0, 0.005, target.shape)
    wild = rng.random(5000) < 0.2
    target[wild] += rng.normal(0, 5.0, (int(wild.sum()), 2))
    fit = fit_similarity(points, target)
    assert 1e6 * (fit.scale - 1) == pytest.approx(30.0, abs=0.3)
    assert 3600 * math.degrees(fit.rotation_rad) == pytest.approx(50.0, abs=0.05)
    assert (fit.weights[wild] == 0).mean() > 0.97
    assert fit.sigma_m == pytest.approx(0.006, abs=0.0015)


def test_the_predicted_covariance_is_what_trials_scatter_by():
    rng = np.random.default_rng(9)
    points = rng.uniform(-100, 100, (60, 2))
    found, predicted = [], []
    for _ in range(600):
        fit = fit_similarity(points, points + rng.normal(0, 0.01, points.shape))
        found.append([*fit.shift, fit.rotation_rad, fit.scale])
        predicted.append(np.diag(fit.covariance))
    ratio = np.var(found, axis=0) / np.mean(predicted, axis=0)
    # the biweight gives away some five percent and its weights shrink the sum
    assert ((ratio > 0.8) & (ratio < 1.35)).all()


def test_bad_input_is_named():
    with pytest.raises(EmptyInput):
        fit_similarity([(0, 0)], [(0, 0)])
    with pytest.raises(WrongShape):
        fit_similarity([(0, 0), (1, 1)], [(0, 0)])
    with pytest.raises(CoincidentPoints):
        fit_similarity([(5, 5), (5, 5)], [(0, 0), (1, 1)])
    heap = np.zeros((9, 2))
    heap[-1] = (50.0, 0.0)
    with pytest.raises(CoincidentPoints, match="that agree"):
        fit_similarity(heap, np.vstack([np.zeros((8, 2)), [(99.0, 9.0)]]))
