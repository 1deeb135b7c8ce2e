"""A spoilt table stops with file, row and reason: one test a kind of fault."""

import shutil

import pytest

from reconcile.chemistry.folder import tables_folder
from reconcile.reference import ReferenceDataError, table_names
from reconcile.reference.tables import load, table


@pytest.fixture
def folder(tmp_path):
    copy = tmp_path / "reference_data"
    shutil.copytree(tables_folder(), copy)
    return copy


def spoil(folder, name, row, column, cell):
    """Put a cell into a row (as a spreadsheet counts) of a table."""
    import csv

    path = folder / f"{name}.csv"
    lines = list(csv.reader(path.read_text(encoding="utf-8").splitlines()))
    lines[row - 1][lines[0].index(column)] = cell
    with path.open("w", newline="", encoding="utf-8") as file:
        csv.writer(file, lineterminator="\n").writerows(lines)


def row_of(name, **cells):
    frame = table(name)
    for column, cell in cells.items():
        frame = frame[frame[column] == cell]
    return int(frame["row"].iloc[0])


@pytest.mark.parametrize("name", table_names())
def test_every_table_loads(name):
    assert len(load(name, tables_folder())) > 5


@pytest.mark.parametrize("name", table_names())
def test_a_missing_source(folder, name):
    spoil(folder, name, 4, "source", "")
    with pytest.raises(ReferenceDataError) as caught:
        load(name, folder)
    assert caught.value.problems == (f"{name}.csv, row 4, `source`: empty. Expected an entry: every row has one here.",)


@pytest.mark.parametrize("name", table_names())
def test_a_wrong_status(folder, name):
    spoil(folder, name, 3, "status", "believed")
    with pytest.raises(
        ReferenceDataError, match=rf'{name}\.csv, row 3, `status`: "believed"\. Expected read or recalled'
    ):
        load(name, folder)


def test_a_wrong_unit_in_a_heading(folder):
    path = folder / "solution_enthalpy.csv"
    text = path.read_text(encoding="utf-8")
    path.write_text(text.replace("solution_enthalpy / (kJ/mol)", "solution_enthalpy / (kcal/mol)", 1), encoding="utf-8")
    with pytest.raises(ReferenceDataError, match=r"row 1, heading: \"solution_enthalpy / \(kcal/mol\)\""):
        load("solution_enthalpy", folder)


def test_a_repeated_row(folder):
    path = folder / "formation_enthalpy.csv"
    lines = path.read_text(encoding="utf-8").splitlines()
    path.write_text("\n".join([*lines, lines[9]]) + "\n", encoding="utf-8")
    with pytest.raises(ReferenceDataError, match=rf"row {len(lines) + 1}: .* stands already in row 10"):
        load("formation_enthalpy", folder)


def test_an_impossible_sign_of_a_lattice_enthalpy(folder):
    spoil(folder, "lattice_enthalpy", 12, "lattice_enthalpy / (kJ/mol)", "-787")
    with pytest.raises(ReferenceDataError, match=r'row 12, `lattice_enthalpy.*"-787"\. Expected more than 0'):
        load("lattice_enthalpy", folder)


def test_an_impossible_sign_of_a_hydration_enthalpy(folder):
    spoil(folder, "hydration_enthalpy", 5, "hydration_enthalpy / (kJ/mol)", "403")
    with pytest.raises(ReferenceDataError, match=r"row 5, .*less than 0"):
        load("hydration_enthalpy", folder)


@pytest.mark.parametrize("cell", ["nan", "NaN", "inf", "1,5", "3.88*", "", "0x10", " 3.88"])
def test_no_number(folder, cell):
    spoil(folder, "solution_enthalpy", 7, "solution_enthalpy / (kJ/mol)", cell)
    with pytest.raises(ReferenceDataError, match=r"solution_enthalpy\.csv, row 7, `solution_enthalpy"):
        load("solution_enthalpy", folder)


def test_a_negative_uncertainty_and_one_without_basis(folder):
    spoil(folder, "solution_enthalpy", 7, "u(solution_enthalpy) / (kJ/mol)", "-0.2")
    with pytest.raises(ReferenceDataError, match=r"row 7, .*more than 0"):
        load("solution_enthalpy", folder)
    spoil(folder, "solution_enthalpy", 7, "u(solution_enthalpy) / (kJ/mol)", "0.2")
    spoil(folder, "solution_enthalpy", 7, "u_basis", "none")
    with pytest.raises(ReferenceDataError, match=r"row 7, `u_basis`"):
        load("solution_enthalpy", folder)
    spoil(folder, "solution_enthalpy", 7, "u_basis", "a guess")
    with pytest.raises(ReferenceDataError, match=r"row 7, `u_basis`.*of the form"):
        load("solution_enthalpy", folder)


def test_a_short_row(folder):
    path = folder / "solubility.csv"
    lines = path.read_text(encoding="utf-8").splitlines()
    lines[5] = "KCl,35.5"
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    with pytest.raises(ReferenceDataError, match=r"solubility\.csv, row 6: 2 cells"):
        load("solubility", folder)


def test_all_faults_at_once(folder):
    spoil(folder, "solubility", 3, "source", "")
    spoil(folder, "solubility", 9, "solubility / (g/100 g)", "much")
    spoil(folder, "solubility", 11, "status", "sure")
    with pytest.raises(ReferenceDataError) as caught:
        load("solubility", folder)
    assert len(caught.value.problems) == 3


def test_rounded_water_in_a_set_with_hydrates(folder):
    row = row_of("formation_enthalpy", species="H2O", reference_set="NBS-1982")
    spoil(folder, "formation_enthalpy", row, "formation_enthalpy / (kJ/mol)", "-285.8")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, .*Expected -285.83"):
        load("formation_enthalpy", folder)


def test_the_printed_nitrate_ion_of_the_nbs_list(folder):
    row = row_of("formation_enthalpy", species="NO3-", reference_set="NBS-1982")
    spoil(folder, "formation_enthalpy", row, "formation_enthalpy / (kJ/mol)", "-205.0")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, .*contradicts its own nitrates"):
        load("formation_enthalpy", folder)


def test_a_gaseous_ion_without_electron_convention(folder):
    row = row_of("formation_enthalpy", species="Na+", phase="g")
    spoil(folder, "formation_enthalpy", row, "electron_convention", "")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, `electron_convention`"):
        load("formation_enthalpy", folder)


def test_a_gaseous_proton_without_its_electron(folder):
    "1530.0 is 1536.25 less 6.197: the other convention."
    row = row_of("formation_enthalpy", species="H+", phase="g", reference_set="CRC-atoms+IE")
    spoil(folder, "formation_enthalpy", row, "formation_enthalpy / (kJ/mol)", "1530.05")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, .*electron as a gas"):
        load("formation_enthalpy", folder)


def test_a_radius_of_1979_under_the_name_of_1999(folder):
    row = row_of("ionic_radius", ion="NO3-", reference_set="thermochemical-1999")
    spoil(folder, "ionic_radius", row, "radius / nm", "0.179")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, .*1979"):
        load("ionic_radius", folder)


def test_a_half_width_taken_for_a_standard_uncertainty(folder):
    row = row_of("atomic_weights", element="Li")
    spoil(folder, "atomic_weights", row, "u(standard_atomic_weight) / 1", "0.06")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, .*over √3"):
        load("atomic_weights", folder)


def test_an_unbalanced_crystal_and_a_wrong_charge(folder):
    row = row_of("formation_enthalpy", species="NaCl", reference_set="NBS-1982")
    spoil(folder, "formation_enthalpy", row, "species", "NaCl2")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, `species`.*balance"):
        load("formation_enthalpy", folder)
    spoil(folder, "formation_enthalpy", row, "species", "NaCl")
    row = row_of("formation_enthalpy", species="Ca+2", reference_set="NBS-1982")
    spoil(folder, "formation_enthalpy", row, "charge", "1")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, `charge`"):
        load("formation_enthalpy", folder)


def test_potential_energy_and_lattice_enthalpy_are_kept_apart(folder):
    frame = table("lattice_enthalpy")
    row = int(frame.loc[frame["quantity"].eq("lattice enthalpy") & frame["salt"].eq("NaCl"), "row"].iloc[0])
    spoil(folder, "lattice_enthalpy", row, "quantity", "lattice potential energy")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, `gas_ions`"):
        load("lattice_enthalpy", folder)


def test_a_year_1936_row_at_25_degrees(folder):
    row = row_of("solution_enthalpy", reference_set="Bichowsky-Rossini-1936")
    spoil(folder, "solution_enthalpy", row, "temperature / K", "298.15")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, .*18 °C"):
        load("solution_enthalpy", folder)


def test_two_preferred_parameter_sets_or_none(folder):
    row = row_of("pitzer_enthalpy", electrolyte="NaCl", preferred=False)
    spoil(folder, "pitzer_enthalpy", row, "preferred", "true")
    spoil(folder, "pitzer_enthalpy", row, "why", "because")
    with pytest.raises(ReferenceDataError, match="2 sets"):
        load("pitzer_enthalpy", folder)


def test_a_refit_without_its_slope(folder):
    row = row_of("pitzer_enthalpy", electrolyte="NaCl", reference_set="refit-6.17", preferred=True)
    spoil(folder, "pitzer_enthalpy", row, "debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)", "")
    with pytest.raises(ReferenceDataError, match=rf"row {row}, `debye_hueckel_slope"):
        load("pitzer_enthalpy", folder)


def test_a_slope_in_the_older_convention(folder):
    spoil(folder, "debye_hueckel_slope", 3, "convention", "L_φ = ν|z₊z₋| (A_H/3) √I")
    with pytest.raises(ReferenceDataError, match=r"row 3, `convention`"):
        load("debye_hueckel_slope", folder)


def test_a_hydration_enthalpy_without_its_scale(folder):
    spoil(folder, "hydration_enthalpy", 8, "proton_hydration / (kJ/mol)", "")
    with pytest.raises(ReferenceDataError, match=r"row 8, `proton_hydration"):
        load("hydration_enthalpy", folder)


def test_an_unknown_table_is_named():
    with pytest.raises(KeyError, match="there are formation_enthalpy"):
        load("entropy", tables_folder())
