"""The solver under the networks against certified regressions and dense algebra."""

from __future__ import annotations

import numpy as np
import pytest
import statsmodels.api as sm
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.adjust.frontal import NotDetermined, factorise, plan
from geometry.adjust.iterate import estimate, layout, leverages
from geometry.adjust.rows import Rows, normal
from geometry.adjust.selected import inverse_blocks


class Regression:
    """y = X b as a model of the solver, sigma 1."""

    def __init__(self, x, y):
        self.x, self.y = np.asarray(x, dtype=float), np.asarray(y, dtype=float)
        self.count = self.x.shape[1]
        self.nodes = np.arange(self.count)
        self.negligible = np.full(self.count, 1e-6)

    def rows(self, unknowns):
        columns = np.broadcast_to(np.arange(self.count), self.x.shape)
        return Rows(columns, self.x, self.y - self.x @ unknowns, ())


def fitted(x, y):
    model = Regression(x, y)
    start = np.zeros(model.count)
    order = layout(model, start)
    found = estimate(model, start, order, np.ones(len(model.y)))
    dof = len(model.y) - model.count
    deviation = np.sqrt(found.squares / dof)
    inverse = found.factor.solve(np.eye(model.count))
    return found, deviation, deviation * np.sqrt(np.diag(inverse))


def test_the_line_through_the_origin_has_its_certified_slope():
    # NIST StRD NoInt1
    x, y = np.arange(60.0, 71.0), np.arange(130.0, 141.0)
    found, deviation, sigmas = fitted(x[:, None], y)

    assert found.unknowns[0] == pytest.approx(2.07438016528926, rel=1e-13)
    assert sigmas[0] == pytest.approx(0.165289256198347e-01, rel=1e-12)
    assert deviation == pytest.approx(3.56753034006338, rel=1e-12)


NORRIS = """
0.1 0.2 338.8 337.4 118.1 118.2 888.0 884.6 9.2 10.1 228.1 226.5 668.5 666.3 998.5
996.3 449.1 448.6 778.9 777.0 559.2 558.2 0.3 0.4 0.1 0.6 778.1 775.5 668.8 666.9
339.3 338.0 448.9 447.5 10.8 11.6 557.7 556.0 228.3 228.1 998.0 995.8 888.8 887.6
119.6 120.2 0.3 0.3 0.6 0.3 557.6 556.8 339.3 339.1 888.0 887.2 998.5 999.0 778.9
779.0 10.2 11.1 117.6 118.3 228.9 229.2 668.4 669.1 449.2 448.9 0.2 0.5
"""


def test_the_norris_line_has_its_certified_coefficients():
    # NIST StRD Norris, 36 observations
    y, x = np.array(NORRIS.split(), dtype=float).reshape(-1, 2).T
    found, deviation, sigmas = fitted(np.stack([np.ones(36), x], 1), y)

    assert found.unknowns == pytest.approx(
        [-0.262323073774029, 1.00211681802045], rel=1e-11
    )
    assert sigmas == pytest.approx(
        [0.232818234301152, 0.429796848199937e-03], rel=1e-11
    )
    assert deviation == pytest.approx(0.884796396144373, rel=1e-12)


def test_the_ill_conditioned_longley_regression_keeps_six_digits():
    # NIST StRD Longley (from memory), data as carried by statsmodels
    data = sm.datasets.longley.load()
    x = np.column_stack([np.ones(16), np.asarray(data.exog)])
    found, deviation, sigmas = fitted(x, np.asarray(data.endog))

    assert found.unknowns == pytest.approx(
        [
            -3482258.63459582,
            15.0618722713733,
            -0.0358191792925910,
            -2.02022980381683,
            -1.03322686717359,
            -0.0511041056535807,
            1829.15146461355,
        ],
        rel=1e-6,
    )
    assert sigmas[0] == pytest.approx(890420.383607373, rel=1e-6)
    assert deviation == pytest.approx(304.854073561965, rel=1e-8)


def random_rows(rng, unknowns, count):
    """Rows over neighbours on a line with jumps, so that the pattern is sparse."""
    columns = np.full((count, 4), -1)
    for i in range(count):
        first = int(rng.integers(unknowns))
        near = np.clip(first + rng.integers(-3, 4, 4), 0, unknowns - 1)
        near = np.unique(np.append(near[:3], first))
        columns[i, : len(near)] = near
    coefficients = np.where(columns >= 0, rng.normal(size=columns.shape), 0.0)
    return Rows(columns, coefficients, rng.normal(size=count), ())


@settings(max_examples=30, deadline=None)
@given(st.integers(0, 2**32 - 1), st.integers(2, 600))
def test_solution_and_selected_inverse_equal_the_dense_ones(seed, unknowns):
    rng = np.random.default_rng(seed)
    rows = random_rows(rng, unknowns, 4 * unknowns + 20)
    own = np.full((unknowns, 4), -1)
    own[:, 0] = np.arange(unknowns)
    whole = Rows(
        np.concatenate([rows.columns, own]),
        np.concatenate([rows.coefficients, np.where(own >= 0, 0.5, 0.0)]),
        np.concatenate([rows.misclosure, np.zeros(unknowns)]),
        (),
    )
    matrix, right = normal(whole, unknowns, np.ones(len(whole.misclosure)))
    order = plan(matrix, np.arange(unknowns))
    factor = factorise(order, matrix)
    dense = np.linalg.inv(matrix.toarray())

    assert factor.solve(right) == pytest.approx(dense @ right, rel=1e-6, abs=1e-9)
    (blocks,) = inverse_blocks(factor, [whole.columns])
    for i in rng.integers(0, len(whole.columns), 20):
        used = whole.columns[i] >= 0
        at = whole.columns[i][used]
        assert blocks[i][np.ix_(used, used)] == pytest.approx(
            dense[np.ix_(at, at)], rel=1e-6, abs=1e-10
        )
        assert not blocks[i][~used].any()
    assert leverages(whole, factor).sum() == pytest.approx(unknowns, rel=1e-9)
    assert sorted(order.order) == list(range(unknowns))


def test_a_singular_matrix_is_noticed_whatever_its_units():
    for scale in (1e-9, 1.0, 1e9):
        half = scale * np.array([[1.0, 2.0], [2.0, 4.0], [0.5, 1.0]])
        rows = Rows(np.tile([0, 1], (3, 1)), half, np.zeros(3), ())
        matrix, _ = normal(rows, 2, np.ones(3))
        with pytest.raises(NotDetermined):
            factorise(plan(matrix, np.arange(2)), matrix)
