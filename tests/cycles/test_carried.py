"""Standard enthalpies carried to the temperature of the tables."""

import numpy as np
import pytest
from scipy import sparse

from reconcile.chemistry import read_salt
from reconcile.dilution import HeatCapacityChange, at_the_tables_temperature
from reconcile.statistics import Sources, stated

CHANGE = HeatCapacityChange(np.array([-134.0]), np.array([5.0]), np.array([True]))


def carried(temperature, sources=False):
    ledger = stated(np.array([1.45]), np.array([0.1]), "runs")
    if sources:  # runs of 298.15 K brought to the reference temperature with the same ΔsolCp°
        away = temperature - 298.15
        load = sparse.csr_array(np.array([[5.0 * away / 1000]]))
        ledger = ledger.with_sources(
            load, Sources(("ΔsolCp° of NaCl",), ("stated",), ("heat capacity of dissolution",))
        )
    return at_the_tables_temperature(ledger, [read_salt("NaCl")], CHANGE, temperature)


def test_by_hand():
    found = carried(317.45)
    assert found.value[0] == pytest.approx(1.45 + 0.134 * 19.3)
    assert found.u[0] == pytest.approx(np.sqrt(0.1**2 + (0.005 * 19.3) ** 2 + (2.0 * 19.3**2 / 2000) ** 2))


def test_there_already():
    assert carried(298.15).u[0] == pytest.approx(0.1)


def test_the_way_there_and_back_costs_nothing():
    found = carried(317.45, sources=True)
    assert found.budget(0)["heat capacity of dissolution"] == pytest.approx(2.0 * 19.3**2 / 2000)


def test_a_value_at_44_degrees_is_not_compared_with_one_at_25(analysed):
    import pandas as pd

    runs = pd.DataFrame(
        {
            "run": ["a", "b"], "salt": "NaCl", "temperature / K": 317.45, "molality / (mol/kg)": [0.1, 0.2],
            "enthalpy / (kJ/mol)": [1.9, 2.0], "u(enthalpy) / (kJ/mol)": 0.05,
        }
    )  # fmt: skip
    found = analysed(runs, '[campaign]\nreference_temperature = "317.45 K"\n')
    assert abs(found.salts["standard_enthalpy"][0] - 1.5) < 0.3  # still at the reference temperature
    assert abs(found.comparison["difference"][0]) < 0.5
    assert found.comparison["verdict"][0] == "satisfactory"
    assert found.cycles["verdict"][0] == "closes"
    assert (found.bias["p_adjusted"] > 0.05).all()
