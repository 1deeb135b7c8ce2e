"""Constants against CODATA 2022, atomic weights and molar masses against other tables of the IUPAC weights."""

import numpy as np
import pytest
import scipy.constants as codata

from reconcile.chemistry import read_salt, standard_atomic_weights, water


def test_constants_are_those_of_codata_2022():
    "As scipy 1.15 and later hold them."
    assert codata.Avogadro == water.AVOGADRO
    assert codata.Boltzmann == water.BOLTZMANN
    assert codata.elementary_charge == water.ELEMENTARY_CHARGE
    assert pytest.approx(codata.gas_constant, rel=1e-12) == water.GAS_CONSTANT
    # measured: 8.854 187 8188(14)e-12 F/m in CODATA 2022, from memory
    assert pytest.approx(codata.epsilon_0, rel=3e-10) == water.ELECTRIC_CONSTANT


def test_weights_and_their_half_widths_are_transcribed_rightly():
    "Against periodictable, in which they were read: a check of the transcription only."
    import periodictable

    for name, (value, u) in standard_atomic_weights().items():
        if name == "Ra":  # has no standard weight
            continue
        element = getattr(periodictable, name)
        assert value == pytest.approx(element.mass, rel=1e-12), name
        assert u * np.sqrt(3) == pytest.approx(element.mass_unc if hasattr(element, "mass_unc") else element._mass_unc)


def test_weights_against_an_independent_table():
    "chemicals holds another edition of the IUPAC weights: they differ by no more than editions do."
    from chemicals.elements import periodic_table

    for name, (value, _) in standard_atomic_weights().items():
        tolerance = 2e-3 if name in ("Ar", "Pb", "Ra", "Li", "Zn", "Se", "Mo", "Yb") else 2e-4
        assert value == pytest.approx(getattr(periodic_table, name).MW, rel=tolerance), name


@pytest.mark.parametrize(
    ("element", "value", "half_width"),
    # IUPAC 2021 abridged, Prohaska et al., Pure Appl. Chem. 94, 573, from memory
    [
        ("H", 1.0080, 0.0002),
        ("Li", 6.94, 0.06),
        ("O", 15.999, 0.001),
        ("Na", 22.98976928, 2e-8),
        ("S", 32.06, 0.02),
        ("Cl", 35.45, 0.01),
        ("K", 39.0983, 0.0001),
        ("Ca", 40.078, 0.004),
        ("Pb", 207.2, 1.1),
    ],
)
def test_some_weights_by_heart(element, value, half_width):
    held, u = standard_atomic_weights()[element]
    assert held == value
    assert u == pytest.approx(half_width / 3**0.5)


@pytest.mark.parametrize(
    "formula",
    [
        "KCl",
        "CaCl2",
        "Na2SO4",
        "Ca(NO3)2",
        "(NH4)2Fe(SO4)2",
        "K3Fe(CN)6",
        "LaCl3",
        "Ba(ClO4)2",
        "CH3COONa",
        "UO2(NO3)2",
    ],
)
def test_molar_masses_against_periodictable(formula):
    import periodictable

    assert read_salt(formula).molar_mass == pytest.approx(periodictable.formula(formula).mass, abs=1e-6)


@pytest.mark.parametrize(
    ("formula", "molar_mass"),
    # suppliers' labels as everybody knows them; from memory
    [("CaCl2·6H2O", 219.08), ("CuSO4·5H2O", 249.68), ("Na2CO3·10H2O", 286.14), ("CaSO4·0.5H2O", 145.15)],
)
def test_hydrates_weigh_what_the_label_says(formula, molar_mass):
    assert read_salt(formula).molar_mass == pytest.approx(molar_mass, abs=0.02)
