"""Simulated runs are what their truth says, with the errors that were asked for."""

import numpy as np
import pandas as pd
import pytest

from reconcile.chemistry import water
from reconcile.simulation.demo import GAIN, LOT_WATER, SPOILT, demo, demo_truth
from reconcile.simulation.truth import Truth, draw_truth, enthalpy_rows, heat_rows

SALTS = ("KCl", "CaCl2", "CaCl2·6H2O")
PLAIN = Truth(SALTS, np.array([17.2, -81.3, 14.0]), np.zeros((3, 4)))


def test_the_limit_and_the_limiting_law():
    salt = np.array([0, 1])
    assert PLAIN.enthalpy(salt, np.full(2, 1e-12)) == pytest.approx([17.2, -81.3], abs=1e-4)
    rise = PLAIN.enthalpy(salt, np.full(2, 1e-6)) - [17.2, -81.3]
    assert rise == pytest.approx(float(water.debye_hueckel_slope(298.15)) * np.array([1, 3**1.5]) * 1e-3, rel=5e-3)


def test_draws_are_of_the_charge_type_and_repeatable():
    sets = {"1-1": np.full((1, 4), 1.0), "2-1": np.full((1, 4), 5.0)}
    first, again = (draw_truth(SALTS, sets, np.random.default_rng(3), jitter=0.01) for _ in range(2))
    np.testing.assert_array_equal(first.parameters, again.parameters)
    np.testing.assert_allclose(first.parameters[0], 1.0, atol=0.05)
    np.testing.assert_allclose(first.parameters[1], 5.0, atol=0.25)
    np.testing.assert_array_equal(first.parameters[1], first.parameters[2])  # one solution
    assert first.slope_factor != 1.0


def test_rows_scatter_as_asked_and_carry_the_gain():
    truth = Truth(SALTS, PLAIN.standard_enthalpy, PLAIN.parameters, gain={"B": -0.01})
    table = enthalpy_rows(truth, 400, (0.01, 0.5), 0.05, np.random.default_rng(1), True, ("A", "B"))
    salt = np.array([SALTS.index(s) for s in table["salt"]])
    ideal = PLAIN.enthalpy(salt, table["molality / (mol/kg)"].to_numpy())
    gain = np.where(table["calorimeter"].eq("B"), 0.99, 1.0)
    left = table["enthalpy / (kJ/mol)"] - gain * ideal
    assert left.std() == pytest.approx(0.05, rel=0.08)
    assert left.mean() == pytest.approx(0, abs=0.006)
    assert table["run"].is_unique
    assert "u(enthalpy) / (kJ/mol)" not in enthalpy_rows(truth, 2, (0.1, 0.2), 0.05, np.random.default_rng(1), False)


def test_heats_and_masses_give_back_the_truth(analysed):
    "Without any error the reduced run is the truth at its molality; hydrate and wet lot bring their water."
    molality = np.array([0.05, 0.2, 0.1, 0.4])
    which = {"a": "KCl", "b": "CaCl2", "c": "CaCl2·6H2O"}
    sample = ["a", "b", "c", "c"]
    rng = np.random.default_rng(1)
    runs = heat_rows(PLAIN, sample, which, ["A"] * 4, molality, np.full(4, 100.0), 0.0, 0.0, 0.0, rng)
    runs.insert(0, "run", list("1234"))
    runs["u(heat) / J"] = 0.1
    samples = pd.DataFrame({"sample": list(which), "salt": list(which.values())})
    found = analysed(runs, samples=samples, calorimeters=pd.DataFrame({"calorimeter": ["A"]}))
    assert found.reduced.molality.value == pytest.approx(molality, rel=2e-3)  # masses to 0.1 mg
    ideal = PLAIN.enthalpy(np.array([0, 1, 2, 2]), found.reduced.molality.value)
    assert found.reduced.enthalpy.value == pytest.approx(ideal, rel=2e-4)


def test_three_per_cent_of_water_take_three_per_cent_of_the_heat(analysed):
    truth = Truth(("CaCl2",), np.array([-81.3]), np.zeros((1, 4)), lot_water={"wet": 0.03})
    sample = ["dry", "wet"]
    rng = np.random.default_rng(1)
    both = {"dry": "CaCl2", "wet": "CaCl2"}
    runs = heat_rows(truth, sample, both, ["A"] * 2, np.full(2, 0.1), np.full(2, 100.0), 0.0, 0.0, 0.0, rng)
    runs.insert(0, "run", ["1", "2"])
    samples = pd.DataFrame({"sample": sample, "salt": "CaCl2"})
    found = analysed(runs, samples=samples, calorimeters=pd.DataFrame({"calorimeter": ["A"]})).reduced.enthalpy.value
    assert found[1] / found[0] == pytest.approx(0.97, abs=2e-4)  # nobody stated it


def test_the_demo_is_always_the_same_and_says_that_it_is_invented():
    (toml, tables), (again, same) = demo(), demo()
    assert toml == again
    assert all(tables[name].equals(same[name]) for name in tables)
    assert "invented" in toml.lower()
    assert set(tables) == {"runs", "samples", "calorimeters"}
    assert len(demo_truth().salts) == 10


def test_the_demo_finds_what_was_planted(analysed):
    toml, tables = demo()
    analysis = analysed(tables["runs"], toml, samples=tables["samples"], calorimeters=tables["calorimeters"])
    found = analysis.bias[analysis.bias["p_adjusted"] < 0.05].set_index(["hypothesis", "subject"])
    (calorimeter, gain), (lot, water_part) = *GAIN.items(), *LOT_WATER.items()
    assert found.loc[("gain", calorimeter), "interval_low"] < gain < found.loc[("gain", calorimeter), "interval_high"]
    assert found.loc[("lot water", lot), "interval_low"] < water_part < found.loc[("lot water", lot), "interval_high"]
    runs = tables["runs"]
    spoilt = runs.loc[np.flatnonzero(runs["sample"].eq(SPOILT[0]))[SPOILT[1]], "run"]
    assert ("run", spoilt) in found.index
    assert [subject for hypothesis, subject in found.index if hypothesis == "reference" and subject.startswith("KBr")]
    assert len(found) == 4  # and nothing else
    # what becomes of the table: the wet lot's salt moves back to the truth
    salts = analysis.salts.set_index("salt")
    truth = dict(zip(demo_truth().salts, demo_truth().standard_enthalpy, strict=True))
    before = salts.loc["CaCl2", "standard_enthalpy"] - truth["CaCl2"]
    after = salts.loc["CaCl2", "standard_enthalpy_without_suspects"] - truth["CaCl2"]
    assert abs(after) < 0.5 * abs(before)
