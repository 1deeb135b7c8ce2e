"""Ledgers keep the covariance that their sources say."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import sparse

from reconcile.statistics import Ledger, Sources, stack, stated


def some(rng, n=6, names=("a", "b")):
    loading = rng.normal(size=(n, len(names))) * rng.integers(0, 2, size=(n, len(names)))
    sources = Sources(tuple(names), ("stated",) * len(names), tuple(f"line {x}" for x in names))
    return Ledger(rng.normal(size=n), rng.uniform(size=(n, 2)), ("heat", "mass"), sparse.csr_array(loading), sources)


@given(st.integers(0, 10_000))
@settings(max_examples=30, deadline=None)
def test_a_linear_map_keeps_the_covariance(seed):
    rng = np.random.default_rng(seed)
    ledger = some(rng)
    matrix = sparse.csr_array(rng.normal(size=(4, 6)) * rng.integers(0, 2, size=(4, 6)))
    mapped = ledger.map(matrix)
    expected = matrix.toarray() @ ledger.covariance() @ matrix.toarray().T
    np.testing.assert_allclose(mapped.covariance(), expected, atol=1e-12)
    np.testing.assert_allclose(mapped.value, matrix.toarray() @ ledger.value)
    np.testing.assert_allclose(mapped.u**2, np.diag(expected), atol=1e-12)


def test_a_budget_adds_up_to_u_and_names_its_lines():
    ledger = some(np.random.default_rng(3))
    contribution, lines = ledger.budgets()
    assert lines == ("heat", "mass", "line a", "line b")
    np.testing.assert_allclose(np.sqrt((contribution**2).sum(axis=1)), ledger.u)
    budget = ledger.budget(0)
    assert list(budget.values()) == sorted(budget.values(), reverse=True)


def test_stacked_ledgers_share_the_sources_of_one_name():
    rng = np.random.default_rng(5)
    first, second = some(rng, names=("a", "b")), some(rng, names=("b", "c"))
    both = stack([first, second])
    assert both.sources.name == ("a", "b", "c")
    cross = both.covariance()[:6, 6:]
    expected = first.loading.toarray()[:, [1]] @ second.loading.toarray()[:, [0]].T
    np.testing.assert_allclose(cross, expected, atol=1e-12)


def test_unequal_shapes_are_refused():
    with pytest.raises(ValueError, match="2 values"):
        Ledger(np.zeros(2), np.zeros((3, 1)), ("u",), sparse.csr_array((2, 0)), Sources())
    assert stated(np.array([1.0]), np.array([0.2]), "u").u == pytest.approx([0.2])
