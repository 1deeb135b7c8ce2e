"""Every published salt in turn kept out of its population: coverage, against terms chosen by AICc."""

import numpy as np
import pytest
from scipy import sparse

from reconcile import reference
from reconcile.chemistry import read_salt, water
from reconcile.dilution import electrolytes, published_sets
from reconcile.dilution.extrapolation import extrapolate
from reconcile.dilution.models import empirical_terms, limiting_law
from reconcile.dilution.priors import Prior, prior_of
from reconcile.dilution.problem import Problem
from reconcile.statistics import Ledger, Sources

SD = 0.05  # kJ/mol, of a run
SLOPE_SPREAD = 0.007
CASES = 5_000
DESIGNS = {"4 runs, 0.05-0.5": (4, 0.05, 0.5), "8 runs, 0.01-1": (8, 0.01, 1.0), "20 runs, 0.01-2": (20, 0.01, 2.0)}


def left_out_priors(frame, slope):
    """Truths (scaled parameters) and, for each, the prior made without it."""
    whole = published_sets(frame, slope)
    known = np.isfinite(whole.scaled[:, :2]).all(axis=1)  # a C^φ that no set determines: truly 0 in the trial
    names = [n for n, ok in zip(whole.electrolyte, known, strict=True) if ok]
    priors = []
    for name in names:
        sets = published_sets(frame, slope, frozenset({name}))
        priors.append(prior_of(electrolytes([read_salt(name)]), sets, np.zeros(1, bool)))
    return names, np.nan_to_num(whole.scaled[known]), priors


def joined(priors, at):
    """One prior of many blocks, the error of each population's mean its own."""
    picked = [priors[i] for i in at]
    roots = np.concatenate([p.group_root for p in picked])
    covariance = np.concatenate([p.covariance for p in picked])
    covariance = covariance + np.einsum("bik,bjk->bij", roots, roots)
    return Prior(
        np.concatenate([p.mean for p in picked]),
        covariance,
        np.concatenate([p.weights for p in picked]),
        np.zeros(len(picked), bool),
        np.full(len(picked), -1),
        (),
        np.zeros((0, 4, 3)),
    )


def simulated(names, truths, priors, at, runs, low, high, rng):
    what = electrolytes([read_salt(n) for n in names]).composition.of(at)
    block = np.repeat(np.arange(len(at)), runs)
    m = np.exp(rng.uniform(np.log(low), np.log(high), len(block)))
    one = what.of(block)
    temperature = np.full(len(block), 298.15)
    slope = float(water.debye_hueckel_slope(298.15))
    true_slope = slope * (1 + SLOPE_SPREAD * rng.standard_normal(len(at)))[block]
    terms = empirical_terms(m, temperature, one)
    law = limiting_law(m, one.charge_factor, slope)
    true = limiting_law(m, one.charge_factor, true_slope) + np.einsum("nj,nj->n", terms, truths[at][block])
    y = true - law + SD * rng.standard_normal(len(m))
    prior = joined(priors, at)
    value = y - np.einsum("nj,nj->n", terms, prior.mean[block])
    # a slope of its own for each case, so that the cases are independent
    loading = sparse.csr_array((SLOPE_SPREAD * law, (np.arange(len(m)), block)), shape=(len(m), len(at)))
    sources = Sources(tuple(f"slope {i}" for i in range(len(at))), ("stated",) * len(at), ("slope",) * len(at))
    observed = Ledger(value, np.full((len(m), 1), SD), ("run",), loading, sources)
    problem = Problem(
        observed, block, block, len(at), np.arange(len(at)), terms, prior, (), sparse.csr_array((len(m), 0)),
        what.alpha2 > 0, np.zeros((len(at), 0), bool), (),
    )  # fmt: skip
    return problem, y, terms, block


def by_aicc(y, terms, block, runs):
    """Limit and u with 0 to 3 empirical terms, the number chosen by AICc for each case."""
    y, terms = y.reshape(-1, runs), terms.reshape(-1, runs, 4)
    best, value, u = np.full(len(y), np.inf), np.zeros(len(y)), np.zeros(len(y))
    for count in range(4):
        k = count + 1
        if runs - k - 1 <= 0:
            continue
        x = np.concatenate([np.ones((*y.shape, 1)), terms[:, :, :count]], axis=2)
        inverse = np.linalg.pinv(np.einsum("crj,crk->cjk", x, x))
        beta = np.einsum("cjk,crk,cr->cj", inverse, x, y)
        misfit = ((y - np.einsum("crj,cj->cr", x, beta)) ** 2).sum(axis=1) / SD**2
        score = misfit + 2 * k + 2 * k * (k + 1) / (runs - k - 1)
        better = score < best
        best = np.where(better, score, best)
        value, u = np.where(better, beta[:, 0], value), np.where(better, SD * np.sqrt(inverse[:, 0, 0]), u)
    return value, u


@pytest.mark.study
@pytest.mark.parametrize("design", list(DESIGNS))
def test_salts_left_out_of_their_population_are_covered(design, record_property):
    runs, low, high = DESIGNS[design]
    frame = reference.dilution_parameters()
    names, truths, priors = left_out_priors(frame, float(water.debye_hueckel_slope(298.15)))
    at = np.resize(np.arange(len(names)), CASES)
    rng = np.random.default_rng(sum(map(ord, design)))
    problem, y, terms, block = simulated(names, truths, priors, at, runs, low, high, rng)
    found = extrapolate(problem, sparse.csr_array((len(block), 0)))
    inside = (found.interval[:, 0] <= 0) & (found.interval[:, 1] >= 0)
    chosen, u = by_aicc(y, terms, block, runs)
    by_choice = np.abs(chosen) <= 1.96 * u
    kinds = np.array([read_salt(n).charge_type for n in names])[at]
    print(f"\n{design}: coverage and rms error / (kJ/mol), heavy-tailed prior | 0 to 3 free terms by AICc")
    for kind in sorted(set(kinds)):
        mine = kinds == kind
        sets = len(set(at[mine]))
        rms = np.sqrt(np.mean(found.crystals.value[mine] ** 2)), np.sqrt(np.mean(chosen[mine] ** 2))
        print(
            f"  {kind} ({sets:2d} sets, {mine.sum():4d} cases): {inside[mine].mean():.3f} {rms[0]:.3f} | "
            f"{by_choice[mine].mean():.3f} {rms[1]:.3f}"
        )
        if kind in ("1-1", "2-1"):
            assert inside[mine].mean() >= 0.925
    assert inside.mean() >= by_choice.mean()
