"""Ten dilute runs of KCl to infinite dilution.

V. I. Smirnov, V. G. Badelin, Thermochim. Acta 606 (2015) 41, the check of an isoperibol calorimeter at 298.15 K;
molality in mol/kg, enthalpy in kJ/mol, u = 0.02 kJ/mol each (from the ThermoML archive).
"""

import numpy as np
import pandas as pd
import pytest

MOLALITY = [0.0081, 0.0113, 0.0120, 0.0139, 0.0184, 0.0198, 0.0215, 0.0412, 0.0434, 0.0509]
ENTHALPY = [17.435, 17.363, 17.375, 17.425, 17.442, 17.383, 17.463, 17.479, 17.506, 17.532]
PARKER = 17.22  # kJ/mol; Parker, NSRDS-NBS 2 (1965)

RUNS = pd.DataFrame(
    {
        "run": [f"KCl-{i + 1:02d}" for i in range(10)],
        "salt": "KCl",
        "molality / (mol/kg)": MOLALITY,
        "temperature / K": 298.15,
        "enthalpy / (kJ/mol)": ENTHALPY,
        "u(enthalpy) / (kJ/mol)": 0.02,
    }
)


@pytest.mark.parametrize("published", ["true", "false"])
@pytest.mark.parametrize("declared", [True, False])
def test_parker_lies_in_the_interval(analysed, published, declared):
    runs = RUNS if declared else RUNS.drop(columns="u(enthalpy) / (kJ/mol)")
    salt = analysed(runs, f"[analysis]\npublished_dilution = {published}\n").salts.iloc[0]
    assert salt["standard_enthalpy"] == pytest.approx(PARKER, abs=0.02)
    assert salt["interval_low"] < PARKER < salt["interval_high"]
    assert salt["u"] < 0.03  # ten runs of 0.02: the extrapolation of 0.05 mol/kg costs little


def test_free_lines_miss_by_more():
    "17.365 in m and 17.294 in √m."
    in_m, in_root = (np.polyfit(x, ENTHALPY, 1)[1] for x in (MOLALITY, np.sqrt(MOLALITY)))
    assert in_m == pytest.approx(17.365, abs=0.001)
    assert in_root == pytest.approx(17.294, abs=0.001)
    assert min(in_m, in_root) - PARKER > 0.07
