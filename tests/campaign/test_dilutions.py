"""Heats of dilution and successive additions: read right, each fault alone, all at once, and what is told of them."""

from pathlib import Path

import numpy as np
import pytest

from reconcile.campaign import Campaign, CampaignError, Problem, read_campaign

INITIAL, FINAL = "initial_molality / (mol/kg)", "final_molality / (mol/kg)"
HEADING = f"run,salt,role,mass / g,water / g,heat / J,molality / (mol/kg),enthalpy / (kJ/mol),{INITIAL},{FINAL}"
SAMPLES = ("R1,KCl,sample,1.0,100,235.8,,,,", "R2,KCl,,,,,0.2,17.5,0.1,")
DILUTION = "R3,KCl,dilution,,,,,-0.3,0.5,0.05"


def read(folder: Path, table: str, **files: str) -> Campaign:
    (folder / "runs.csv").write_text(table, encoding="utf-8")
    for name, text in files.items():
        (folder / name.replace("_", ".")).write_text(text, encoding="utf-8")
    return read_campaign(folder)


def faults(folder: Path, table: str, **files: str) -> tuple[Problem, ...]:
    with pytest.raises(CampaignError) as told:
        read(folder, table, **files)
    return told.value.problems


def season(*rows: str, heading: str = HEADING) -> str:
    return "\n".join([heading, *rows]) + "\n"


def test_all_kinds_of_rows_together(tmp_path: Path) -> None:
    campaign = read(tmp_path, season(*SAMPLES, DILUTION, "R4,KCl,sample,1.0,100,230,,,0.1341,"))
    runs = campaign.runs
    assert runs.quantities["initial_molality"].value == pytest.approx([np.nan, 0.1, 0.5, 0.1341], nan_ok=True)
    assert runs.quantities["final_molality"].value == pytest.approx([np.nan, np.nan, 0.05, np.nan], nan_ok=True)
    assert runs.quantities["enthalpy"].value == pytest.approx([np.nan, 17.5, -0.3, np.nan], nan_ok=True)
    role = runs.keys["role"]
    assert [role.labels[code] if code >= 0 else "" for code in role.code] == ["sample", "", "dilution", "sample"]
    assert [salt.formula for salt in campaign.salts] == ["KCl"]
    assert campaign.salt.tolist() == [0, 0, 0, 0]


def test_absent_columns_are_there_and_empty(tmp_path: Path) -> None:
    campaign = read(tmp_path, "salt,molality / (mol/kg),enthalpy / (kJ/mol)\nKCl,0.1,17.5\n")
    for name in ("initial_molality", "final_molality"):
        quantity = campaign.runs.quantities[name]
        assert np.isnan(quantity.value).all()
        assert np.isnan(quantity.u).all()
        assert not any("dilution" in remark.text or "starts in" in remark.text for remark in campaign.remarks)


@pytest.mark.parametrize(
    ("heading", "typed", "setting", "expected"),
    [
        ("u(initial_molality) / (mmol/kg)", "2", "", 0.002),
        ("U(initial_molality) / (mol/kg)", "0.004", "", 0.002),
        ("tol(initial_molality) / (mol/kg)", "0.003", "", 0.003 / 3**0.5),
        ("u(initial_molality) / %", "1", "", 0.005),
        ("note", "", '"u(initial_molality)" = "0.2 %"', 0.001),
        ("note", "", '"tol(initial_molality)" = "3 mmol/kg"', 0.003 / 3**0.5),
    ],
)
def test_uncertainty_of_the_initial_molality(
    tmp_path: Path, heading: str, typed: str, setting: str, expected: float
) -> None:
    table = season(f"{SAMPLES[0]},", f"{DILUTION},{typed}", heading=f"{HEADING},{heading}")
    campaign = read(tmp_path, table, campaign_toml=f"[uncertainty.runs]\n{setting}\n")
    u = campaign.runs.quantities["initial_molality"].u
    assert u == pytest.approx([np.nan, expected], nan_ok=True)


def test_uncertainty_of_the_final_molality_and_another_unit(tmp_path: Path) -> None:
    heading = HEADING.replace(FINAL, "final_molality / (mmol/kg)") + ",u(final_molality) / (mmol/kg)"
    campaign = read(tmp_path, season("R3,KCl,dilution,,,,,-0.3,0.5,50,1", heading=heading))
    final = campaign.runs.quantities["final_molality"]
    assert (final.value, final.u) == (pytest.approx([0.05]), pytest.approx([0.001]))


def test_nothing_but_dilutions_and_a_zero_in_a_sample(tmp_path: Path) -> None:
    heading = f"salt,role,enthalpy / (kJ/mol),{INITIAL},{FINAL}"
    campaign = read(tmp_path, season("KCl,dilution,-0.3,0.5,0.05", "NaCl,dilution,-0.2,0.5,0.05", heading=heading))
    told = [remark.text for remark in campaign.remarks]
    assert any("2 runs are heats of dilution, of KCl (1), NaCl (1)" in text for text in told)
    assert any(text.startswith("no run dissolves KCl, NaCl") for text in told)
    campaign = read(tmp_path, season("R1,KCl,,,,,0.1,17.5,0,"))
    assert campaign.runs.quantities["initial_molality"].value.tolist() == [0]
    assert not any("in a solution" in remark.text for remark in campaign.remarks)


def test_a_lot_says_which_solution_is_diluted(tmp_path: Path) -> None:
    heading = f"sample,role,molality / (mol/kg),enthalpy / (kJ/mol),{INITIAL},{FINAL}"
    table = season("C-1,dilution,,-0.9,0.5,0.05", "C-1,sample,0.1,-80,,", heading=heading)
    campaign = read(tmp_path, table, samples_csv="sample,salt\nC-1,CaCl2\n")
    assert [salt.formula for salt in campaign.salts] == ["CaCl2"]
    assert campaign.salt.tolist() == campaign.sample.tolist() == [0, 0]


def test_what_is_told(tmp_path: Path) -> None:
    rows = [*SAMPLES, DILUTION, "R5,NaCl,dilution,,,,,-0.2,0.5,0.1", "R6,KCl,dilution,,,,,-0.2,0.4,0.1"]
    remarks = read(tmp_path, season(*rows)).remarks
    (diluted,) = (remark for remark in remarks if "heats of dilution, of" in remark.text)
    assert diluted.text.startswith("3 runs are heats of dilution, of KCl (2), NaCl (1)")
    assert diluted.affects == "salt KCl, NaCl"
    assert [one.affects for one in remarks if "no run dissolves" in one.text] == ["salt NaCl"]
    (added,) = (remark for remark in remarks if "in a solution of the salt" in remark.text)
    assert added.text.startswith("1 run starts in a solution of the salt that is added (KCl (1))")
    assert "per mole added" in added.text


def test_of_many_salts_ten_are_named(tmp_path: Path) -> None:
    salts = [cation + anion for cation in ("Li", "Na", "K", "Rb") for anion in ("F", "Cl", "Br", "I")]
    rows = [f"{salt},{salt},dilution,,,,,-0.3,0.5,0.1" for salt in salts]
    text = next(one.text for one in read(tmp_path, season(*rows)).remarks if "heats of dilution, of" in one.text)
    assert "16 runs" in text
    assert "KF (1), KCl (1) and 6 more" in text
    assert "KBr" not in text


# What is wrong in the fourth run (row 4 of the table), the column that is told, and words of the message.
ROWS = {
    "less dilute": ("R4,KCl,dilution,,,,,-0.3,0.05,0.5", FINAL, "a dilution makes the solution more dilute"),
    "as dilute": ("R4,KCl,dilution,,,,,-0.3,0.5,0.5", FINAL, "0.5 mol/kg from an initial 0.5 mol/kg"),
    "dilution of water": ("R4,KCl,dilution,,,,,-0.3,0,0.05", INITIAL, "a dilution starts from a solution"),
    "dilution without a start": ("R4,KCl,dilution,,,,,-0.3,,0.05", INITIAL, "the molality that it starts from"),
    "dilution without an end": ("R4,KCl,dilution,,,,,-0.3,0.5,", FINAL, "the molality that it ends at"),
    "dilution to nothing": ("R4,KCl,dilution,,,,,-0.3,0.5,0", FINAL, "0. Expected more than 0 mol/kg"),
    "dilution without an enthalpy": (
        "R4,KCl,dilution,,,,,,0.5,0.05", "enthalpy / (kJ/mol)", "a dilution needs its enthalpy",
    ),
    "dilution with a molality": (
        "R4,KCl,dilution,,,,0.2,-0.3,0.5,0.05", "molality / (mol/kg)", "0.2 mol/kg in the row of a dilution",
    ),
    "dilution with a heat": ("R4,KCl,dilution,,,12,,,0.5,0.05", "heat / J", "its heat is not yet served"),
    "dilution with heat and enthalpy": ("R4,KCl,dilution,,,12,,-0.3,0.5,0.05", "heat / J", "12 J in the row"),
    "dilution with a mass": (
        "R4,KCl,dilution,1,,,,-0.3,0.5,0.05", "mass / g", "the masses of a dilution are not yet served",
    ),
    "dilution with water": (
        "R4,KCl,dilution,,90,,,-0.3,0.5,0.05", "water / g", "the masses of a dilution are not yet served",
    ),
    "dilution of what": ("R4,,dilution,,,,,-0.3,0.5,0.05", "salt", "neither a salt nor a sample"),
    "dilution from below zero": ("R4,KCl,dilution,,,,,-0.3,-0.5,0.05", INITIAL, "Expected 0 mol/kg or more"),
    "dilution with a decimal comma": ('R4,KCl,dilution,,,,,-0.3,"0,5",0.05', INITIAL, "Write 0.5."),
    "end of a sample": ("R4,KCl,sample,1,100,235,,,0.1,0.2", FINAL, "0.2 mol/kg in a row that is no dilution"),
    "end of a row without role": ("R4,KCl,,,,,0.2,17.5,,0.1", FINAL, "Write dilution in `role`"),
    "sample below zero": ("R4,KCl,,,,,0.2,17.5,-0.1,", INITIAL, "-0.1. Expected 0 mol/kg or more"),
    "sample that adds nothing": ("R4,KCl,,,,,0.2,17.5,0.2,", "molality / (mol/kg)", "more than 0.2 mol/kg"),
    "sample that loses salt": ("R4,KCl,,,,,0.2,17.5,0.3,", "molality / (mol/kg)", "from an initial 0.3 mol/kg"),
    "enthalpy of a sample without molality": ("R4,KCl,,,,,,17.5,0.3,", "molality / (mol/kg)", "needs its molality"),
    "another case": ("R4,KCl,Dilution,,,,,-0.3,0.5,0.05", "role", "sample or dilution. Did you mean dilution?"),
    "standard with a molality": ("R4,KCl,standard,,,,0.2,17.5,0.1,", "role", "not yet served"),
    "standard with masses": ("R4,KCl,standard,1,100,235,,,,", "role", "not yet served"),
}  # fmt: skip


@pytest.mark.parametrize(("row", "column", "words"), ROWS.values(), ids=ROWS)
def test_one_fault(tmp_path: Path, row: str, column: str, words: str) -> None:
    (problem,) = faults(tmp_path, season(*SAMPLES, row))
    assert (problem.file, problem.row, problem.column) == ("runs.csv", 4, column)
    assert words in str(problem)
    assert problem.expected
    assert problem.remedy
    assert ("not yet served" in str(problem)) == (problem.code == "not yet served")


SHORT = f"salt,role,enthalpy / (kJ/mol),{INITIAL},{FINAL}"
HEADINGS = {
    "no initial molality": (SHORT.replace(INITIAL, "note"), "there is no column `initial_molality / (mol/kg)`"),
    "no final molality": (SHORT.replace(FINAL, "note"), "there is no column `final_molality / (mol/kg)`"),
    "no enthalpy": (SHORT.replace("enthalpy / (kJ/mol)", "note"), "neither a column of heats nor one of enthalpies"),
    "another unit": (SHORT.replace(FINAL, "final_molality / g"), "unit of mass"),
    "no unit": (SHORT.replace(INITIAL, "initial_molality"), "it has no unit"),
    "capital": (SHORT.replace("role", "Role"), "Did you mean `role`?"),
    "misspelt": (SHORT.replace(INITIAL, "intial_molality / (mol/kg)"), "Did you mean `initial_molality / (mol/kg)`?"),
    "in brackets": (SHORT.replace(FINAL, "Final molality (mol/kg)"), "Did you mean `final_molality / (mol/kg)`?"),
}


@pytest.mark.parametrize(("heading", "words"), HEADINGS.values(), ids=HEADINGS)
def test_one_fault_in_a_heading_is_told_once(tmp_path: Path, heading: str, words: str) -> None:
    (problem,) = faults(tmp_path, season("KCl,dilution,-0.3,0.5,0.05", "KCl,dilution,-0.2,0.4,0.05", heading=heading))
    assert problem.row == 1
    assert words in str(problem)
    assert problem.remedy


def test_no_column_of_roles_is_told_once(tmp_path: Path) -> None:
    heading = f"salt,molality / (mol/kg),enthalpy / (kJ/mol),{FINAL}"
    (problem,) = faults(tmp_path, season("KCl,0.5,17.3,0.05", "KCl,0.4,17.4,0.05", heading=heading))
    assert problem.row == 1
    assert "there is no column `role`" in problem.found


def test_all_faults_of_all_rows_in_one_go(tmp_path: Path) -> None:
    rows = [
        "R1,KCl,dilution,1,100,12,0.2,,0,",
        "R2,KCl,sampel,1,,235,,,,",
        "R3,KCl,dillution,,,,0.2,,0.05,0.5",
        "R4,KCl2,,,,,0.2,17.5,0.3,0.1",
    ]
    assert [(one.row, one.column, one.code) for one in faults(tmp_path, season(*rows))] == [
        (2, "mass / g", "not yet served"),
        (2, "water / g", "not yet served"),
        (2, "heat / J", "not yet served"),
        (2, "molality / (mol/kg)", "not of a dilution"),
        (2, INITIAL, "out of range"),
        (2, FINAL, "empty cell"),
        (3, "role", "unknown word"),
        (3, "water / g", "empty cell"),
        (4, "role", "unknown word"),
        (4, "molality / (mol/kg)", "not of a dilution"),
        (4, "enthalpy / (kJ/mol)", "empty cell"),
        (4, FINAL, "no dilution"),
        (5, "salt", "formula"),
        (5, "molality / (mol/kg)", "no addition"),
        (5, FINAL, "not of a sample"),
    ]


def test_a_molality_beside_masses_counts_the_salt_that_was_there(tmp_path: Path) -> None:
    # 1 g KCl (74.55 g/mol) is 0.013414 mol; with 0.5 mol/kg in 100 g water: (0.05 + 0.013414)/0.1 = 0.63414 mol/kg.
    # 10 g CaCl2·6H2O (219.07 g/mol) is 0.045647 mol and brings 4.934 g water; with 1 mol/kg in 100 g:
    # (0.1 + 0.045647)/0.104934 = 1.38799; salt counted over all water would be 1.43501, over the solvent alone 1.45647.
    # An error of 10 g in the water of 100 g changes 0.63414 by (0.63414 − 0.5)·10 % = 0.013, not by 0.063.
    rows = {
        "fits": "KCl,1,100,0.634,,0.5,,235,",
        "the added alone": "KCl,1,100,0.134,,0.5,,235,",
        "differs": "KCl,1,100,0.640,,0.5,,235,",
        "within u of the initial": "KCl,1,100,0.640,,0.5,0.01,235,",
        "within u of its own": "KCl,1,100,0.640,0.01,0.5,,235,",
        "within u of the water": "KCl,1,100,0.640,,0.5,,235,10",
        "beyond u of the water": "KCl,1,100,0.660,,0.5,,235,10",
        "hydrate fits": "CaCl2·6H2O,10,100,1.388,,1,,235,",
        "its water taken twice": "CaCl2·6H2O,10,100,1.435,,1,,235,",
        "solvent alone": "CaCl2·6H2O,10,100,1.4565,,1,,235,",
        "zero": "KCl,1,100,0.1341,,0,,235,",
    }
    heading = (
        "run,salt,mass / g,water / g,molality / (mol/kg),u(molality) / (mol/kg),initial_molality / (mol/kg),"
        "u(initial_molality) / (mol/kg),heat / J,u(water) / g"
    )
    campaign = read(tmp_path, season(*(f"{name},{row}" for name, row in rows.items()), heading=heading))
    told = [remark for remark in campaign.remarks if "the masses are used" in remark.text]
    assert [remark.affects.removeprefix("run ") for remark in told] == [
        "the added alone", "differs", "beyond u of the water", "its water taken twice", "solvent alone",
    ]  # fmt: skip
    assert all("of its masses and its initial molality" in remark.text for remark in told)
    assert ("0.6341" in told[0].text, "1.388" in told[3].text) == (True, True)
