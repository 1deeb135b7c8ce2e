"""Planted faults are found by their name and with their size; the account over runs and cycles is the joint one."""

import numpy as np
import pandas as pd
import pytest
from scipy import sparse

from reconcile import reference
from reconcile.bias.evidence import correlation, evidence, partial, units, without
from reconcile.chemistry import water
from reconcile.dilution import published_sets
from reconcile.simulation.truth import Truth, enthalpy_rows, heat_rows

SALTS = ("KCl", "NaCl", "KBr", "NaNO3", "NH4Cl", "KNO3", "KI", "RbCl")
CALORIMETERS = pd.DataFrame({"calorimeter": ["A", "B"]})


def truth_of(salts=SALTS, **faults):
    """Published values taken as exact: what is planted is all that is wrong."""
    sets = published_sets(reference.dilution_parameters(), float(water.debye_hueckel_slope(298.15)))
    parameters = np.nan_to_num([sets.scaled[sets.electrolyte.index(s)] for s in salts])
    return Truth(tuple(salts), reference.solution_enthalpies(salts)["value"].to_numpy(float), parameters, **faults)


def rows_of(truth, seed=1, runs=12, u=0.03, declared=True):
    return enthalpy_rows(truth, runs, (0.02, 0.6), u, np.random.default_rng(seed), declared, ("A", "B"))


@pytest.mark.parametrize("declared", [True, False])
def test_a_gain_of_one_calorimeter(analysed, declared):
    found = analysed(rows_of(truth_of(gain={"B": -0.012}), declared=declared), calorimeters=CALORIMETERS).bias
    first = found.iloc[0]
    assert (first["hypothesis"], first["subject"], first["unit"]) == ("gain", "B", "1")
    assert first["p_adjusted"] < 0.01
    assert first["interval_low"] < -0.012 < first["interval_high"]
    assert first["u"] < 0.002
    assert "calorimeters" in first["rests_on"]


def test_size_of_a_large_gain_is_as_it_is_defined(analysed):
    "measured = (1 + size) × true, not the linear estimate: at −20 % they differ by 0.05."
    found = analysed(rows_of(truth_of(gain={"B": -0.2}), u=0.02), calorimeters=CALORIMETERS).bias
    gain = found[found["hypothesis"].eq("gain") & found["subject"].eq("B")].iloc[0]
    assert gain["size"] == pytest.approx(-0.2, abs=0.01)


def test_a_spoilt_run(analysed):
    runs = rows_of(truth_of(), declared=True)
    runs.loc[20, "enthalpy / (kJ/mol)"] -= 0.6
    found = analysed(runs, calorimeters=CALORIMETERS).bias
    first = found.iloc[0]
    assert (first["hypothesis"], first["subject"]) == ("run", runs.loc[20, "run"])
    assert first["size"] == pytest.approx(-0.6, abs=4 * first["u"])
    assert first["p_adjusted"] < 0.001
    assert (found["p_adjusted"] < 0.05).sum() == 1


def test_a_wrong_reference_value(analysed):
    runs = rows_of(truth_of(SALTS[:4]))
    toml = """[[reference]]
quantity = "enthalpy of solution"
species = "KBr"
value = "21.87 kJ/mol"
u = "0.1 kJ/mol"
source = "a slip of the pen"
"""
    first = analysed(runs, toml, calorimeters=CALORIMETERS).bias.iloc[0]
    assert first["hypothesis"] == "reference"
    assert first["subject"].startswith("KBr")
    assert first["size"] == pytest.approx(2.0, abs=4 * first["u"])  # 19.87 is right
    assert first["rests_on"] == ("cycles",)


def test_water_in_a_lot_is_told_where_another_lot_stands_beside_it(analysed):
    sample = ["dry"] * 8 + ["wet"] * 8
    truth = truth_of(("CaCl2",), lot_water={"wet": 0.03})
    rng = np.random.default_rng(4)
    molality = np.tile(np.geomspace(0.02, 0.3, 8), 2)
    which = {"dry": "CaCl2", "wet": "CaCl2"}
    runs = heat_rows(truth, sample, which, ["A"] * 16, molality, np.full(16, 100.0), 1e-4, 0.01, 0.002, rng)
    runs.insert(0, "run", [f"R{i}" for i in range(16)])
    runs["u(heat) / J"] = (0.002 * runs["heat / J"].abs()).round(3)
    samples = pd.DataFrame({"sample": ["dry", "wet"], "salt": ["CaCl2", "CaCl2"]})
    found = analysed(runs, samples=samples, calorimeters=CALORIMETERS.iloc[:1]).bias
    first = found[found["hypothesis"].eq("lot water")].iloc[0]
    assert first["subject"] == "wet"
    assert first["p_adjusted"] < 0.01
    assert first["interval_low"] < 0.03 < first["interval_high"]


def test_one_calorimeter_alone_says_that_it_rests_on_references(analysed):
    found = analysed(rows_of(truth_of()).assign(calorimeter="A"), calorimeters=CALORIMETERS.iloc[:1]).bias
    gain = found[found["hypothesis"].eq("gain")].iloc[0]
    assert gain["rests_on"] == ("references",)


def test_two_calorimeters_that_only_differ_are_one_row(analysed):
    "Without references the gain of A is that of B with the other sign."
    salts = ("KReO4", "RbReO4")
    truth = Truth(salts, np.array([57.7, 60.0]), np.zeros((2, 4)), gain={"B": -0.02})
    found = analysed(rows_of(truth), calorimeters=CALORIMETERS).bias
    gains = found[found["hypothesis"].eq("gain")]
    assert len(gains) == 1
    assert gains.iloc[0]["rests_on"] == ("calorimeters",)
    assert abs(gains.iloc[0]["size"]) == pytest.approx(0.02, abs=0.004)


def test_columns_and_order(analysed):
    found = analysed(rows_of(truth_of(SALTS[:3]), runs=4), calorimeters=CALORIMETERS).bias
    assert {"statistic", "degrees_of_freedom", "smallest_detectable", "confounded_with"} <= set(found.columns)
    assert found["p_value"].is_monotonic_increasing
    assert (found["p_adjusted"] >= found["p_value"] - 1e-12).all()
    told = found[found["u"].notna()]
    assert (told["smallest_detectable"] > 3 * told["u"]).all()


def test_runs_and_cycles_together_are_one_dense_problem(analysed):
    "Scores and information add up to those of a single generalised least-squares problem of runs and references."
    analysis = analysed(rows_of(truth_of(SALTS[:4]), runs=5), calorimeters=CALORIMETERS)
    dilution, adjusted = analysis.dilution, analysis.adjusted
    fit, net = dilution.extrapolation.fit, adjusted.network
    crystals, rows, references = dilution.extrapolation.problem.crystals, len(fit.weight), len(net.references)

    rng = np.random.default_rng(2)
    on_runs = np.vstack(
        [rng.normal(size=(len(dilution.layout.row), 2)), np.zeros((rows - len(dilution.layout.row), 2))]
    )
    on_runs = np.column_stack([on_runs, np.zeros((rows, 2))])
    on_references = np.zeros((len(adjusted.fit.weight), 4))
    on_references[crystals, 2] = on_references[-1, 3] = 1.0
    found = evidence(dilution, adjusted, sparse.csr_array(on_runs), sparse.csr_array(on_references))

    hess = net.design.toarray()[:crystals]  # crystals from the unknowns of the cycles
    design = fit.inner[:, : fit.unknowns]  # no narrow source among them: those columns stand behind
    whole = np.zeros((rows + references, hess.shape[1] + fit.unknowns - crystals))
    whole[:rows, : hess.shape[1]] = design[:, :crystals] @ hess
    whole[:rows, hess.shape[1] :] = design[:, crystals:]
    whole[rows:, : hess.shape[1]] = net.design.toarray()[crystals:]
    v = np.zeros((rows + references,) * 2)
    width = dilution.extrapolation.crystals.private[
        :, dilution.extrapolation.crystals.lines.index("width of the population")
    ]
    of_crystal = design[:, :crystals] * width
    v[:rows, :rows] = fit.observations.covariance() + of_crystal @ of_crystal.T
    v[rows:, rows:] = net.observed.covariance()[crystals:, crystals:]
    y = np.concatenate([fit.observations.value, net.observed.value[crystals:]])
    inverse = np.linalg.inv(v)
    p = inverse - inverse @ whole @ np.linalg.pinv(whole.T @ inverse @ whole) @ whole.T @ inverse
    a = np.vstack([on_runs, on_references[crystals:]])
    # the network's measured values lack what the limits share with the references: nothing
    np.testing.assert_allclose(found.information, a.T @ p @ a, rtol=1e-5, atol=1e-6 * np.abs(found.information).max())
    np.testing.assert_allclose(found.score, a.T @ p @ y, rtol=1e-4, atol=1e-5 * np.abs(found.score).max())

    # and given another hypothesis: the Schur complement
    score, information = partial(found, [1])
    full = a.T @ p @ a
    assert information[0] == pytest.approx(full[0, 0] - full[0, 1] ** 2 / full[1, 1], rel=1e-4)
    assert score[0] == pytest.approx((a.T @ p @ y)[0] - full[0, 1] / full[1, 1] * (a.T @ p @ y)[1], rel=1e-3)
    change, variance = without(found, [0])
    assert (variance >= 0).all()
    assert change == pytest.approx(-found.shift[:, 0] * found.score[0] / found.information[0, 0])
    np.testing.assert_allclose(np.diag(correlation(found)), 1.0)


def test_units_are_single_observations():
    np.testing.assert_array_equal(units(np.array([2, 0]), 3).toarray(), [[0, 1], [0, 0], [1, 0]])
