"""Parker's relative apparent molar enthalpies of NaCl, as if they were runs: back to her value at infinite dilution.

V. B. Parker, Thermal Properties of Aqueous Uni-univalent Electrolytes, NSRDS-NBS 2 (1965), Table XIV A, up to 1
mol/kg: smoothed best values in whole calories, so the rounding is what there is of error.
"""

import numpy as np
import pandas as pd
import pytest

CALORIE = 4.184e-3  # kJ, thermochemical
PARKER = 3.88  # kJ/mol
ROUNDING = CALORIE / np.sqrt(12)  # of a whole calorie, standard uncertainty
TABLE = """
    0.000111 5   0.000555 11  0.00111 14  0.00278 22  0.00555 31  0.00793 37  0.01110 42  0.01388 46  0.01850 51
    0.02775 59   0.03700 64   0.05000 71  0.05551 73  0.0617 75   0.0694 78   0.0793 80   0.0925 83   0.1000 84
    0.1110 85    0.1388 87    0.1850 88   0.2000 87   0.2775 83   0.3700 74   0.5000 57   0.5551 49   0.7401 20
    1.0000 -23"""  # molality / (mol/kg), L_φ / (cal/mol)


def as_runs():
    molality, calories = np.array(TABLE.split(), float).reshape(-1, 2).T
    return pd.DataFrame(
        {
            "run": [f"P{i + 1:02d}" for i in range(len(molality))],
            "salt": "NaCl",
            "molality / (mol/kg)": molality,
            "enthalpy / (kJ/mol)": PARKER + CALORIE * calories,
        }
    )


@pytest.mark.parametrize("declared", [True, False])
def test_back_to_infinite_dilution_without_published_parameters(analysed, declared):
    runs = as_runs()
    if declared:
        runs["u(enthalpy) / (kJ/mol)"] = ROUNDING
    salt = analysed(runs, "[analysis]\npublished_dilution = false\n").salts.iloc[0]
    assert salt["standard_enthalpy"] == pytest.approx(PARKER, abs=0.005)
    half_a_calorie = CALORIE / 2  # an entry of the table is no better, and its neighbours were smoothed with it
    assert salt["interval_low"] - half_a_calorie < PARKER < salt["interval_high"] + half_a_calorie
    assert salt["dilution_model"] == "population"


def test_lines_would_have_missed():
    "4.134 in m and 4.107 in √m, unweighted: fifty times our error."
    runs = as_runs()
    m, enthalpy = runs["molality / (mol/kg)"].to_numpy(), runs["enthalpy / (kJ/mol)"].to_numpy()
    assert np.polyfit(m, enthalpy, 1)[1] == pytest.approx(4.134, abs=0.002)
    assert np.polyfit(np.sqrt(m), enthalpy, 1)[1] == pytest.approx(4.107, abs=0.002)
