"""The laboratory's own values in place of tabulated ones: only where asked, whole, and with their weight."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from pandas.testing import assert_frame_equal

from reconcile import reference
from reconcile.campaign import LabReference, read_campaign, write_campaign
from reconcile.chemistry import read_salt
from reconcile.cycles import adjust, network, with_own_formation_enthalpies, with_own_solution_enthalpies
from reconcile.pipeline import analyse
from reconcile.statistics import stated

SALTS = ["KCl", "CaCl2.6H2O", "KBr", "Pr(ReO4)3"]  # of the last no table holds anything


def own(
    species: str, value: float, u: float = 0.1, phase: str = "cr", quantity: str = "enthalpy of solution"
) -> LabReference:
    return LabReference(quantity, species, phase, value, u, "card 7")


def formed(species: str, value: float, u: float = 0.1, phase: str = "cr") -> LabReference:
    return own(species, value, u, phase, "formation enthalpy")


def row_of(frame: pd.DataFrame, species: str, phase: str) -> "pd.Series[object]":
    found = frame[frame["species"].eq(species) & frame["phase"].eq(phase)]
    assert len(found) == 1
    return found.iloc[0]


def test_solution_enthalpies_are_replaced_where_the_laboratory_states_one() -> None:
    published = reference.solution_enthalpies(SALTS)
    before = published.copy()
    found = with_own_solution_enthalpies(
        published,
        [own("CaCl2·6H2O", 15.0, 0.2), own("Pr(ReO4)3", -7.0), own("KI", 1.0), formed("KBr", 2.0)],
    )
    assert_frame_equal(published, before)  # the given table stays
    assert_frame_equal(found.loc[["KCl", "KBr"]], published.loc[["KCl", "KBr"]])
    assert found.index.tolist() == SALTS
    changed = found.loc[["CaCl2.6H2O", "Pr(ReO4)3"]]
    assert changed["value"].tolist() == [15.0, -7.0]
    assert changed["u"].tolist() == [0.2, 0.1]
    assert changed["independent"].tolist() == [True, True]
    for column, words in {
        "source": "card 7", "u_basis": "stated by the laboratory", "status": "laboratory",
        "reference_set": "laboratory", "phase": "cr", "read_in": "", "note": "", "taken_over_by": "",
    }.items():  # fmt: skip
        assert changed[column].tolist() == [words, words], column
    assert changed["year"].isna().all()
    assert found.dtypes.to_dict() == published.dtypes.to_dict()
    # so these were others before
    assert published.loc[["CaCl2.6H2O", "Pr(ReO4)3"], "independent"].tolist() == [False, False]
    assert np.isnan(published.loc["Pr(ReO4)3", "value"])


def test_formation_enthalpies_are_replaced_phase_by_phase() -> None:
    table = reference.formation_enthalpies("NBS-1982")
    gas = table[table["species"].eq("K+") & table["phase"].eq("aq")].assign(phase="g", value=514.0)
    table = pd.concat([table, gas], ignore_index=True)
    before = table.copy()
    found = with_own_formation_enthalpies(
        table, [formed("K+", -250.0, 0.3, "aq"), formed("H2O", -286.0, 0.04, "l"), formed("CaCl2·6H2O", -2600.0, 1.5)]
    )
    assert_frame_equal(table, before)
    for species, phase, value, u in (
        ("K+", "aq", -250.0, 0.3), ("H2O", "l", -286.0, 0.04), ("CaCl2·6H2O", "cr", -2600.0, 1.5),
    ):  # fmt: skip
        row = row_of(found, species, phase)
        assert (row["value"], row["u"]) == (value, u)
        assert (row["status"], row["reference_set"], row["circular"]) == ("laboratory", "laboratory", "not assessed")
        assert (row["source"], row["u_basis"]) == ("card 7", "stated by the laboratory")
        assert pd.isna(row["year"])
        old = row_of(table, species, phase)
        assert (row["identity"], row["charge"]) == (old["identity"], old["charge"])
    same = [i for i in range(len(table)) if found["status"].iloc[i] != "laboratory"]
    assert len(same) == len(table) - 3
    assert row_of(found, "K+", "g")["value"] == 514.0
    assert_frame_equal(found.iloc[same][table.columns], table.iloc[same])


def test_species_that_a_set_lacks_are_appended() -> None:
    table = reference.formation_enthalpies("NBS-1982")
    found = with_own_formation_enthalpies(
        table, [formed("ReO4-", -787.0, 8.0, "aq"), formed("Pr(ReO4)3", -3000.0, 9.0)]
    )
    new = found.iloc[len(table) :]
    assert len(new) == 2 - int(table["species"].eq("ReO4-").any())
    crystal = row_of(found, "Pr(ReO4)3", "cr")
    assert (crystal["identity"], crystal["charge"]) == (read_salt("Pr(ReO4)3").identity, 0)
    ion = row_of(found, "ReO4-", "aq")
    assert (ion["identity"], ion["charge"], ion["value"]) == ("ReO4-", -1, -787.0)
    assert found[table.columns].dtypes.to_dict() == table.dtypes.to_dict()


def test_no_own_values_change_nothing() -> None:
    published, table = reference.solution_enthalpies(SALTS), reference.formation_enthalpies()
    assert_frame_equal(with_own_solution_enthalpies(published, ()), published)
    assert_frame_equal(with_own_formation_enthalpies(table, ()), table)
    assert_frame_equal(with_own_solution_enthalpies(published, [formed("KCl", 1.0)]), published)
    assert_frame_equal(with_own_formation_enthalpies(table, [own("KCl", 1.0)]), table)


def test_measured_and_own_value_meet_at_their_weighted_mean() -> None:
    """KBr's crystal is the published enthalpy over again, so only the two are left: (x/u² + X/U²)/(1/u² + 1/U²)."""
    salts = [read_salt("KBr")]
    published = with_own_solution_enthalpies(reference.solution_enthalpies(["KBr"]), [own("KBr", 19.0, 0.2)])
    net = network(salts, stated(np.array([20.0]), np.array([0.1]), "runs"), reference.formation_enthalpies(), published)
    adjusted = adjust(("KBr",), net)
    mean = (20.0 / 0.01 + 19.0 / 0.04) / (1 / 0.01 + 1 / 0.04)
    assert adjusted.reconciled["reconciled"].tolist() == pytest.approx([mean])
    assert adjusted.chi_square == pytest.approx(1.0 / (0.01 + 0.04))
    assert adjusted.references["status"].tolist()[-1] == "laboratory"


def test_an_own_crystal_closes_the_cycle() -> None:
    """With the ions as they are, a crystal made to fit a measured enthalpy leaves a misclosure of nothing."""
    salts = [read_salt("MgCl2")]
    table = reference.formation_enthalpies()
    ions = {name: float(str(row_of(table, name, "aq")["value"])) for name in ("Mg+2", "Cl-")}
    measured = -155.0
    crystal = ions["Mg+2"] + 2 * ions["Cl-"] - measured
    published = reference.solution_enthalpies(["MgCl2"])
    ledger = stated(np.array([measured]), np.array([0.1]), "runs")
    plain = adjust(("MgCl2",), network(salts, ledger, table, published)).cycles
    own_set = with_own_formation_enthalpies(table, [formed("MgCl2", crystal, 0.2)])
    closed = adjust(("MgCl2",), network(salts, ledger, own_set, published)).cycles
    assert abs(plain["misclosure"].iloc[0]) > 1
    assert closed["misclosure"].iloc[0] == pytest.approx(0.0, abs=1e-9)


def test_through_the_whole_pipe(tmp_path: Path) -> None:
    molality = np.linspace(0.05, 0.4, 8)
    runs = pd.DataFrame({
        "salt": "KBr", "molality / (mol/kg)": molality, "enthalpy / (kJ/mol)": 19.9 + 0.1 * (-1.0) ** np.arange(8),
        "u(enthalpy) / (kJ/mol)": 0.1,
    })  # fmt: skip
    text = (
        '[[reference]]\nquantity = "enthalpy of solution"\nspecies = "KBr"\nvalue = "18.97 kJ/mol"\nu = "0.1 kJ/mol"\n'
        'source = "card 7"\n'
        '[[reference]]\nquantity = "formation enthalpy"\nspecies = "Br-"\nvalue = "-120 kJ/mol"\nu = "0.5 kJ/mol"\n'
        'source = "card 8"\n'
    )
    write_campaign(tmp_path, text, {"runs": runs})
    analysis = analyse(read_campaign(tmp_path))
    own_rows = analysis.references[analysis.references["status"].eq("laboratory")]
    assert own_rows["published"].tolist() == [-120.0, 18.97]
    assert own_rows["u_published"].tolist() == [0.5, 0.1]
    assert own_rows["source"].tolist() == ["card 8", "card 7"]
    assert analysis.comparison["published"].tolist() == [18.97]
    told = analysis.sources[analysis.sources["status"].eq("laboratory")]
    assert told["source"].tolist() == ["card 8", "card 7"]
    assert sum("the laboratory's own value" in text for text in analysis.assumptions["text"]) == 2
