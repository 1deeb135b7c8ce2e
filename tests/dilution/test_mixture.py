"""The heavy-tailed prior against the mixture written out densely."""

import numpy as np
import pandas as pd
import pytest
from scipy import sparse

from reconcile.dilution.extrapolation import solve
from reconcile.dilution.mixture import weigh
from reconcile.dilution.priors import POPULATION_WEIGHTS, PUBLISHED_WEIGHTS, SCALES

POPULATION = "[analysis]\npublished_dilution = false\n"


def runs_of(salt, molality, enthalpy, u=0.05):
    return pd.DataFrame(
        {
            "run": [f"{salt} {i}" for i in range(len(molality))],
            "salt": salt,
            "molality / (mol/kg)": molality,
            "enthalpy / (kJ/mol)": enthalpy,
            "u(enthalpy) / (kJ/mol)": u,
        }
    )


def dense(problem, sizes, scale):
    """y = crystal + basis·p + e, p ~ N(mean error, scale × Σ): restricted marginal log-likelihood and the estimates."""
    n = len(problem.salt)
    y, basis = problem.observed.value, problem.basis[:, :4] * np.array([1, 1, 1, float(problem.has_fourth[0])])
    variance = problem.observed.private_variance.copy()
    for component, size in zip(problem.components, sizes, strict=True):
        variance += (size * component.scale) ** 2
    prior = scale * problem.prior.covariance[0]
    if problem.prior.group[0] >= 0:
        root = problem.prior.group_root[problem.prior.group[0]]
        prior = prior + root @ root.T
    shared = problem.observed.loading.toarray()
    v = np.diag(variance) + shared @ shared.T + basis @ prior @ basis.T
    one = np.ones((n, 1))
    inverse = np.linalg.inv(v)
    information = one.T @ inverse @ one
    value = np.linalg.solve(information, one.T @ inverse @ y)[0]
    left = y - value
    log = -0.5 * (np.linalg.slogdet(v)[1] + np.linalg.slogdet(information)[1] + left @ inverse @ left)
    return value, 1 / information[0, 0], log


@pytest.mark.parametrize("toml", [None, POPULATION])
@pytest.mark.parametrize("salt", ["KCl", "CaCl2", "CuSO4·5H2O"])
def test_each_component_is_the_dense_solution(laid_out, salt, toml):
    "Precision P/c in the fit: the crystal, its variance, and the restricted likelihood are those of numpy."
    m = np.array([0.01, 0.03, 0.06, 0.1, 0.15, 0.23])  # ionic strengths below 1 mol/kg: no further terms
    noise = np.array([0.03, -0.05, 0.02, 0.06, -0.04, 0.01])
    problem = laid_out(runs_of(salt, m, 12 + 1.5 * np.sqrt(m) + noise), toml, fit=False).problem
    sizes = np.full(len(problem.components), 0.3)
    logs = []
    for scale in SCALES:
        fit = problem.fit(sizes, problem.prior.precision / scale)
        value, variance, log = dense(problem, sizes, scale)
        assert fit.value[0] == pytest.approx(value, abs=1e-8)
        crystal = sparse.csr_array(([1.0], ([0], [0])), shape=(1, fit.unknowns))
        assert fit.variance(crystal)[0] == pytest.approx(variance, rel=1e-8)
        logs.append(fit.log_restricted_likelihood - log)
    # a prior row stands for root·p with unit variance: its density lacks |P/c|^½
    parameters = 3 + problem.has_fourth[0]
    np.testing.assert_allclose(np.array(logs) - logs[0], 0.5 * parameters * np.log(SCALES), atol=1e-8)


@pytest.mark.parametrize(("toml", "weights"), [(None, PUBLISHED_WEIGHTS), (POPULATION, POPULATION_WEIGHTS)])
def test_runs_that_say_nothing_leave_the_weights_as_they_were(laid_out, toml, weights):
    "One run fixes the crystal and nothing else; a parameter that the solution does not have says nothing either."
    problem = laid_out(runs_of("KCl", [0.1], [17.5]), toml, fit=False).problem
    for sweeps in (0, 1, 2, 5):
        _, parts = solve(problem, np.zeros(len(problem.components)), sweeps=sweeps)
        np.testing.assert_allclose(parts.weight[0], weights, rtol=1e-6)
    assert np.abs(parts.information).max() < 1e-6


@pytest.mark.parametrize("salt", ["KCl", "CaCl2"])
def test_weights_are_the_marginal_likelihoods(laid_out, salt):
    "With the shared sources held at nothing: wᵢ ∝ weightᵢ N(y | component i), from numpy."
    rng = np.random.default_rng(3)
    m = np.geomspace(0.02, 0.3, 9)
    away = 12 * m * (3 if salt == "CaCl2" else 1)  # a solution unlike its set
    enthalpy = 10 + np.sqrt(m) + away + 0.02 * rng.standard_normal(9)
    problem = laid_out(runs_of(salt, m, enthalpy, 0.02), None, fit=False).problem
    sizes = np.zeros(len(problem.components))
    precision = problem.prior.precision
    fit = problem.fit(sizes, precision)
    parts = weigh(problem, fit, precision)
    logs = np.array([dense(problem, sizes, c)[2] for c in SCALES]) + np.log(problem.prior.weights[0])
    expected = np.exp(logs - logs.max())
    np.testing.assert_allclose(parts.weight[0], expected / expected.sum(), atol=2e-3)
    assert parts.weight[0, 0] < problem.prior.weights[0, 0]  # the data ask for a wider prior


def test_evidence_of_a_mixture_is_that_of_its_parts(laid_out):
    "log Σ w N_c − log N_1, by numpy; a campaign of one electrolyte, where the population's mean belongs to one block."
    rng = np.random.default_rng(5)
    m = np.geomspace(0.02, 0.9, 7)
    enthalpy = 10 + 1.9 * np.sqrt(m) + 2.5 * m + 0.05 * rng.standard_normal(7)
    problem = laid_out(runs_of("KCl", m, enthalpy), POPULATION, fit=False).problem
    sizes = np.zeros(len(problem.components))
    parts = weigh(problem, problem.fit(sizes, problem.prior.precision), problem.prior.precision)
    logs = np.array([dense(problem, sizes, c)[2] for c in SCALES])
    exact = np.log(np.exp(logs - logs[0]) @ POPULATION_WEIGHTS)
    assert parts.evidence == pytest.approx(exact, abs=0.3)  # the error of the mean is held at its estimate


def test_average_prior_gives_the_average_estimate(laid_out):
    "The single normal prior that stands for the mixture: its map is the weighted map."
    m = np.geomspace(0.02, 0.9, 7)
    problem = laid_out(runs_of("KCl", m, 17 + 2 * np.sqrt(m) + 1.5 * m), POPULATION, fit=False).problem
    fit, parts = solve(problem, np.zeros(len(problem.components)), sweeps=8)
    average = parts.weight[0] @ parts.value[0]
    np.testing.assert_allclose(fit.value[problem.parameter_column[0, :3]], average[:3], atol=1e-6)
