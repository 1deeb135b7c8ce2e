"""Simulated campaigns with known truth: coverage, planted gains, false alarms, budgets."""

import numpy as np
import pandas as pd
import pytest
from scipy import stats

from reconcile import analyse, read_campaign, reference
from reconcile.campaign.writing import write_campaign
from reconcile.chemistry import read_salt, water
from reconcile.dilution import electrolytes, published_sets
from reconcile.simulation.demo import demo
from reconcile.simulation.truth import Truth, draw_truth, enthalpy_rows

pytestmark = pytest.mark.study

KINDS = ("1-1", "2-1", "1-2")
CALORIMETERS = pd.DataFrame({"calorimeter": ["A", "B"]})


@pytest.fixture(scope="module")
def sets():
    return published_sets(reference.dilution_parameters(), float(water.debye_hueckel_slope(298.15)))


@pytest.fixture(scope="module")
def run_campaign(tmp_path_factory):
    def run(runs, toml=None, **tables):
        folder = tmp_path_factory.mktemp("campaign")
        write_campaign(folder / "in", toml, {"runs": runs, **tables})
        return analyse(read_campaign(folder / "in"))

    return run


def kind_of(sets):
    return {name: read_salt(name).charge_type for name in sets.electrolyte}


def truth_of_others(sets, salts, rng):
    """Dilution of each salt after a published set of another salt of its charge type that is not in the campaign."""
    kinds = kind_of(sets)
    population = {}
    for kind in KINDS:
        rows = [
            np.where(np.isfinite(sets.scaled[i]), sets.scaled[i], sets.population[kind].mean)
            for i, name in enumerate(sets.electrolyte)
            if kinds[name] == kind and name not in salts
        ]
        population[kind] = np.array(rows)
    return draw_truth(salts, population, rng)


def budget_gap(analysis):
    """Largest relative distance of a budget's root-sum-square from u."""
    u = analysis.salts.set_index("salt")["u"].dropna()
    total = analysis.budget.assign(square=analysis.budget["contribution"] ** 2).groupby("salt")["square"].sum() ** 0.5
    return float((total[u.index] / u - 1).abs().max())


@pytest.mark.parametrize("declared", [True, False])
def test_intervals_hold_the_truth(sets, run_campaign, declared):
    "24 campaigns × 15 salts × 8 runs, 0.01 to 1 mol/kg, published parameters off: 92 to 98.5 %."
    rng = np.random.default_rng(20_260_601 + declared)
    names = [n for n, kind in kind_of(sets).items() if kind in KINDS]
    inside, by_campaign, gap = [], [], 0.0
    for _ in range(24):
        salts = tuple(rng.choice(names, 15, replace=False))
        truth = truth_of_others(sets, salts, rng)
        u = float(rng.choice([0.02, 0.05, 0.15]))
        runs = enthalpy_rows(truth, 8, (0.01, 1.0), u, rng, declared)
        analysis = run_campaign(runs, "[analysis]\npublished_dilution = false\n")
        found = analysis.salts.set_index("salt").loc[list(salts)]
        value = truth.standard_enthalpy
        here = (found["interval_low"].to_numpy() < value) & (value < found["interval_high"].to_numpy())
        inside += here.tolist()
        by_campaign.append(here.mean())
        gap = max(gap, budget_gap(analysis))
    coverage = float(np.mean(inside))
    print(f"\ndeclared {declared}: {coverage:.3f} of {len(inside)}; worst {min(by_campaign):.2f}; budget {gap:.1e}")
    assert len(inside) == 360
    assert 0.92 <= coverage <= 0.985
    assert gap < 0.01


@pytest.fixture(scope="module")
def eight():
    return ("KCl", "NaCl", "KBr", "NaNO3", "NH4Cl", "KNO3", "KI", "RbCl")


def truth_as_published(sets, salts, rng, **faults):
    """Published enthalpies and parameters, each off by a draw from its own uncertainty."""
    published = reference.solution_enthalpies(salts)
    what = electrolytes([read_salt(s) for s in salts])
    parameters = []
    for name in what.name:
        i = sets.electrolyte.index(name)
        known = np.isfinite(sets.scaled[i])
        draw = np.where(
            known, sets.scaled[i] + np.sqrt(np.where(known, sets.variance[i], 0)) * rng.standard_normal(4), 0
        )
        parameters.append(draw)
    value = published["value"].to_numpy(float) + published["u"].to_numpy(float) * rng.standard_normal(len(salts))
    slope = 1 + 0.007 * float(rng.standard_normal())
    return Truth(tuple(salts), value, np.array(parameters)[what.of_salt], slope, **faults)


@pytest.mark.parametrize("declared", [True, False])
def test_a_planted_gain_is_the_first_suspect(sets, run_campaign, eight, declared):
    "−1.2 % in one of two calorimeters, eight salts × 12 runs, 20 campaigns."
    first, inside, z = 0, 0, []
    for seed in range(20):
        rng = np.random.default_rng(7_000 + seed)
        truth = truth_as_published(sets, eight, rng, gain={"B": -0.012})
        runs = enthalpy_rows(truth, 12, (0.02, 0.6), 0.05, rng, declared, ("A", "B"))
        bias = run_campaign(runs, calorimeters=CALORIMETERS).bias
        first += bias.iloc[0]["hypothesis"] == "gain" and bias.iloc[0]["subject"] == "B"
        row = bias[bias["hypothesis"].eq("gain") & bias["subject"].eq("B")].iloc[0]
        inside += row["interval_low"] < -0.012 < row["interval_high"]
        z.append((row["size"] + 0.012) / row["u"])
    print(f"\ndeclared {declared}: first {first}/20, inside {inside}/20, z {np.mean(z):+.2f} ± {np.std(z):.2f}")
    assert first >= 19
    assert stats.binom.cdf(inside, 20, 0.95) > 0.001
    assert abs(np.mean(z)) < 4 / np.sqrt(20)


@pytest.mark.parametrize("declared", [True, False])
def test_false_alarms(sets, run_campaign, eight, declared):
    "Nothing planted, 100 campaigns of four salts × 6 runs each way: any adjusted p below 0.05 in about 5 %."
    alarms, what = 0, []
    for seed in range(100):
        rng = np.random.default_rng(50_000 + seed)
        salts = tuple(rng.choice(eight, 4, replace=False))
        truth = truth_as_published(sets, salts, rng)
        runs = enthalpy_rows(truth, 6, (0.02, 0.6), 0.05, rng, declared, ("A", "B"))
        bias = run_campaign(runs, calorimeters=CALORIMETERS).bias
        significant = bias[bias["p_adjusted"] < 0.05]
        alarms += len(significant) > 0
        what += [(seed, *row) for row in significant[["hypothesis", "subject", "p_adjusted"]].itertuples(index=False)]
    print(f"\ndeclared {declared}: {alarms} of 100 campaigns, {what}")
    assert stats.binom.sf(alarms - 1, 100, 0.05) > 0.001  # not more than chance allows at 5 %


def test_the_demos_budgets_add_up(run_campaign):
    toml, tables = demo()
    analysis = run_campaign(tables["runs"], toml, samples=tables["samples"], calorimeters=tables["calorimeters"])
    assert budget_gap(analysis) < 0.01
