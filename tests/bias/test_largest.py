"""p values for the largest of several statistics, against formulas for independent and identical ones."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from reconcile.bias.largest import adjusted_p


def adjusted(z, correlation, others=0):
    z = np.asarray(z, float)
    return adjusted_p(2 * stats.norm.sf(np.abs(z)), z, np.asarray(correlation, float), others)


@pytest.mark.parametrize("count", [1, 3, 10])
def test_independent_statistics(count):
    z = np.linspace(1.0, 2.6, count)
    p = 2 * stats.norm.sf(z)
    np.testing.assert_allclose(adjusted(z, np.eye(count)), 1 - (1 - p) ** count, atol=0.012)  # 20,000 draws: 3 × 0.0035


def test_identical_statistics_are_one():
    z = np.array([2.2, 2.2, 2.2])
    np.testing.assert_allclose(adjusted(z, np.ones((3, 3))), 2 * stats.norm.sf(2.2), atol=0.004)


def test_far_tails_do_not_end_at_the_number_of_draws():
    z = np.array([8.0, 0.1])
    assert adjusted(z, np.eye(2))[0] == pytest.approx(2 * 2 * stats.norm.sf(8.0), rel=1e-3)


def test_single_runs_count_as_further_tests():
    p = 2 * stats.norm.sf(3.0)
    assert adjusted([3.0], [[1.0]], others=99)[0] == pytest.approx(1 - (1 - p) ** 100, rel=0.02)


def test_none_at_all():
    assert adjusted_p(np.zeros(0), np.zeros(0), np.zeros((0, 0)), 5).shape == (0,)


@given(st.lists(st.floats(0, 6), min_size=1, max_size=8), st.integers(0, 1000), st.integers(0, 200))
@settings(max_examples=20, deadline=None)
def test_never_below_its_own_p_and_in_its_order(z, seed, others):
    rng = np.random.default_rng(seed)
    root = rng.normal(size=(len(z), len(z) + 1))
    root /= np.linalg.norm(root, axis=1, keepdims=True)
    p = 2 * stats.norm.sf(z)
    found = adjusted_p(p, np.array(z), root @ root.T, others)
    assert (found >= p - 1e-15).all()
    assert (found <= 1).all()
    assert (np.diff(found[np.argsort(p)]) >= -1e-12).all()
