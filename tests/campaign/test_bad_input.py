"""Bad input: each fault alone and many together; the place, what stands there, what was expected, how to mend it."""

import os
import tempfile
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reconcile.campaign import CampaignError, Problem, read_campaign

HEADING = "run,salt,calorimeter,mass / g,water / g,heat / J,u(heat) / J,date,role"
GOOD = ("R1,KCl,A,1.0,100,235.8,1,2026-05-30,sample", "R2,KCl,A,1.1,100,259.5,1,2026-05-31,")
ENTHALPIES = "run,salt,molality / (mol/kg),enthalpy / (kJ/mol)\nR1,KCl,0.1,17.5\n"


def refused(folder: Path, **files: str | bytes) -> tuple[Problem, ...]:
    for name, content in files.items():
        path = folder / ("campaign.toml" if name == "campaign" else f"{name}.csv")
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
    before = sorted(os.listdir(folder))
    with pytest.raises(CampaignError) as told:
        read_campaign(folder)
    assert sorted(os.listdir(folder)) == before
    assert all(str(problem) in str(told.value) for problem in told.value.problems)
    return told.value.problems


def heats(heading: str = HEADING, third: str = "") -> str:
    return "\n".join([heading, *GOOD, *([third] if third else [])]) + "\n"


# What is wrong in a third run (row 4), the column that is told, and words of the message.
CELLS = {
    "decimal comma": ('R3,KCl,A,"1,0342",100,235,1,,', "mass / g", "a decimal point. Write 1.0342."),
    "comma that splits a cell": ("R3,KCl,A,1,0342,100,235,1,,", "mass / g", '"1,0342"'),
    "not a number": ("R3,KCl,A,one,100,235,1,,", "mass / g", '"one". Expected a number'),
    "unit in the cell": ("R3,KCl,A,5.03 g,100,235,1,,", "mass / g", "Write 5.03"),
    "hexadecimal": ("R3,KCl,A,0x10,100,235,1,,", "mass / g", '"0x10"'),
    "underscore": ("R3,KCl,A,1_0,100,235,1,,", "mass / g", '"1_0"'),
    "truth": ("R3,KCl,A,True,100,235,1,,", "mass / g", '"True"'),
    "nan": ("R3,KCl,A,1,100,nan,1,,", "heat / J", '"nan". Expected a finite number'),
    "NaN": ("R3,KCl,A,1,100,NaN,1,,", "heat / J", '"NaN". Expected a finite number'),
    "infinity": ("R3,KCl,A,1,100,-inf,1,,", "heat / J", "-inf"),
    "too large": ("R3,KCl,A,1,100,1e999,1,,", "heat / J", "finite"),
    "spreadsheet error": ("R3,KCl,A,1,100,#N/A,1,,", "heat / J", '"#N/A"'),
    "dash": ("R3,KCl,A,1,100,–,1,,", "heat / J", '"–"'),
    "typographic minus": ("R3,KCl,A,1,100,−5.5,1,,", "heat / J", "Write -5.5."),
    "concise notation": ("R3,KCl,A,1,100,17.584(17),1,,", "heat / J", "not yet served"),
    "unbalanced formula": ("R3,KCl2,A,1,100,235,1,,", "salt", "Did you mean KCl?"),
    "no salt at all": ("R3,Xyz,A,1,100,235,1,,", "salt", '"Xyz"'),
    "ion": ("R3,Ca2+,A,1,100,235,1,,", "salt", '"Ca2+"'),
    "unknown water": ("R3,CaCl2·xH2O,A,1,100,235,1,,", "salt", "xH2O"),
    "no salt given": ("R3,,A,1,100,235,1,,", "salt", "neither a salt nor a sample"),
    "duplicate name": ("R1,KCl,A,1,100,235,1,,", "run", '"R1" is there already, in row 2'),
    "nothing measured": ("R3,KCl,A,1,100,,1,,", "heat / J", "neither a heat nor an enthalpy"),
    "no mass": ("R3,KCl,A,,100,235,1,,", "mass / g", "a heat needs the mass"),
    "no water": ("R3,KCl,A,1,,235,1,,", "water / g", "a heat needs the amount of water"),
    "mass of zero": ("R3,KCl,A,0,100,235,1,,", "mass / g", "0. Expected more than 0 g"),
    "negative water": ("R3,KCl,A,1,-100,235,1,,", "water / g", "-100. Expected more than 0 g"),
    "negative uncertainty": ("R3,KCl,A,1,100,235,-1,,", "u(heat) / J", "-1. Expected an uncertainty of 0 or more"),
    "date": ("R3,KCl,A,1,100,235,1,31.5.2026,", "date", "ISO 8601"),
    "no such day": ("R3,KCl,A,1,100,235,1,2026-02-30,", "date", "ISO 8601"),
    "standard": ("R3,KCl,A,1,100,235,1,,standard", "role", "not yet served"),
    "role": ("R3,KCl,A,1,100,235,1,,sampel", "role", "Did you mean sample?"),
}  # fmt: skip


@pytest.mark.parametrize(("row", "column", "words"), CELLS.values(), ids=CELLS)
def test_one_bad_cell(tmp_path: Path, row: str, column: str, words: str) -> None:
    (problem,) = refused(tmp_path, runs=heats(third=row))
    assert (problem.file, problem.row, problem.column) == ("runs.csv", 4, column)
    assert str(problem).startswith(f"runs.csv, row 4, `{column}`: ")
    assert words in str(problem)
    assert problem.remedy
    assert problem.code


# A heading more, and words of its message; the column has a 1 in every row.
HEADINGS = {
    "unknown": ("colour", '"colour" is unknown. Expected quantity / unit.'),
    "in brackets": ("Heat (kJ)", "Did you mean `heat / J`?"),
    "capital": ("Note", "Did you mean `note`?"),
    "misspelt": ("temprature / K", "Did you mean `temperature / K`?"),
    "misspelt uncertainty": ("u(watr) / g", "Did you mean `u(water) / g`?"),
    "of another table": ("mass_fraction", "It belongs into samples.csv."),
    "wrong dimension": ("molality / (mol/m)", "an amount per length"),
    "wrong dimension, plain": ("temperature / g", "unit of mass"),
    "coulomb": ("temperature / C", "an electric charge"),
    "no unit": ("temperature", "it has no unit"),
    "unit of a text": ("operator / g", "has a unit"),
    "unknown unit": ("molality / (mmol/kilo)", "is not known"),
    "unit that is a number": ("molality / 2 kg", "is not known"),
    "endless unit": ("molality / (g^9^9^9^9)", "is not known"),
    "case of a unit": ("u(water) / G", "Did you mean g?"),
    "megagram": ("u(mass) / Mg", "Did you mean mg?"),
    "megalitre": ("u(water) / ML", "1e+09"),
    "millikelvin for a temperature": ("temperature / mK", "temperature differences"),
    "pure number": ("temperature / %", "has no dimension"),
    "twice": ("mass / mg", 'stands for the same as "mass / g"'),
    "uncertainty of a text": ("u(salt)", "salt is a text"),
    "coverage factor alone": ("k(mass)", "stands alone"),
    "uncertainty alone": ("u(enthalpy) / (kJ/mol)", "has no quantity beside it"),
    "second uncertainty": ("tol(heat) / J", "one uncertainty for each quantity and row"),
    "degrees of freedom": ("dof(heat)", "not yet served"),
    "sdom": ("2sdom(heat) / J", "not yet served"),
    "trace": ("trace", "not yet served"),
    "temperature change": ("temperature_change / K", "not yet served"),
    "heat capacity": ("solution_heat_capacity / (J/(g K))", "not yet served"),
    "amount concentration": ("amount_concentration / (mol/L)", "not yet served"),
    "final molality without a unit": ("final_molality", "it has no unit"),
    "mixing time": ("mixing_time / s", "not yet served"),
    "reaction": ("reaction", "not yet served"),
    "medium": ("medium", "not yet served"),
    "salt temperature": ("salt_temperature / °C", "not yet served"),
    "ampoule volume": ("ampoule_volume / mL", "not yet served"),
    "ampoule heat": ("ampoule_heat / J", "not yet served"),
    "undissolved": ("undissolved / g", "not yet served"),
    "dissolution time": ("dissolution_time / s", "not yet served"),
}


@pytest.mark.parametrize(("heading", "words"), HEADINGS.values(), ids=HEADINGS)
def test_one_bad_heading(tmp_path: Path, heading: str, words: str) -> None:
    table = "\n".join([f"{HEADING},{heading}", *(f"{row},1" for row in GOOD)]) + "\n"
    problems = refused(tmp_path, runs=table)
    assert words in str(problems[0])
    assert f'"{heading}"' in str(problems[0]) or "two uncertainties" in problems[0].code
    assert len(problems) == (2 if problems[0].code == "two uncertainties" else 1)
    assert problems[0].remedy


def test_a_refused_heading_is_told_once_not_in_every_row(tmp_path: Path) -> None:
    for heading in ("Mass (g)", "mass / m", "mass"):
        (problem,) = refused(tmp_path, runs=heats(HEADING.replace("mass / g", heading)))
        assert problem.row == 1
        assert "`mass / g`" in problem.remedy
    table = heats(HEADING.replace("mass / g", "mass / m"), 'R3,KCl,A,"1,5",100,235,1,,')
    assert [problem.row for problem in refused(tmp_path, runs=table)] == [1, 4]


WHOLE_TABLES = {
    "empty": ("", "the file is empty"),
    "no rows": (HEADING + "\n", "there are no rows"),
    "blank heading": (",,\nKCl,1,2\n", "the first row is blank"),
    "cells without heading": (heats(HEADING.replace("date", "")), "column 8 has cells but no heading"),
    "no salts": ("molality / (mol/kg),enthalpy / (kJ/mol)\n0.1,17.5\n", "neither a column `salt` nor"),
    "no heats": ("salt,mass / g\nKCl,1\n", "neither a column of heats nor one of enthalpies"),
    "no molality": ("salt,enthalpy / (kJ/mol)\nKCl,17.5\n", "an enthalpy needs its molality"),
    "no masses": ("salt,heat / J,water / g\nKCl,17.5,100\n", "a heat needs the mass of the salt"),
    "too few cells": (heats(third="R3,KCl"), "2 cells"),
    "too many cells": (heats(third="R3,KCl,A,1,100,235,1,,,,,"), "12 cells"),
    "semicolons": (heats().replace(",", ";"), "separated by semicolons"),
    "tabs": (heats().replace(",", "\t"), "separated by tabs"),
    "open quotation mark": (heats(third='R3,"KCl,A,1'), "quotation mark"),
    "Latin-1": (heats().replace("R1", "Rä").encode("latin-1"), "not UTF-8"),
    "UTF-16": (heats().encode("utf-16"), "not UTF-8"),
    "zero bytes": (heats().replace("R1", "R\0").encode(), "not UTF-8"),
    "molality missing": (ENTHALPIES + "R2,KCl,,17.5\n", "an enthalpy needs its molality"),
    "kelvin for Celsius": (
        "salt,molality / (mol/kg),enthalpy / (kJ/mol),temperature / K\nKCl,0.1,17.5,25\n",
        "Write `temperature / °C` in the heading",
    ),
    "both": (
        "salt,molality / (mol/kg),enthalpy / (kJ/mol),mass / g,water / g,heat / J\nKCl,0.1,17.5,1,100,235\n",
        "both a heat and an enthalpy",
    ),
    "k of zero": (
        "salt,molality / (mol/kg),enthalpy / (kJ/mol),U(enthalpy) / %,k(enthalpy)\nKCl,0.1,17.5,1,0\n",
        "a coverage factor of more than 0",
    ),
}  # fmt: skip


@pytest.mark.parametrize(("table", "words"), WHOLE_TABLES.values(), ids=WHOLE_TABLES)
def test_one_bad_table(tmp_path: Path, table: str | bytes, words: str) -> None:
    problems = refused(tmp_path, runs=table)
    assert len(problems) == 1
    assert words in str(problems[0])


OTHER_TABLES = {
    "unknown calorimeter": ({"calorimeters": "calorimeter\nB\n"}, '"A" is not in calorimeters.csv (and in 1 more row)'),
    "calorimeter twice": ({"calorimeters": "calorimeter,instrument\nA,\nA,\n"}, '"A" is there already, in row 2'),
    "calorimeter without name": ({"calorimeters": "calorimeter,instrument\nA,\n,x\n"}, "the cell is empty"),
    "basis": ({"calorimeters": "calorimeter,basis\nA,vesel\n"}, "Did you mean vessel?"),
    "no column of names": ({"calorimeters": "instrument,note\nx,\n"}, "there is no column `calorimeter`"),
    "sample without salt": ({"samples": "sample,salt,water\nK-1,,0\n"}, "the cell is empty"),
    "percent as fraction": ({"samples": "sample,salt,mass_fraction\nK-1,KCl,99.5\n"}, "`mass_fraction / %`"),
    "more than all": ({"samples": "sample,salt,mass_fraction,water\nK-1,KCl,0.99,0.03\n"}, "add up to 1.02"),
    "lot of no salt": ({"samples": "sample,salt\nK-1,KCl2\n"}, "Did you mean KCl?"),
    "calibrations": ({"calibrations": "calorimeter,run\nA,R1\n"}, "not yet served"),
}


@pytest.mark.parametrize(("files", "words"), OTHER_TABLES.values(), ids=OTHER_TABLES)
def test_one_fault_in_another_table(tmp_path: Path, files: dict[str, str], words: str) -> None:
    (problem,) = refused(tmp_path, runs=heats(), **files)
    assert words in str(problem)


def test_samples_of_runs(tmp_path: Path) -> None:
    table = "sample,salt,molality / (mol/kg),enthalpy / (kJ/mol)\nK-1,KCl,0.1,17.5\nK-3,,0.1,17.5\nK-1,NaCl,0.1,17.5\n"
    unknown, two = refused(tmp_path, runs=table, samples="sample,salt\nK-1,KCl\nK-2,KCl\n")
    assert (unknown.row, unknown.column) == (3, "sample")
    assert "Did you mean K-1?" in unknown.remedy or "Did you mean K-2?" in unknown.remedy
    assert (two.row, two.found) == (4, "NaCl, but the sample K-1 is KCl")
    (tmp_path / "samples.csv").unlink()
    unknown, two = refused(tmp_path, runs=table)
    assert "there is no samples.csv" in unknown.found
    assert two.found == "NaCl, but the sample K-1 is KCl"


SETTINGS = {
    "no TOML": ("title = x", "line 1"),
    "unknown table": ("[campain]\ntitle = 'x'", "Did you mean campaign?"),
    "unknown key": ("[campaign]\ntitel = 'x'", '[campaign] titel: "titel" is unknown'),
    "outside a table": ("title = 'x'", "below the line [campaign]"),
    "number without unit": ("[campaign]\nreference_temperature = 298.15", 'Write reference_temperature = "298.15 K".'),
    "text without unit": ("[campaign]\nreference_temperature = '298.15'", "it has no unit"),
    "too cold": ("[campaign]\nreference_temperature = '25 K'", "273.15 to 372.7 K"),
    "wrong dimension": ("[analysis]\nmax_molality = '3 mol/m'", "an amount per length"),
    "decimal comma": ("[uncertainty.runs]\n'u(mass)' = '0,01 g'", 'Write "0.01 g".'),
    "not true or false": ("[analysis]\npublished_dilution = 'yes'", "true or false"),
    "negative uncertainty": ("[uncertainty.runs]\n'u(mass)' = '-1 g'", "an uncertainty of 0 or more"),
    "two uncertainties": ("[uncertainty.runs]\n'u(mass)' = '1 g'\n'tol(mass)' = '1 g'", "one for each quantity"),
    "k without U": ("[uncertainty.runs]\n'u(mass)' = '1 g'\n'k(mass)' = 2", "it stands alone"),
    "unknown quantity": ("[uncertainty.runs]\n'u(mas)' = '1 g'", 'Did you mean "u(mass)"?'),
    "no uncertainty": ("[uncertainty.runs]\n'mass' = '1 g'", 'as in "u(mass)"'),
    "percent of a temperature": ("[uncertainty.runs]\n'u(temperature)' = '1 %'", "has no dimension"),
    "dof": ("[uncertainty.runs]\n'dof(mass)' = 5", "not yet served"),
    "unknown table of uncertainties": ("[uncertainty.run]\n'u(mass)' = '1 g'", "Did you mean runs?"),
    "salt of no run": ("[analysis.salts.NaCl]\nbetween_batches = false", "no run has the salt NaCl"),
    "no salt": ("[analysis.salts.KCl2]\nbetween_batches = false", "Did you mean KCl?"),
    "formula taken apart": ("[analysis.salts.CaCl2.6H2O]\nbetween_batches = false", '[analysis.salts."CaCl2.6H2O"]'),
    "unknown set": ("[references]\nset = 'NBS-1928'", 'Did you mean "NBS-1982"?'),
    "gas ions": ("[references]\ngas_ions = 'x'", "not yet served"),
    "proton": ("[references]\nproton_hydration = '-1091 kJ/mol'", "not yet served"),
    "headings": ("[headings]\nx = 'mass / g'", "not yet served"),
    "correct": ("[[correct]]\ncalorimeter = 'A'", "not yet served"),
    "period": ("[[period]]\nrun = 'R1'", "not yet served"),
    "no reason": ("[[exclude]]\nrun = 'R1'", 'exclude 1: run R1 has no reason. Expected a sentence. Add reason = "…".'),
    "blank reason": ("[[exclude]]\nrun = 'R1'\nreason = ' '", "run R1 has no reason"),
    "no run": ("[[exclude]]\nreason = 'x'", "there is no run"),
    "exclude as a list": ("exclude = ['R1']", "[[exclude]]"),
    "unknown run": ("[[exclude]]\nrun = 'R9'\nreason = 'x'", "exclude 1: run R9 is not in runs.csv"),
    "excluded twice": ("[[exclude]]\nrun='R1'\nreason='x'\n[[exclude]]\nrun='R1'\nreason='x'", "excluded already"),
    "note of no run": ("[[note]]\nrun = 'R9'\ntext = 'x'", "note 1: run R9"),
    "date": ("[campaign]\ndate = 'May'", "Write year-month-day"),
    "table as text": ("campaign = 'x'", "a table [campaign]"),
}


@pytest.mark.parametrize(("text", "words"), SETTINGS.values(), ids=SETTINGS)
def test_one_fault_in_the_settings(tmp_path: Path, text: str, words: str) -> None:
    (problem,) = refused(tmp_path, runs=heats(), campaign=text)
    assert str(problem).startswith("campaign.toml, ")
    assert words in str(problem)


def test_ten_faults_in_one_go_in_the_order_of_the_files(tmp_path: Path) -> None:
    table = (
        f"{HEADING},colour,temperature / m\n"
        'R1,KCl2,A,1.0,100,235.8,1,2026-05-30,sample,red,25\n'
        'R2,KCl,B,"1,5",100,nan,1,2026-05-30,sample,red,25\n'
        'R2,KCl,A,-1,100,235,-1,2026-05-30,sample,red,25\n'
        'R4,KCl,A,1,100,,1,2026-05-30,sample,red,25\n'
    )  # fmt: skip
    problems = refused(
        tmp_path,
        runs=table,
        calorimeters="calorimeter\nA\n",
        campaign="[[exclude]]\nrun = 'R1'\n[campaign]\nname = 'x'\n",
    )
    assert [(problem.file, problem.row, problem.column) for problem in problems] == [
        ("campaign.toml", None, "exclude 1"),
        ("campaign.toml", None, "[campaign] name"),
        ("runs.csv", 1, "colour"),
        ("runs.csv", 1, "temperature / m"),
        ("runs.csv", 2, "salt"),
        ("runs.csv", 3, "calorimeter"),
        ("runs.csv", 3, "mass / g"),
        ("runs.csv", 3, "heat / J"),
        ("runs.csv", 4, "run"),
        ("runs.csv", 4, "mass / g"),
        ("runs.csv", 4, "u(heat) / J"),
        ("runs.csv", 5, "heat / J"),
    ]


def test_of_more_than_fifty_of_a_kind_ten_are_printed(tmp_path: Path) -> None:
    rows = [f'R{number},KCl,A,"1,5",100,235,1,,' for number in range(60)] + ["X,KCl2,A,1,100,235,1,,"]
    (tmp_path / "runs.csv").write_text("\n".join([HEADING, *rows]))
    with pytest.raises(CampaignError) as told:
        read_campaign(tmp_path)
    assert len(told.value.problems) == 61
    lines = str(told.value).splitlines()
    assert len(lines) == 12
    assert "50 more of this kind" in lines[10]
    assert "`mass / g`" in lines[10]
    assert "KCl2" in lines[11]


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("season.xlsx", "a workbook is in the design of the input but not yet served"),
        ("runs.parquet", "not yet served"),
        ("data.xml", "a ThermoML file"),
        ("runs.txt", "a CSV table"),
        ("campaign.toml", "Give the folder"),
        ("picture.png", "a folder or a .csv table"),
    ],
)
def test_other_kinds_of_file(tmp_path: Path, name: str, words: str) -> None:
    (tmp_path / name).write_bytes(b"x")
    with pytest.raises(CampaignError, match=words):
        read_campaign(tmp_path / name)


def test_places_where_there_is_no_campaign(tmp_path: Path) -> None:
    with pytest.raises(CampaignError, match="no such folder or file"):
        read_campaign(tmp_path / "nowhere")
    with pytest.raises(CampaignError, match=r"runs\.csv: it is missing"):
        read_campaign(tmp_path)
    (tmp_path / "Runs.csv").write_text(ENTHALPIES)
    with pytest.raises(CampaignError, match=r"Rename Runs\.csv to runs\.csv"):
        read_campaign(tmp_path)
    (tmp_path / "runs.csv").mkdir(exist_ok=True) if not (tmp_path / "runs.csv").exists() else None
    with pytest.raises(CampaignError):
        read_campaign(tmp_path)
    with pytest.raises(CampaignError, match="several together"):
        read_campaign([tmp_path, tmp_path])


def test_traces_are_told(tmp_path: Path) -> None:
    (tmp_path / "traces").mkdir()
    (tmp_path / "runs.csv").write_text(ENTHALPIES)
    with pytest.raises(CampaignError, match="traces: this is in the design of the input but not yet served"):
        read_campaign(tmp_path)


def test_a_decimal_comma_that_may_be_anywhere_is_told_without_a_column(tmp_path: Path) -> None:
    (problem,) = refused(tmp_path, runs=heats(third="R3,KCl,A,1,5,100,235,1,,"))
    assert (problem.row, problem.column) == (4, None)
    assert "decimal points" in problem.remedy


PIECES = [
    *HEADING, *GOOD[0], "\n", "\r\n", ",", '"', ";", "\t", "NaN", "1e5", "−", "°C", "u(mass) / mg", "KCl2", "\ufeff",
    " ",
    "/ %", "run,salt,molality / (mol/kg),enthalpy / (kJ/mol)\n", "R1,KCl,0.1,17.5\n", "[[exclude]]\n", "run = 'R1'\n",
    "[campaign]\n", "[analysis.salts.KCl]\n", "[uncertainty.runs]\n", "'u(heat)' = '1 %'\n", "title = ",
    "reason = 'x'\n", "[[reference]]\n", "quantity = 'enthalpy of solution'\n", "species = 'KCl'\n",
    "u = '0.1 kJ/mol'\n", "value = '17.2 kJ/mol'\n", "source = 'x'\n",
]  # fmt: skip


@settings(max_examples=300, deadline=None)
@given(
    st.lists(st.sampled_from(PIECES), max_size=25),
    st.lists(st.sampled_from(PIECES), max_size=12),
    st.binary(max_size=4),
)
def test_nothing_but_a_campaign_or_a_campaign_error(table: list[str], toml: list[str], rest: bytes) -> None:
    with tempfile.TemporaryDirectory() as folder:
        (Path(folder) / "runs.csv").write_bytes(f"{HEADING}\n{GOOD[0]}\n{''.join(table)}".encode() + rest)
        (Path(folder) / "samples.csv").write_bytes("".join(table).encode() + rest)
        (Path(folder) / "campaign.toml").write_bytes("".join(toml).encode())
        try:
            read_campaign(folder)
        except CampaignError as fault:
            told = str(fault)
        else:
            told = "read"
    assert told
