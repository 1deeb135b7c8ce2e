"""Published series of enthalpies of solution and of dilution through the whole chain."""

import numpy as np
import pandas as pd
import pytest

from reconcile.campaign import read_campaign, write_campaign
from reconcile.pipeline import analyse

# D. D. Wagman et al., The NBS Tables of Chemical Thermodynamic Properties, J. Phys. Chem. Ref. Data 11 (1982):
# enthalpy of formation of HCl in n H2O less that of the gas, mol/kg and kJ/mol; from memory but for the limit, read.
HCL = [
    (0.74011, -73.417), (0.55508, -73.618), (0.27754, -73.965), (0.18503, -74.116), (0.13877, -74.199),
    (0.11102, -74.266), (0.05551, -74.425), (0.02775, -74.542), (0.01110, -74.647), (0.00555, -74.701),
    (0.00111, -74.785),
]  # fmt: skip
HCL_LIMIT = -74.852

# D. Hellali et al., Thermochim. Acta 543 (2012) 178: AgNO3 in water, 298 K, mol/L and kJ/mol, two calorimeters, each
# with the standard uncertainty that it states. Below 0.1 mol/L a concentration over water's density is the
# molality within 0.4 %.
AGNO3 = [
    (0.0026, 20.87, 0.67, "isoperibol"), (0.0033, 21.47, 0.67, "isoperibol"), (0.0041, 22.02, 0.67, "isoperibol"),
    (0.0054, 22.80, 0.67, "isoperibol"), (0.0074, 21.88, 0.16, "Calset"), (0.0129, 21.90, 0.16, "Calset"),
    (0.0219, 20.53, 0.16, "Calset"), (0.0295, 21.87, 0.16, "Calset"), (0.0315, 20.51, 0.16, "Calset"),
    (0.0317, 22.25, 0.16, "Calset"), (0.0546, 22.15, 0.16, "Calset"), (0.0583, 21.63, 0.16, "Calset"),
    (0.0704, 22.28, 0.16, "Calset"), (0.0898, 22.26, 0.16, "Calset"),
]  # fmt: skip

# W. H. Leung, F. J. Millero, J. Chem. Thermodyn. 7 (1975) 1067, Table 1: heats of dilution at 303.15 K, first and final
# molality / (mol/kg), kJ/mol (cal_th × 4.184e-3); the authors give ±2 cal_th/mol.
DILUTIONS = {
    "RbCl": (
        1.03489,
        [
            (0.81425, 0.12456),
            (0.69369, 0.19062),
            (0.61731, 0.23907),
            (0.51743, 0.28568),
            (0.40801, 0.35058),
            (0.21020, 0.41275),
        ],
    ),
    "CsCl": (
        0.95760,
        [
            (0.63514, 0.23246),
            (0.56944, 0.28137),
            (0.48557, 0.35790),
            (0.38358, 0.41007),
            (0.32029, 0.46062),
            (0.26319, 0.49974),
        ],
    ),
    "NaF": (
        0.91521,
        [
            (0.73052, 0.01205),
            (0.61869, 0.01393),
            (0.55679, 0.01100),
            (0.55636, 0.00962),
            (0.45783, -0.00067),
            (0.36280, -0.01766),
            (0.30743, -0.03841),
            (0.20729, -0.08929),
        ],
    ),
    "NaBr": (
        1.07783,
        [
            (0.86098, 0.14284),
            (0.73762, 0.22447),
            (0.72287, 0.23322),
            (0.63274, 0.28338),
            (0.36742, 0.42413),
            (0.35213, 0.43468),
            (0.26169, 0.45693),
        ],
    ),
    "NaI": (
        1.12909,
        [
            (0.92895, 0.14753),
            (0.68088, 0.32886),
            (0.53726, 0.42284),
            (0.43183, 0.48225),
            (0.37184, 0.51593),
            (0.26223, 0.56430),
            (0.23125, 0.56681),
        ],
    ),
}
AUTHORS = 0.0084  # kJ/mol, ±2 cal_th


def analysed(folder, toml, rows):
    write_campaign(folder, toml, {"runs": rows})
    return analyse(read_campaign(folder))


@pytest.mark.parametrize("published", [True, False])
def test_hydrogen_chloride_goes_back_to_its_limit(tmp_path, published):
    rows = pd.DataFrame(HCL, columns=["molality / (mol/kg)", "enthalpy / (kJ/mol)"]).assign(salt="HCl")
    toml = f"[analysis]\npublished_dilution = {str(published).lower()}\n"
    row = analysed(tmp_path, toml, rows).salts.iloc[0]
    rounding = 0.005
    assert row["interval_low"] - rounding < HCL_LIMIT < row["interval_high"] + rounding
    assert row["standard_enthalpy"] == pytest.approx(HCL_LIMIT, abs=0.02)


def test_silver_nitrate_lives_with_its_scatter_not_with_its_statement(tmp_path):
    columns = ["c", "enthalpy / (kJ/mol)", "u(enthalpy) / (kJ/mol)", "calorimeter"]
    rows = pd.DataFrame(AGNO3, columns=columns).assign(salt="AgNO3")
    rows["molality / (mol/kg)"] = rows.pop("c") / 0.99705  # kg/L, water at 298.15 K, from memory
    found = analysed(tmp_path, None, rows)
    row = found.salts.iloc[0]
    own = rows["enthalpy / (kJ/mol)"][4:].std()  # 0.64 of the ten runs that state 0.16
    assert row["u"] > 0.5 * own / np.sqrt(14)
    assert row["u"] > 2 * 0.16 / np.sqrt(10)
    assert (found.assumptions["text"].str.contains("scatter beyond the statement")).any()
    assert found.budget.iloc[0]["source"] == "scatter beyond the statement"


@pytest.mark.parametrize("salt", list(DILUTIONS))
def test_heats_of_dilution_agree_with_the_published_parameters(tmp_path, salt):
    """The published set of 298.15 K carried to 303.15 K does not contradict the heats, and the heats are followed."""
    start, series = DILUTIONS[salt]
    rows = pd.DataFrame(series, columns=["final_molality / (mol/kg)", "enthalpy / (kJ/mol)"]).assign(salt=salt)
    rows = rows.assign(role="dilution", **{"initial_molality / (mol/kg)": start, "u(enthalpy) / (kJ/mol)": AUTHORS})
    # one dissolution that says nothing (u = 50 kJ/mol), for a crystal to stand in the table
    nothing = {
        "salt": salt,
        "role": "sample",
        "molality / (mol/kg)": 0.1,
        "enthalpy / (kJ/mol)": 0.0,
        "u(enthalpy) / (kJ/mol)": 50.0,
    }
    rows = pd.concat([rows, pd.DataFrame([nothing])], ignore_index=True).assign(**{"temperature / K": 303.15})
    found = analysed(tmp_path, '[campaign]\nreference_temperature = "303.15 K"\n', rows)
    row = found.salts.iloc[0]
    assert row["dilution_model"] == "published parameters"
    assert row["prior_conflict_p"] > 0.01
    limits = found.dilution.extrapolation
    assert np.abs(limits.fit.residual[: len(series)]).max() < 3 * AUTHORS
