"""Tables read in a library, read there again by another way: a check of the transcription."""

import csv
from importlib.resources import files

import pytest

from reconcile.chemistry import FormulaError, read_ion, read_salt
from reconcile.reference.tables import rows

VALUE = "formation_enthalpy / (kJ/mol)"


def crc(*parts):
    with files("chemicals").joinpath(*parts).open(encoding="utf-8") as file:
        return list(csv.DictReader(file, delimiter="\t"))


def test_crystals_of_the_crc_set():
    "Every crystal found by its atoms (through the CAS number) has the value of a substance of these atoms."
    from chemicals.elements import simple_formula_parser
    from chemicals.identifiers import search_chemical

    printed = {}
    for row in crc("Heat Capacity", "CRC Standard Thermodynamic Properties of Chemical Substances.tsv"):
        if not row["Hfs"]:
            continue
        try:
            formula = search_chemical(row["CAS"]).formula
        except ValueError:
            continue
        atoms = tuple(sorted((name, float(n)) for name, n in simple_formula_parser(formula).items()))
        printed.setdefault(atoms, []).append(float(row["Hfs"]) / 1000)
    found = 0
    for row in rows("formation_enthalpy"):
        atoms = read_salt(row["species"]).elements if row["phase"] == "cr" else ()
        if row["reference_set"] == "CRC" and atoms in printed:
            found += 1
            assert any(abs(row[VALUE] - value) < 0.051 for value in printed[atoms]), row["species"]
    assert found >= 300


def test_aqueous_ions_of_the_crc_set():
    held = {
        row["species"]: row[VALUE]
        for row in rows("formation_enthalpy")
        if row["reference_set"] == "CRC" and row["phase"] == "aq"
    }
    found = 0
    for row in crc("Electrolytes", "CRC Thermodynamic Properties of Aqueous Ions.tsv"):
        try:
            name = read_ion(row["Formula"]).name
        except FormulaError:
            continue
        if row["Hf(aq)"] and name in held:
            found += 1
            assert held[name] == pytest.approx(float(row["Hf(aq)"]) / 1000, abs=0.051), name
    assert found >= 130
