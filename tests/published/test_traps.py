"""The traps of thermochemical tables, each as a test; those that the loader refuses are in tests/reference."""

import numpy as np
import pytest

from reconcile import reference

FORMATION, SOLUTION = "formation_enthalpy / (kJ/mol)", "solution_enthalpy / (kJ/mol)"


def solution_rows(reference_set):
    frame = reference.table("solution_enthalpy")
    return frame[frame["reference_set"].eq(reference_set)]


def test_heat_evolved_was_turned_into_heat_absorbed():
    "Bichowsky, Rossini 1936 print heat evolved: with our sign their rows lie nearer to the other values of the salt."
    old = solution_rows("Bichowsky-Rossini-1936")
    best = reference.solution_enthalpies(list(old["salt"]))
    best = best["value"].where(best["reference_set"].ne("Bichowsky-Rossini-1936")).to_numpy()
    value = old[SOLUTION].to_numpy()
    tested = np.isfinite(best)
    nearer = abs(value - best) < abs(-value - best)
    assert tested.sum() >= 25
    assert nearer[tested].mean() > 0.9
    assert old["temperature / K"].eq(291.15).all()


@pytest.mark.parametrize(
    ("formula", "absorbed"),
    # every teaching laboratory knows these by feel: common practice, no source
    [("NH4NO3", True), ("KNO3", True), ("CaCl2", False), ("NaOH", False), ("CaCl2·6H2O", True), ("CuSO4", False)],
)
def test_cold_packs_and_hot_packs(formula, absorbed):
    value = reference.solution_enthalpies([formula])["value"].iloc[0]
    assert abs(value) > 5
    assert (value > 0) == absorbed


def test_electron_convention():
    "H⁺: 217.998 (atom) + 1312.05 (ionisation) + 6.197 (5/2 RT); Cl⁻: 121.301 − 348.57 − 6.197; CODATA, from memory."
    gas = reference.formation_enthalpies("CRC-atoms+IE").set_index("species")
    thermal = 2.5 * 8.314462618e-3 * 298.15
    assert thermal == pytest.approx(6.197, abs=0.001)
    assert gas.loc["H+", "value"] == pytest.approx(217.998 + 1312.05 + thermal, abs=0.1)
    assert gas.loc["Cl-", "value"] == pytest.approx(121.301 - 348.57 - thermal, abs=0.1)
    # Na⁺ 609.3 and Ca⁺² 1925.9 in this convention, one and two times 6.2 less in the other: CRC Handbook, from memory
    assert gas.loc["Na+", "value"] == pytest.approx(609.3, abs=0.8)
    assert gas.loc["Ca+2", "value"] == pytest.approx(1925.9, abs=1.5)


def test_old_electron_affinity_of_chlorine():
    "JANAF's Cl⁻ lies 0.5 below the modern one; and its set is not the one that lattices are computed with."
    modern = reference.formation_enthalpies("CRC-atoms+IE").set_index("species")["value"]
    janaf = reference.formation_enthalpies("JANAF-1998").set_index("species")
    assert modern["Cl-"] - janaf.loc["Cl-", "value"] == pytest.approx(0.5, abs=0.1)
    assert "affinity" in janaf.loc["Cl-", "note"]
    lattice = reference.table("lattice_enthalpy")
    assert set(lattice.loc[lattice["status"].eq("derived"), "gas_ions"]) == {"CRC-atoms+IE"}


def test_lattice_energy_is_not_lattice_enthalpy():
    "2.5 kJ/mol for MX, 3.7 for MX2; the calculated column that circulates as experimental, and CaCl2 of 2022, say so."
    frame = reference.table("lattice_enthalpy").set_index(["salt", "reference_set"])
    assert set(frame["quantity"]) == {"lattice enthalpy", "lattice potential energy"}
    jenkins = frame.xs("Jenkins-1999", level="reference_set")
    assert jenkins["basis"].eq("calculated").all()
    assert jenkins["note"].str.contains("calculated").all()
    value = frame["lattice_enthalpy / (kJ/mol)"]
    assert value["CaCl2", "Kaya-2022"] - value["CaCl2", "CRC"] == pytest.approx(109, abs=1)
    assert "not to be used" in frame.loc[("CaCl2", "Kaya-2022"), "note"]


def test_old_and_new_thermochemical_radii():
    "NO3⁻ 0.179 nm (1979), 0.200 nm (1999); BF4⁻ went down, NO2⁻ up: no common factor turns one set into the other."
    radius = reference.table("ionic_radius").set_index(["ion", "reference_set"])["radius / nm"]
    ions = ("NO3-", "NO2-", "CN-", "BF4-", "ClO4-")
    ratio = {ion: radius[ion, "thermochemical-1999"] / radius[ion, "thermochemical-1979"] for ion in ions}
    assert radius["NO3-", "thermochemical-1979"] == 0.179
    assert radius["NO3-", "thermochemical-1999"] == 0.200
    assert ratio["NO3-"] > 1.1
    assert ratio["BF4-"] < 0.95


def test_only_the_new_radii_serve_lattice_energies():
    from reconcile.chemistry import read_salt
    from reconcile.reference.lattice import lattice_energies

    r = 0.138 + 0.200  # nm: K⁺ Shannon VI, NO3⁻ of 1999
    (energy,) = lattice_energies([read_salt("KNO3")])["Kapustinskii"]
    assert energy == pytest.approx(2 * 120.2 / r * (1 - 0.0345 / r))


def test_finite_molality_that_is_quoted_as_a_limit():
    "17.41 and 17.55 kJ/mol for KCl: no molality is told, so they are never taken."
    rows = reference.table("solution_enthalpy")
    rows = rows[rows["salt"].eq("KCl") & rows[SOLUTION].isin([17.41, 17.55])]
    assert len(rows) == 2
    assert rows["molality / (mol/kg)"].isna().all()
    assert reference.solution_enthalpies(["KCl"])["value"].iloc[0] == 17.22  # Parker 1965


def test_parameters_are_stored_with_their_slope_or_say_that_it_is_not_told():
    frame = reference.all_dilution_parameters()
    fitted_here = frame["reference_set"].str.startswith("refit")
    assert frame.loc[fitted_here, "slope"].isin([1.972, 1.986]).all()
    assert fitted_here.sum() >= 10
    assert frame.loc[fitted_here, "note"].str.contains("only with the slope of its fit").all()


def test_circular_crystals_are_marked_and_come_from_parker():
    "46 crystals of the NBS set give Parker's value back within 0.06: loaded as no source of their own."
    nbs = reference.formation_enthalpies()
    likely = nbs[nbs["circular"].eq("likely")]
    assert len(likely) == 46
    published = reference.solution_enthalpies(list(likely["species"]))
    assert set(published["reference_set"]) == {"Parker-1965"}


def test_the_scale_is_part_of_every_single_ion_value():
    frame = reference.table("hydration_enthalpy")
    assert frame["proton_hydration / (kJ/mol)"].notna().all()
    assert set(frame["proton_hydration / (kJ/mol)"]) == {-1091.0, -1103.0, -1150.1, -1084.0}
    proton = frame[frame["ion"].eq("H+") & frame["status"].eq("derived")]
    same = proton["hydration_enthalpy / (kJ/mol)"] - proton["proton_hydration / (kJ/mol)"]
    assert same.abs().max() < 0.06


def test_salts_that_react_with_water_say_so():
    "CO3²⁻, S²⁻, PO4³⁻, CN⁻, Al³⁺, Fe³⁺, Cr³⁺ (design): every limit computed from them warns, and only few others do."
    from reconcile.chemistry import FormulaError, read_salt

    reactive = {"CO3-2", "S-2", "PO4-3", "CN-", "Al+3", "Fe+3", "Cr+3"}
    rows = solution_rows("NBS-1982")
    warned = {}
    for formula, note in zip(rows["salt"], rows["note"], strict=True):
        try:
            ions = {name for name, _ in read_salt(formula).ions}
        except FormulaError:
            continue
        warned.setdefault(bool(ions & reactive), []).append("reacts with water" in note or "not measurable" in note)
    assert len(warned[True]) >= 10
    assert all(warned[True])
    assert sum(warned[False]) < len(warned[False]) / 2
