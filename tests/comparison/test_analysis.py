"""What becomes of the awkward campaigns: every table of the account is there, and nothing is silently wrong."""

import numpy as np
import pandas as pd
import pytest

from reconcile.dilution import NothingToFit

TABLES = (
    "salts", "runs", "bias", "reconciled", "references", "cycles", "comparison", "budget", "assumptions", "sources",
    "curves",
)  # fmt: skip


def few(*rows, u=0.05, **more):
    """Runs from (salt, molality, enthalpy)."""
    salt, molality, enthalpy = zip(*rows, strict=True)
    frame = pd.DataFrame(
        {
            "run": [f"R{i}" for i in range(len(rows))], "salt": salt, "molality / (mol/kg)": molality,
            "enthalpy / (kJ/mol)": enthalpy, **more,
        }
    )  # fmt: skip
    if u is not None:
        frame["u(enthalpy) / (kJ/mol)"] = u
    return frame


def whole(analysis):
    """All tables made, budgets adding up, intervals around their values."""
    for name in TABLES:
        assert isinstance(getattr(analysis, name), pd.DataFrame), name
    assert analysis.covariance.salts
    assert set(analysis.adjustment) == {"chi_square", "degrees_of_freedom", "p_value"}
    salts = analysis.salts.set_index("salt")
    budget = analysis.budget.assign(square=analysis.budget["contribution"] ** 2).groupby("salt")["square"].sum() ** 0.5
    for salt in salts.index[salts["u"].notna()]:
        assert budget[salt] == pytest.approx(salts.loc[salt, "u"], rel=0.01)
        assert salts.loc[salt, "interval_low"] < salts.loc[salt, "standard_enthalpy"] < salts.loc[salt, "interval_high"]
    assert len(analysis.runs) == len(analysis.campaign.runs)
    return salts


AWKWARD = {
    "one run": few(("KCl", 0.1, 17.5)),
    "an uncertainty of nothing": few(("KCl", 0.1, 17.5), ("KCl", 0.2, 17.6), ("KCl", 0.3, 17.6), u=0.0),
    "some stated": few(("KCl", 0.1, 17.5), ("KCl", 0.2, 17.6), ("KCl", 0.3, 17.6), u=[np.nan, 0.0, 0.05]),
    "three times the same": few(*[("KCl", 0.1, 17.5)] * 3, u=None),
    "double salt": few(("(NH4)2Fe(SO4)2·6H2O", 0.1, 40.0), ("(NH4)2Fe(SO4)2·6H2O", 0.2, 40.2)),
    "2-2 salt": few(*[("CuSO4·5H2O", m, h) for m, h in ((0.01, 10.5), (0.02, 10.9), (0.05, 11.5), (0.1, 12.0))]),
    "3-2 salt": few(("La2(SO4)3", 0.01, -100.0), ("La2(SO4)3", 0.02, -99.0), u=1.0),
    "hydrates": few(("CaCl2·6H2O", 0.1, 15.0), ("CaCl2·2H2O", 0.1, -45.0), ("CaCl2", 0.1, -80.0)),
    "no ion in the set": few(("NaReO4", 0.1, 20.0), ("NaReO4", 0.2, 20.1)),
    "hot": few(("KCl", 0.1, 13.0), ("KCl", 0.2, 13.1), **{"temperature / °C": [80.0, 80.0]}),
    "cold": few(("KCl", 0.1, 22.0), ("KCl", 0.2, 22.1), **{"temperature / °C": [0.5, 1.0]}),
    "as strong as it gets": few(("LiCl", 19.0, -20.0), ("LiCl", 10.0, -27.0)),
    "hardly any salt": few(("KCl", 1e-9, 17.3), ("KCl", 1e-5, 17.3)),
    "batches": few(
        *[("KCl", 0.1, 17.5), ("KCl", 0.2, 17.55), ("KCl", 0.1, 17.6), ("KCl", 0.2, 17.7)], u=None, batch=list("aabb")
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", list(AWKWARD))
def test_awkward_campaigns(analysed, name):
    whole(analysed(AWKWARD[name]))


def test_a_salt_without_a_limit_is_told_beside_one_that_has_it(analysed):
    salts = whole(analysed(few(("Na2CO3", 0.1, -26.0), ("KCl", 0.1, 17.5))))
    assert salts.loc["Na2CO3", "verdict"] == "no limit"
    assert np.isnan(salts.loc["Na2CO3", "standard_enthalpy"])
    assert "CO3-2" in salts.loc["Na2CO3", "reason"]


def test_nothing_left_is_said(analysed):
    with pytest.raises(NothingToFit, match="bulb broke"):
        analysed(few(("KCl", 0.1, 17.5)), '[[exclude]]\nrun = "R0"\nreason = "bulb broke"\n')
    with pytest.raises(NothingToFit, match="above max_molality"):
        analysed(few(("KCl", 0.1, 17.5)), '[analysis]\nmax_molality = "0.05 mol/kg"\n')


def test_one_run_a_salt_with_nothing_stated_has_no_uncertainty_to_give(analysed):
    silent = few(("KCl", 0.1, 17.5), ("NaCl", 0.1, 4.2), u=None)
    with pytest.raises(NothingToFit, match="nothing tells how far it may be wrong"):
        analysed(silent)
    salts = whole(analysed(few(("KCl", 0.1, 17.5), ("NaCl", 0.1, 4.2), u=[0.05, np.nan])))
    assert salts.loc["NaCl", "verdict"] == "no limit"
    assert np.isfinite(salts.loc["KCl", "u"])


def test_excluded_runs_stay_in_the_table_with_their_reason(analysed):
    runs = few(("KCl", 0.1, 17.5), ("KCl", 0.2, 99.0), ("KCl", 3.0, 16.0))
    toml = '[analysis]\nmax_molality = "2 mol/kg"\n[[exclude]]\nrun = "R1"\nreason = "bulb broke"\n'
    analysis = analysed(runs, toml)
    salts = whole(analysis)
    assert analysis.runs["included"].tolist() == [True, False, False]
    assert analysis.runs["reason"].tolist() == ["", "bulb broke", "above max_molality"]
    assert salts.loc["KCl", "runs"] == 1
    alone = whole(analysed(runs.iloc[:1]))
    assert salts.loc["KCl", "standard_enthalpy"] == pytest.approx(alone.loc["KCl", "standard_enthalpy"], abs=1e-9)


def test_two_spellings_are_one_salt(analysed):
    salts = whole(analysed(few(("CaCl2.6H2O", 0.1, 15.0), ("CaCl2 · 6H2O", 0.2, 15.0))))
    assert salts.index.tolist() == ["CaCl2·6H2O"]
    assert salts["runs"].tolist() == [2]


def test_verdict_and_scores_agree(analysed):
    analysis = analysed(few(("KCl", 0.05, 17.58), ("KCl", 0.1, 17.58), ("NaCl", 0.1, 9.0), ("RbReO4", 0.01, 60.0)))
    salts = analysis.salts.set_index("salt")
    zeta = analysis.comparison.set_index("salt")["zeta"]
    assert salts.loc["KCl", "verdict"] == "agrees"
    assert abs(zeta["KCl"]) < 2
    assert salts.loc["NaCl", "verdict"] == "disagrees"
    assert zeta["NaCl"] > 3
    assert salts.loc["RbReO4", "verdict"] == "no reference"
    assert "RbReO4" not in zeta.index
