"""The value that a report uses, and why it is that one."""

import numpy as np
import pandas as pd
import pytest

from reconcile import reference
from reconcile.chemistry import read_salt


def test_measured_before_derived_and_read_before_recalled():
    frame = reference.solution_enthalpies(["NaCl", "KCl", "CaCl2·6H2O", "KBr"])
    # NaCl: Archer's 3.86 and KCl: Kilday's 17.241 are from memory, Parker's figures were read
    assert frame["value"].tolist()[:2] == [3.88, 17.22]
    assert frame["status"].tolist() == ["read", "read", "derived", "recalled"]
    assert frame["independent"].tolist() == [True, True, False, True]
    assert (frame["u"] > 0).all()
    assert (frame["source"] != "").all()


def test_index_is_what_was_asked_and_spelling_does_not_matter():
    asked = ["CaCl2.6H2O", "CH3COONa", "NaC2H3O2", "CaCl2.6H2O", "unknown"]
    frame = reference.solution_enthalpies(asked)
    assert list(frame.index) == asked
    assert frame["value"].iloc[1] == frame["value"].iloc[2] == -17.32  # Parker 1965, CRC reprint
    assert np.isnan(frame["value"].iloc[4])
    assert frame["source"].iloc[4] == ""
    assert not frame["independent"].iloc[4]


def test_eighteen_degrees_and_finite_molality_are_never_a_limit():
    rows = reference.table("solution_enthalpy")
    only_old = set(rows.loc[rows["temperature / K"].lt(297), "salt"]) - set(
        rows.loc[rows["molality / (mol/kg)"].eq(0) & rows["temperature / K"].eq(298.15), "salt"]
    )
    assert "BeSO4" in only_old  # Bichowsky, Rossini 1936 only
    assert reference.solution_enthalpies(sorted(only_old))["value"].isna().all()
    false_limits = rows[rows["salt"].eq("KCl") & rows["molality / (mol/kg)"].isna()]
    assert len(false_limits) >= 2
    assert reference.solution_enthalpies(["KCl"])["value"].iloc[0] not in set(false_limits.iloc[:, 2])


def test_a_set_is_given_whole():
    nbs = reference.formation_enthalpies()
    assert set(nbs["phase"]) == {"cr", "aq", "l"}
    crystals = nbs[nbs["phase"].eq("cr")]
    assert all(
        read_salt(name).identity == key for name, key in zip(crystals["species"], crystals["identity"], strict=True)
    )
    assert set(crystals["circular"]) == {"likely", "possible", "no", "not assessed"}
    assert crystals["circular"].eq("likely").sum() == 46
    value = nbs.set_index(["species", "phase"])["value"]
    assert value["H2O", "l"] == -285.830  # CODATA 1989
    assert value["NO3-", "aq"] == -207.36
    gas = reference.formation_enthalpies("CRC-atoms+IE")
    assert set(gas["phase"]) == {"g"}
    with pytest.raises(KeyError, match="NBS-1982"):
        reference.formation_enthalpies("NBS-1983")


def test_a_set_is_handed_out_as_a_copy():
    first = reference.formation_enthalpies()
    first["value"] = 0.0
    assert not reference.formation_enthalpies()["value"].eq(0).all()


def test_dilution_parameters():
    frame = reference.dilution_parameters()
    assert len(frame) >= 60
    assert frame.index.is_unique
    assert all(read_salt(name).electrolyte == name for name in frame.index)
    assert frame["charge_type"].isin(["1-1", "2-1", "1-2", "2-2", "3-1", "1-3", "1-4"]).all()
    assert frame["beta2"].notna().equals(frame["charge_type"].eq("2-2"))
    assert frame.loc["NaCl", "slope"] == 1.972
    assert frame.loc["NaCl", "max_molality"] > 1
    assert frame.loc["NaCl", "u_relative_enthalpy"] < 0.05
    assert frame.loc["KCl", "slope"] == 1.972  # fitted to Parker 1965 with the slope used here
    assert np.isnan(frame.loc["KBr", "slope"])
    assert not frame.loc["KClO4", "c_phi_determined"]  # 0 in a set up to 0.1 mol/kg
    assert frame.loc["NaF", "c_phi_determined"]  # 0 in a set up to 0.7 mol/kg
    assert not frame.loc["RbCl", "c_phi_determined"]  # 0, range unknown
    assert frame.loc["KCl", "c_phi_determined"]
    assert frame["why"].ne("").all()
    everything = reference.all_dilution_parameters()
    assert len(everything) > len(frame)
    assert everything["preferred"].sum() == len(frame)


def test_heat_capacity_changes():
    salts = [read_salt(text) for text in ("NaCl", "KCl", "CaCl2", "NaN3", "MgSO4·7H2O")]
    frame = reference.heat_capacity_changes(salts)
    assert list(frame.index) == [salt.formula for salt in salts]
    # −134 J/(K mol): Pitzer, Peiper, Busey 1984, −83.8 for the ions and 50.5 for the crystal
    assert frame.loc["NaCl", "value"] == pytest.approx(-134, abs=0.5)
    # −166: Kilday 1980 with the coefficient of her KCl runs, from memory
    assert frame.loc["KCl", "value"] == pytest.approx(-166, abs=2)
    assert frame.loc["CaCl2", "value"] == pytest.approx(-351, abs=15)
    assert frame.loc["NaCl", "status"] == "recalled"
    assert frame.loc["CaCl2", "status"] == "derived"
    known = frame["value"].notna()
    assert (frame.loc[known, "u"] > 0).all()
    assert (frame.loc[known, "source"] != "").all()
    assert frame.loc[~known, "u"].isna().all()
    assert reference.heat_capacity_changes([]).empty


def test_ions_of_one_set_only():
    """A sum mixes no sets: recomputed here from the rows."""
    rows = reference.table("heat_capacity")
    value = rows.set_index(["species", "state", "reference_set"])["heat_capacity / (J/(K mol))"]
    ions = "ion, infinite dilution"
    expected = value["NH4+", ions, "SH88"] + value["NO3-", ions, "SH88"] - value["NH4NO3", "crystal", "CRC"]
    frame = reference.heat_capacity_changes([read_salt("NH4NO3")])
    assert frame["value"].iloc[0] == pytest.approx(expected)


def test_solubility():
    frame = reference.solubility(["NaCl", "CaCl2·6H2O", "CaCl2", "nonsense"])
    # 36.0 g/100 g (CRC, from memory) of 58.44 g/mol
    assert frame.loc["NaCl", "molality"] == pytest.approx(360 / 58.44, rel=1e-5)
    assert frame.loc["CaCl2·6H2O", "molality"] == frame.loc["CaCl2", "molality"]
    assert np.isnan(frame.loc["nonsense", "molality"])


def test_many_salts_at_once_are_the_same_as_one_by_one():
    formulas = list(reference.table("solution_enthalpy")["salt"].unique())
    together = reference.solution_enthalpies(formulas * 3)
    for formula in formulas[::25]:
        pd.testing.assert_frame_equal(
            reference.solution_enthalpies([formula]), together.loc[[formula]].iloc[:1], check_dtype=False
        )
