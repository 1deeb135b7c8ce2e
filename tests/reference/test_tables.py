"""What the tables hold: enough rows, no blanks where a reader would ask."""

import json

import pandas as pd
import pytest

from reconcile.chemistry import read_ion, read_salt
from reconcile.chemistry.folder import tables_folder
from reconcile.reference import heat_capacity_changes, table, table_names
from reconcile.reference.description import descriptions
from reconcile.reference.tables import rows


@pytest.mark.parametrize("name", table_names())
def test_every_row_has_source_status_set_and_basis(name):
    frame = table(name)
    for column in ("source", "status", "reference_set", "u_basis"):
        assert frame[column].str.strip().ne("").all(), column


def test_every_file_is_described_and_every_description_has_a_file():
    folder = tables_folder()
    described = {description.file for description in descriptions(folder).values()}
    assert described == {path.name for path in folder.glob("*.csv")}


def test_every_column_has_a_type_and_every_quantity_its_unit():
    for description in descriptions(tables_folder()).values():
        for column in description.columns:
            assert column.kind in ("string", "number", "integer", "boolean")
            if column.kind == "number":
                assert column.heading.endswith(f" / {column.unit}"), column.heading
                assert column.unit


def test_the_description_is_a_data_package():
    package = json.loads((tables_folder() / "datapackage.json").read_text(encoding="utf-8"))
    assert package["$schema"].startswith("https://datapackage.org/profiles/2.0")
    for resource in package["resources"]:
        names = [field["name"] for field in resource["schema"]["fields"]]
        assert len(set(names)) == len(names)
        assert set(resource["schema"]["primaryKey"]) <= set(names)


def test_rows_and_frame_are_one_truth():
    "lookup reads plain rows, reports read frames: cell by cell the same."
    for name in table_names():
        held, frame = rows(name), table(name)
        assert len(held) == len(frame)
        for column in frame.columns:
            cells = [row[column] for row in held]
            for cell, framed in zip(cells, frame[column], strict=True):
                missing = cell is None or cell != cell
                assert pd.isna(framed) if missing else framed == cell, (name, column)


def test_enough_is_held():
    formation = table("formation_enthalpy")
    nbs = formation[formation["reference_set"].eq("NBS-1982")]
    assert formation.loc[formation["phase"].eq("cr"), "species"].nunique() >= 150
    assert nbs["phase"].eq("cr").sum() >= 150
    assert formation.loc[formation["phase"].eq("aq"), "species"].nunique() >= 60
    assert formation.loc[formation["phase"].eq("g"), "species"].nunique() >= 30
    solution = table("solution_enthalpy")
    limits = solution[solution["molality / (mol/kg)"].eq(0)]
    assert limits["salt"].nunique() >= 130
    assert limits["salt"].str.contains("H2O").sum() >= 20
    assert table("pitzer_enthalpy")["electrolyte"].nunique() >= 60
    assert table("lattice_enthalpy")["salt"].nunique() >= 60
    hydration = table("hydration_enthalpy")
    assert hydration.groupby("proton_hydration / (kJ/mol)")["ion"].nunique().max() >= 40
    salts = [read_salt(name) for name in formation.loc[formation["phase"].eq("cr"), "species"].unique()]
    changes = heat_capacity_changes(salts)["value"].dropna()
    assert len({read_salt(name).electrolyte for name in changes.index}) >= 40


def test_salts_and_ions_are_spelled_as_chemistry_spells_them():
    for name, column in (("solution_enthalpy", "salt"), ("solubility", "salt"), ("pitzer_enthalpy", "electrolyte")):
        frame = table(name)
        crystals = frame[frame["phase"].eq("cr")] if "phase" in frame else frame
        for formula in crystals[column]:
            if formula not in ("CO(NH2)2", "C12H22O11"):
                assert read_salt(formula).formula == formula
    for name in ("hydration_enthalpy", "ionic_radius"):
        for ion in table(name)["ion"]:
            assert read_ion(ion).name == ion


def test_one_row_a_salt_of_a_set_however_it_is_spelled():
    formation = table("formation_enthalpy")
    crystals = formation[formation["phase"].eq("cr")]
    keys = [
        (read_salt(name).identity, which)
        for name, which in zip(crystals["species"], crystals["reference_set"], strict=True)
    ]
    assert len(set(keys)) == len(keys)


def test_a_table_is_handed_out_as_a_copy():
    first = table("solubility")
    first["source"] = "spoilt"
    assert not table("solubility")["source"].eq("spoilt").any()


def test_thermochemical_radii_of_two_years_are_two_sets():
    frame = table("ionic_radius").set_index(["ion", "reference_set"])["radius / nm"]
    assert frame["NO3-", "thermochemical-1979"] == 0.179
    assert frame["NO3-", "thermochemical-1999"] == 0.200


def test_gaseous_ions_contain_the_electron_as_a_gas():
    formation = table("formation_enthalpy").set_index(["species", "phase", "reference_set"])
    # 217.998 (CODATA, H atom) + 1312.05 (ionisation of H at 0 K) + 5/2 RT = 6.197 kJ/mol
    assert formation.loc[("H+", "g", "CRC-atoms+IE"), "formation_enthalpy / (kJ/mol)"] == pytest.approx(
        1536.25, abs=0.1
    )
