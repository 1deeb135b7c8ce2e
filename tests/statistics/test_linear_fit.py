"""The bordered fit against dense generalised least squares."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import sparse

from reconcile.statistics import Blocks, Ledger, Sources, estimate, least_squares, stated


def campaign(rng, blocks=5, runs=9, crystals=2, wide=3):
    """A small problem with two crystals in some blocks, narrow and wide sources, two private lines."""
    n = blocks * runs
    of_row = np.repeat(np.arange(blocks), runs)
    columns, of_unknown = [], []
    for b in range(blocks):
        inside = of_row == b
        count = crystals if b % 2 else 1
        which = np.arange(n) % count
        for c in range(count):
            columns.append((inside & (which == c)).astype(float))
            of_unknown.append(b)
        columns.append(np.where(inside, rng.normal(size=n), 0.0))
        of_unknown.append(b)
    narrow = np.column_stack(
        [np.where((of_row == b) & (np.arange(n) % 3 == 0), rng.normal(size=n), 0) for b in range(blocks)]
    )
    loading = np.column_stack([rng.normal(size=(n, wide)) * 0.7, narrow])
    k = loading.shape[1]
    names = [f"calorimeter {i}" for i in range(wide)] + [f"lot {i}" for i in range(blocks)]
    sources = Sources(tuple(names), ("stated",) * k, ("calorimeter",) * wide + ("lot",) * blocks)
    private = np.column_stack([rng.uniform(0.1, 1, n), rng.uniform(0.1, 1, n)])
    y = Ledger(rng.normal(size=n) * 3, private, ("heat", "weighing"), sparse.csr_array(loading), sources)
    return y, sparse.csr_array(np.column_stack(columns)), Blocks(of_row, np.array(of_unknown))


def dense_gls(y, x):
    v = y.covariance()
    x = x.toarray()
    covariance = np.linalg.inv(x.T @ np.linalg.solve(v, x))
    estimate = covariance @ x.T @ np.linalg.solve(v, y.value)
    p = np.linalg.inv(v) - np.linalg.solve(v, x) @ covariance @ np.linalg.solve(v, x).T
    return estimate, covariance, p, v


@pytest.mark.parametrize("with_blocks", [True, False])
@pytest.mark.parametrize("seed", [1, 2, 3])
def test_equals_dense_gls(seed, with_blocks):
    y, x, blocks = campaign(np.random.default_rng(seed))
    fit = least_squares(y, x, blocks if with_blocks else None)
    estimate, covariance, p, v = dense_gls(y, x)
    np.testing.assert_allclose(fit.value, estimate, atol=1e-10)
    np.testing.assert_allclose(fit.variance(sparse.eye_array(x.shape[1], format="csr")), np.diag(covariance), rtol=1e-9)
    assert fit.chi_square == pytest.approx(y.value @ p @ y.value, rel=1e-9)
    _sign_v, log_v = np.linalg.slogdet(v)
    _sign_c, log_c = np.linalg.slogdet(covariance)
    assert fit.log_restricted_likelihood == pytest.approx(-0.5 * (log_v - log_c + y.value @ p @ y.value), rel=1e-9)

    fitted = x.toarray() @ covariance @ x.toarray().T
    np.testing.assert_allclose(fit.fitted_variance(), np.diag(fitted), rtol=1e-9)
    np.testing.assert_allclose(fit.redundancy(), np.diag(v @ p), atol=1e-9)
    assert fit.redundancy().sum() == pytest.approx(fit.degrees_of_freedom)

    a = np.random.default_rng(9).normal(size=(len(y), 3))
    response = fit.respond(sparse.csr_array(a))
    np.testing.assert_allclose(response.score, a.T @ p @ y.value, atol=1e-9)
    np.testing.assert_allclose(response.information, a.T @ p @ a, rtol=1e-9, atol=1e-9)
    gain = covariance @ x.toarray().T @ np.linalg.inv(v)
    np.testing.assert_allclose(response.shift, gain @ a, atol=1e-9)
    np.testing.assert_allclose(fit.unexplained(sparse.csr_array(a)), p @ a, atol=1e-9)
    np.testing.assert_allclose(
        fit.respond(sparse.csr_array(a), diagonal=True).information, np.diag(a.T @ p @ a), rtol=1e-9
    )

    score, information = fit.single_observations()
    np.testing.assert_allclose(score, p @ y.value, atol=1e-9)
    np.testing.assert_allclose(information, np.diag(p), rtol=1e-8)


def test_a_hypothesis_a_block_is_the_loading_cut_up():
    y, x, blocks = campaign(np.random.default_rng(12))
    fit = least_squares(y, x, blocks)
    loading = np.random.default_rng(1).normal(size=len(y))
    score, information = fit.respond_by_block(loading)
    cut = np.where(blocks.of_row[:, None] == np.arange(5), loading[:, None], 0.0)
    response = fit.respond(sparse.csr_array(cut), diagonal=True)
    np.testing.assert_allclose(score, response.score, atol=1e-10)
    np.testing.assert_allclose(information, response.information, rtol=1e-9)


def test_a_network_without_narrow_sources_equals_dense_gls():
    y, x, _ = campaign(np.random.default_rng(8))
    y = Ledger(y.value, y.private, y.lines, sparse.csr_array(y.loading[:, :3]), y.sources.take(range(3)))
    fit = least_squares(y, x)
    assert len(fit.narrow) == 0
    _, covariance, p, v = dense_gls(y, x)
    np.testing.assert_allclose(fit.redundancy(), np.diag(v @ p), atol=1e-9)
    np.testing.assert_allclose(fit.fitted_variance(), np.diag(x.toarray() @ covariance @ x.toarray().T), rtol=1e-9)


@pytest.mark.parametrize("seed", [4, 5])
def test_estimate_carries_its_exact_covariance_and_budget(seed):
    y, x, blocks = campaign(np.random.default_rng(seed))
    fit = least_squares(y, x, blocks)
    chosen = np.flatnonzero((x.toarray() == 1).any(axis=0))
    ledger = estimate(fit, chosen)
    _, covariance, _, v = dense_gls(y, x)
    np.testing.assert_allclose(ledger.covariance(), covariance[np.ix_(chosen, chosen)], atol=1e-10)
    contribution, _lines = ledger.budgets()
    np.testing.assert_allclose((contribution**2).sum(axis=1), np.diag(covariance)[chosen], rtol=1e-9)
    # the loading on a wide source is what the estimate would move by, per standard deviation of that source
    gain = covariance @ x.toarray().T @ np.linalg.inv(v)
    expected = gain[chosen] @ y.loading.toarray()[:, 0]
    named = ledger.loading.toarray()[:, ledger.sources.name.index("calorimeter 0")]
    np.testing.assert_allclose(np.abs(named), np.abs(expected), atol=1e-10)


@given(st.permutations(range(45)), st.floats(0.01, 100))
@settings(max_examples=15, deadline=None)
def test_order_of_rows_and_unit_do_not_matter(order, scale):
    y, x, blocks = campaign(np.random.default_rng(6))
    reference = least_squares(y, x, blocks)
    at = np.array(order)
    turned = Ledger(
        y.value[at] * scale, y.private[at] * scale, y.lines, sparse.csr_array(y.loading[at] * scale), y.sources
    )
    fit = least_squares(turned, sparse.csr_array(x[at]), Blocks(blocks.of_row[at], blocks.of_unknown))
    np.testing.assert_allclose(fit.value, reference.value * scale, rtol=1e-8, atol=1e-9 * scale)
    assert fit.chi_square == pytest.approx(reference.chi_square, rel=1e-9)


def test_refuses_what_it_cannot_weigh_or_see():
    y = stated(np.array([1.0, 2.0]), np.array([0.1, 0.0]), "u")
    with pytest.raises(ValueError, match="observation 1 has no private variance"):
        least_squares(y, sparse.csr_array(np.ones((2, 1))))
    y = stated(np.array([1.0, 2.0]), np.array([0.1, 0.1]), "u")
    with pytest.raises(ValueError, match="unknown 1 is in no observation"):
        least_squares(y, sparse.csr_array(np.array([[1.0, 0.0], [1.0, 0.0]])))
