"""Every sensitivity of a reduced run against a finite difference of the campaign as it is typed."""

from dataclasses import replace

import numpy as np
import pandas as pd
import pytest

from reconcile import read_campaign
from reconcile.calorimetry import reduce_runs
from reconcile.campaign.writing import write_campaign

STEP = 1e-5  # relative


def tables():
    """A hydrate of stated purity, a wet lot of no stated purity, a salt without lot, a value reduced elsewhere."""
    runs = pd.DataFrame(
        {
            "run": ["hydrate", "wet", "plain", "given"],
            "sample": ["H", "W", "", ""],
            "salt": ["", "", "KCl", "KCl"],
            "calorimeter": ["A", "A", "B", ""],
            "mass / g": [4.0, 1.5, 1.2, np.nan],
            "u(mass) / g": [0.003, 0.002, 0.001, np.nan],
            "water / g": [100.0, 90.0, 80.0, np.nan],
            "u(water) / g": [0.05, 0.04, 0.03, np.nan],
            "heat / J": [270.0, -1100.0, 285.0, np.nan],
            "u(heat) / J": [0.8, 2.0, 0.7, np.nan],
            "molality / (mol/kg)": [np.nan, np.nan, np.nan, 0.2],
            "u(molality) / (mol/kg)": [np.nan, np.nan, np.nan, 0.001],
            "enthalpy / (kJ/mol)": [np.nan, np.nan, np.nan, 17.6],
            "u(enthalpy) / (kJ/mol)": [np.nan, np.nan, np.nan, 0.03],
        }
    )
    samples = pd.DataFrame(
        {
            "sample": ["H", "W"], "salt": ["CaCl2·6H2O", "CaCl2"],
            "mass_fraction": [0.99, np.nan], "u(mass_fraction)": [0.002, np.nan],
            "water": [0.004, 0.03], "u(water)": [0.001, 0.002],
        }
    )  # fmt: skip
    calorimeters = pd.DataFrame(
        {"calorimeter": ["A", "B"], "parasitic_heat / J": [1.5, -0.5], "u(parasitic_heat) / J": [0.2, 0.1]}
    )
    return {"runs": runs, "samples": samples, "calorimeters": calorimeters}


@pytest.fixture
def reduced(tmp_path):
    number = iter(range(100))

    def make(**changed):
        folder = tmp_path / str(next(number))
        write_campaign(folder, None, {**tables(), **changed})
        campaign = read_campaign(folder)
        return campaign, reduce_runs(campaign)

    return make


def difference(reduced, table, column, row, step):
    """Change of both quantities of all runs per unit of one cell."""
    ends = []
    for sign in (1, -1):
        frame = tables()[table]
        frame.loc[row, column] += sign * step
        _, runs = reduced(**{table: frame})
        ends.append(np.array([runs.enthalpy.value, runs.molality.value]))
    return (ends[0] - ends[1]) / (2 * step)


PRIVATE = {
    ("heat", "heat / J"): "u(heat) / J",
    ("weighing of the salt", "mass / g"): "u(mass) / g",
    ("weighing of the water", "water / g"): "u(water) / g",
    ("enthalpy as given", "enthalpy / (kJ/mol)"): "u(enthalpy) / (kJ/mol)",
    ("molality as given", "molality / (mol/kg)"): "u(molality) / (mol/kg)",
}


@pytest.mark.parametrize(("line", "column"), list(PRIVATE))
def test_private_errors(reduced, line, column):
    _, base = reduced()
    frame = tables()["runs"]
    used = 0
    for row in np.flatnonzero(frame[column].notna()):
        u = frame.loc[row, PRIVATE[line, column]]
        change = difference(reduced, "runs", column, row, STEP * abs(frame.loc[row, column])) * u
        for ledger, expected in zip((base.enthalpy, base.molality), change, strict=True):
            found = ledger.private[:, ledger.lines.index(line)]
            assert found[row] == pytest.approx(expected[row], rel=1e-5, abs=1e-12)
        assert np.abs(np.delete(change, row, axis=1)).max() < 1e-9  # a cell of a run is that run's
        used += 1
    assert used


@pytest.mark.parametrize(
    ("table", "column", "row", "source"),
    [
        ("samples", "mass_fraction", 0, "lot H: mass fraction"),
        ("samples", "water", 0, "lot H: water"),
        ("samples", "water", 1, "lot W: water"),  # its mass fraction is 1 − water: both go
        ("calorimeters", "parasitic_heat / J", 0, "calorimeter A: parasitic heat"),
        ("calorimeters", "parasitic_heat / J", 1, "calorimeter B: parasitic heat"),
    ],
)
def test_shared_sources(reduced, table, column, row, source):
    _, base = reduced()
    frame = tables()[table]
    name, _, unit = column.partition(" / ")
    u = frame.loc[row, f"u({name}) / {unit}" if unit else f"u({name})"]
    change = difference(reduced, table, column, row, STEP) * u
    for ledger, expected in zip((base.enthalpy, base.molality), change, strict=True):
        found = ledger.loading.toarray()[:, ledger.sources.name.index(source)]
        np.testing.assert_allclose(found, expected, rtol=1e-5, atol=1e-12)
    assert np.abs(change).max() > 0


@pytest.mark.parametrize("element", ["Ca", "Cl", "H", "O", "K"])
def test_atomic_weights(reduced, element):
    "The molar mass of the formula as weighed; that of the solvent is the same for all and held."
    campaign, base = reduced()
    name = f"atomic weight of {element}"
    assert name in base.enthalpy.sources.name
    atoms = np.array([dict(s.elements).get(element, 0.0) for s in campaign.salts])
    ends = []
    step = 1e-4
    for sign in (1, -1):
        salts = tuple(
            replace(s, molar_mass=s.molar_mass + sign * step * a) for s, a in zip(campaign.salts, atoms, strict=True)
        )
        runs = reduce_runs(replace(campaign, salts=salts))
        ends.append(np.array([runs.enthalpy.value, runs.molality.value]))
    change = (ends[0] - ends[1]) / (2 * step)
    position = base.enthalpy.sources.name.index(name)
    loading = np.array([ledger.loading.toarray()[:, position] for ledger in (base.enthalpy, base.molality)])
    u = loading[0, np.argmax(np.abs(change[0]))] / change[0, np.argmax(np.abs(change[0]))]
    assert 0 < u < 0.02  # IUPAC 2021: hundredths at most for these (Ca 0.004, Cl 0.01)
    np.testing.assert_allclose(loading, change * u, rtol=1e-4, atol=1e-12)


def test_values_by_hand(reduced):
    "Heat less the parasitic one, over the moles of the formula; water of crystal and lot is solvent."
    _, runs = reduced()
    mole = 4.0 * 0.99 / 219.075  # CaCl2·6H2O, IUPAC 2021 (from memory)
    assert runs.enthalpy.value[0] == pytest.approx((270 - 1.5) / mole / 1000, rel=1e-4)
    assert runs.molality.value[0] == pytest.approx(1000 * mole / (100 + 6 * 18.015 * mole + 4 * 0.004), rel=1e-4)
    assert runs.amount[1] == pytest.approx(1.5 * 0.97 / 110.98, rel=1e-4)
    assert runs.enthalpy.value[3] == 17.6
    assert np.isnan(runs.amount[3])


def test_nothing_stated_and_a_stated_zero_are_left_to_the_scatter(reduced):
    frame = tables()["runs"]
    frame["u(heat) / J"] = [0.8, 0.0, np.nan, np.nan]
    frame["u(enthalpy) / (kJ/mol)"] = [np.nan, np.nan, np.nan, 0.0]
    _, runs = reduced(runs=frame)
    assert runs.unstated.tolist() == [False, True, True, True]
