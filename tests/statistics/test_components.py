"""Variance components: maxima and grids of likelihoods whose answers are known."""

import numpy as np
import pytest

from reconcile.statistics.components import likelihood_grid, restricted_maximum


def residual_likelihood(sum_of_squares, freedom):
    """Restricted log-likelihood of one standard deviation: −ν ln σ − S/2σ²."""

    def value(sizes):
        return -np.inf if sizes[0] <= 0 else -freedom * np.log(sizes[0]) - sum_of_squares / (2 * sizes[0] ** 2)

    return value


@pytest.mark.parametrize("start", [0.01, 1.0, 50.0])
def test_the_maximum_is_the_mean_square(start):
    found = restricted_maximum(residual_likelihood(20.0, 5), np.array([start]))
    assert found[0] == pytest.approx(2.0, rel=0.02)


def test_a_component_that_adds_nothing_is_exactly_zero():
    rng = np.random.default_rng(1)
    y = rng.normal(size=400)

    def value(sizes):
        variance = 1.0 + sizes[0] ** 2  # stated variance 1; y has hardly that
        return float(-0.5 * (len(y) * np.log(variance) + 0.9 * (y @ y) / variance))

    assert restricted_maximum(value, np.array([0.5]))[0] == 0.0


def test_the_grid_integrates_a_flat_density_of_the_standard_deviation():
    # σ²|S ~ S/χ² with ν − 1 degrees of freedom under a density flat in σ: E σ² = S/(ν − 3)
    freedom, squares = 12, 24.0
    likelihood = residual_likelihood(squares, freedom)
    best = restricted_maximum(likelihood, np.array([1.0]))
    points, weights = likelihood_grid(likelihood, best, np.array([1.0]))
    assert weights.sum() == pytest.approx(1.0)
    assert weights @ points[:, 0] ** 2 == pytest.approx(squares / (freedom - 3), rel=0.03)


def test_two_components_are_found_beside_each_other():
    rng = np.random.default_rng(4)
    scale = np.repeat([0.0, 3.0], 300)
    y = rng.normal(size=600) * np.hypot(0.5, 0.2 * scale)

    def value(sizes):
        variance = sizes[0] ** 2 + (sizes[1] * scale) ** 2
        return float(-0.5 * (np.log(variance).sum() + (y**2 / variance).sum())) if sizes[0] > 0 else -np.inf

    found = restricted_maximum(value, np.array([1.0, 1.0]))
    np.testing.assert_allclose(found, [0.5, 0.2], rtol=0.15)
    points, weights = likelihood_grid(value, found, np.array([1.0, 1.0]))
    np.testing.assert_allclose(weights @ points, found, rtol=0.1)


def test_no_component_at_all():
    points, weights = likelihood_grid(lambda sizes: 0.0, np.zeros(0), np.zeros(0))
    assert points.shape == (1, 0)
    assert weights.tolist() == [1.0]
