"""Coverage of the 95 % intervals in hard designs, and the error beside that of one who knows the population."""

import numpy as np
import pytest

from reconcile import reference
from reconcile.campaign import read_campaign, write_campaign
from reconcile.chemistry import read_salt, water
from reconcile.dilution import electrolytes, published_sets
from reconcile.dilution.models import empirical_terms, limiting_law
from reconcile.pipeline import analyse
from reconcile.simulation import draw_truth, enthalpy_rows, many_salts

SD = 0.05  # kJ/mol, of a run
JITTER = 0.1  # relative, of the parameters drawn
WITHOUT = "[analysis]\npublished_dilution = false\n"


@pytest.fixture(scope="module")
def population():
    """Complete published sets by charge type, scaled."""
    sets = published_sets(reference.dilution_parameters(), float(water.debye_hueckel_slope(298.15)))
    kinds = np.array([read_salt(name).charge_type for name in sets.electrolyte])
    whole = np.isfinite(sets.scaled[:, :3]).all(axis=1)
    return {kind: np.nan_to_num(sets.scaled[whole & (kinds == kind)]) for kind in ("1-1", "2-1", "1-2")}


def with_batches(table, runs, batches, size, rng):
    """Each salt's runs shared out to batches, each with its own effect."""
    salts = len(table) // runs
    batch = np.tile(np.arange(runs) % batches, salts)
    effect = size * rng.standard_normal((salts, batches))
    table["batch"] = [f"b{i}" for i in batch]
    table["enthalpy / (kJ/mol)"] += effect[np.repeat(np.arange(salts), runs), batch]
    return table


def covered(folder, truth, table):
    write_campaign(folder, WITHOUT, {"runs": table})
    salts = analyse(read_campaign(folder)).salts
    inside = (salts["interval_low"] <= truth.standard_enthalpy) & (truth.standard_enthalpy <= salts["interval_high"])
    return inside.to_numpy(), (salts["standard_enthalpy"] - truth.standard_enthalpy).to_numpy()


@pytest.mark.study
@pytest.mark.parametrize(
    ("runs", "molality", "batches", "declared"),
    [(8, (0.01, 1.0), 0, True), (8, (0.01, 1.0), 0, False), (9, (0.01, 1.0), 3, True), (4, (0.05, 0.5), 0, True)],
    ids=["declared", "no u", "three batches", "four runs"],
)
def test_intervals_of_480_salts_cover(tmp_path, population, runs, molality, batches, declared):
    rng = np.random.default_rng(runs + 10 * batches + declared)
    names = rng.choice(many_salts(3_000, {"1-1", "2-1", "1-2"}), 480, replace=False)
    truth = draw_truth(names, population, rng, JITTER)
    table = enthalpy_rows(truth, runs, molality, SD, rng, declared)
    if batches:
        table = with_batches(table, runs, batches, 2 * SD, rng)
    inside, error = covered(tmp_path / "c", truth, table)
    rms = np.sqrt(np.mean(error**2))
    print(f"\n{runs} runs, {batches} batches, declared {declared}: {inside.mean():.3f}, rms error {rms:.4f}")
    assert 0.92 <= inside.mean() <= 0.98 + 0.012  # a campaign's slope is common: two binomial standard errors more


@pytest.mark.study
@pytest.mark.parametrize(("salts", "runs", "batches"), [(3, 5, 0), (1, 8, 0), (2, 9, 3)])
def test_small_campaigns_without_stated_u_cover(tmp_path, population, salts, runs, batches):
    inside = []
    for i in range(60):
        rng = np.random.default_rng((salts, runs, i))
        names = rng.choice(many_salts(800, {"1-1", "2-1"}), salts, replace=False)
        truth = draw_truth(names, population, rng, JITTER)
        table = enthalpy_rows(truth, runs, (0.02, 0.8), SD, rng, False)
        if batches:
            table = with_batches(table, runs, batches, 2 * SD, rng)
        inside += covered(tmp_path / str(i), truth, table)[0].tolist()
    print(f"\n{salts} salts x {runs} runs, {batches} batches: {np.mean(inside):.3f} of {len(inside)}")
    error = np.sqrt(0.95 * 0.05 / len(inside))
    assert 0.93 - 2 * error <= np.mean(inside) <= 0.98 + 2 * error


@pytest.mark.study
def test_the_error_is_near_that_of_one_who_knows_the_population(tmp_path, population):
    """Pooled over ten campaigns of 120 salts × 8 runs: below 1.16 times."""
    ours, best = [], []
    for seed in range(10):
        rng = np.random.default_rng(900 + seed)
        names = rng.choice(many_salts(2_000, {"1-1", "2-1"}), 120, replace=False)
        truth = draw_truth(names, population, rng, JITTER)
        table = enthalpy_rows(truth, 8, (0.01, 1.0), SD, rng)
        ours.append(covered(tmp_path / str(seed), truth, table)[1])
        best.append(knowing(truth, table, population) - truth.standard_enthalpy)
    ratio = np.sqrt(np.mean(np.square(ours)) / np.mean(np.square(best)))
    print(f"\nrms error over that of the estimate that knows the population: {ratio:.3f}")
    assert ratio < 1.16


def knowing(truth, table, population):
    """Posterior mean of each salt's limit under the very mixture that its truth was drawn from."""
    what = electrolytes([read_salt(s) for s in truth.salts])
    out = []
    molality = table["molality / (mol/kg)"].to_numpy().reshape(len(truth.salts), -1)
    value = table["enthalpy / (kJ/mol)"].to_numpy().reshape(molality.shape)
    slope = float(water.debye_hueckel_slope(298.15))
    for i, (m, y) in enumerate(zip(molality, value, strict=True)):
        one = what.composition.of(np.full(len(m), what.of_salt[i]))
        law = limiting_law(m, one.charge_factor, slope)
        terms = empirical_terms(m, np.full(len(m), 298.15), one)
        estimate, evidence = [], []
        for center in population[what.charge_type[what.of_salt[i]]]:
            v = SD**2 * np.eye(len(m)) + (terms * (JITTER * center) ** 2) @ terms.T + np.outer(0.007 * law, 0.007 * law)
            inverse = np.linalg.inv(v)
            left = y - law - terms @ center
            weight = inverse.sum()
            limit = (inverse @ left).sum() / weight
            estimate.append(limit)
            misfit = (left - limit) @ inverse @ (left - limit)
            evidence.append(-0.5 * (np.linalg.slogdet(v)[1] + np.log(weight) + misfit))
        chance = np.exp(np.array(evidence) - max(evidence))
        out.append(chance @ np.array(estimate) / chance.sum())
    return np.array(out)
