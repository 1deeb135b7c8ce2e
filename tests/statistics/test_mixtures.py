"""Quantiles of mixtures against scipy's distributions."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from reconcile.statistics.mixtures import freedom_of_factor, mixture_quantile


@given(st.floats(0.001, 0.999), st.floats(-100, 100), st.floats(0.01, 50))
@settings(max_examples=40, deadline=None)
def test_one_component_is_the_normal_quantile(probability, mean, sd):
    one = np.ones((1, 1))
    found = mixture_quantile(one, mean * one, sd * one, probability)[0]
    assert found == pytest.approx(stats.norm.ppf(probability, mean, sd), abs=1e-6 * sd)


def test_two_far_components_are_cut_where_their_weights_say():
    weight, mean, sd = np.array([[0.5, 0.5]]), np.array([[0.0, 1000.0]]), np.ones((1, 2))
    assert mixture_quantile(weight, mean, sd, 0.25)[0] == pytest.approx(0.0, abs=1e-6)
    assert mixture_quantile(weight, mean, sd, 0.75)[0] == pytest.approx(1000.0, abs=1e-6)


def test_the_distribution_function_at_a_quantile_is_its_probability():
    rng = np.random.default_rng(2)
    weight = rng.dirichlet(np.ones(5), size=20)
    mean, sd = rng.normal(size=(20, 5)) * 3, rng.uniform(0.1, 4, (20, 5))
    at = mixture_quantile(weight, mean, sd, 0.975)
    np.testing.assert_allclose((weight * stats.norm.cdf(at[:, None], mean, sd)).sum(axis=1), 0.975, atol=1e-9)


@pytest.mark.parametrize("freedom", [2.0, 5.0, 17.0, 120.0])
def test_the_factor_of_student_gives_back_its_degrees_of_freedom(freedom):
    factor = stats.t.ppf(0.975, freedom)
    assert freedom_of_factor(np.array([factor]))[0] == pytest.approx(freedom, rel=0.01)
