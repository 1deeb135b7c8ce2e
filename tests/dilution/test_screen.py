"""p values of residuals under a scale estimated from themselves; what the screen takes and what it leaves."""

import numpy as np
import pandas as pd
import pytest
from scipy import stats

from reconcile.dilution.screen import tail
from reconcile.simulation.truth import Truth


def test_a_stated_scale_is_the_normal_tail():
    z = np.array([0.0, 1.0, -1.96, 4.0])
    np.testing.assert_allclose(tail(z, np.inf), 2 * stats.norm.sf(np.abs(z)), rtol=1e-6)


def test_a_residual_under_its_own_scale():
    "Externally studentised: R. D. Cook, S. Weisberg, Residuals and Influence in Regression (1982), from memory."
    rng = np.random.default_rng(1)
    x = np.column_stack([np.ones(12), np.arange(12.0)])
    y = x @ [3.0, 0.2] + rng.standard_normal(12)
    hat = x @ np.linalg.inv(x.T @ x) @ x.T
    residual = y - hat @ y
    freedom = 10
    internal = residual / np.sqrt(residual @ residual / freedom * (1 - np.diag(hat)))
    for i in range(12):
        others = np.arange(12) != i
        beta, rss, *_ = np.linalg.lstsq(x[others], y[others], rcond=None)
        u = np.sqrt(rss[0] / (freedom - 1) * (1 + x[i] @ np.linalg.inv(x[others].T @ x[others]) @ x[i]))
        expected = 2 * stats.t.sf(abs((y[i] - x[i] @ beta) / u), freedom - 1)
        if internal[i] ** 2 < 0.7 * freedom:
            assert tail(internal[i : i + 1], freedom)[0] == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize("freedom", [2.0, 3.0, 4.0, 6.0])
def test_few_degrees_of_freedom_do_not_make_a_small_residual_significant(freedom):
    "z² < ν is only rough here: 1.6 is no outlier among five runs."
    assert tail(np.array([1.6]), freedom)[0] > 0.02
    assert tail(np.array([1e-3]), freedom)[0] > 0.99


def campaign(sets, rng, spoil=None, runs=12):
    """KCl and NaCl as their published sets have them, 0.05 kJ/mol of scatter, perhaps one run 1 kJ/mol short."""
    salts = ("KCl", "NaCl")
    m, salt = np.tile(np.geomspace(0.02, 0.5, runs), 2), np.repeat([0, 1], runs)
    parameters = np.nan_to_num([sets.scaled[sets.electrolyte.index(s)] for s in salts])
    enthalpy = Truth(salts, np.array([17.2, 3.9]), parameters).enthalpy(salt, m) + 0.05 * rng.standard_normal(2 * runs)
    if spoil is not None:
        enthalpy[spoil] -= 1.0
    return pd.DataFrame(
        {
            "run": [f"R{i:02d}" for i in range(2 * runs)],
            "salt": np.array(salts, dtype=object)[salt],
            "molality / (mol/kg)": m,
            "enthalpy / (kJ/mol)": enthalpy,
        }
    )


def test_a_run_that_stands_alone_does_not_pass_for_scatter(laid_out, sets):
    clean = laid_out(campaign(sets, np.random.default_rng(2))).extrapolation
    spoilt = laid_out(campaign(sets, np.random.default_rng(2), 7)).extrapolation
    assert clean.alone == ()
    assert spoilt.alone == (7,)
    assert spoilt.sizes.max() < 1.6 * clean.sizes.max()  # left in, it would be four times as large
    # but it is still in the fit: nothing is dropped
    assert spoilt.crystals.value[0] < clean.crystals.value[0] - 0.02


@pytest.mark.parametrize("seed", range(6))
def test_small_campaigns_keep_their_runs(laid_out, sets, seed):
    "Two salts of three runs: there is no telling which run stands alone."
    assert laid_out(campaign(sets, np.random.default_rng(seed), runs=3)).extrapolation.alone == ()
