"""The list of ions."""

import pytest

from reconcile.chemistry import IONS, FormulaError, read_ion

COMMON = (
    "H+ Li+ Na+ K+ Rb+ Cs+ NH4+ Ag+ Tl+ Mg+2 Ca+2 Sr+2 Ba+2 Zn+2 Cd+2 Cu+2 Pb+2 Al+3 La+3 Fe+3 Th+4 F- Cl- Br- I- "
    "OH- NO3- NO2- ClO4- SCN- CN- HCO3- CH3COO- HCOO- CO3-2 SO4-2 SO3-2 S2O3-2 CrO4-2 PO4-3 HPO4-2 H2PO4- "
    "Fe(CN)6-3 Fe(CN)6-4"
)


def test_enough_ions_for_thousands_of_salts():
    cations = [ion for ion in IONS.values() if ion.in_salts and ion.charge > 0]
    anions = [ion for ion in IONS.values() if ion.in_salts and ion.charge < 0]
    assert len(cations) + len(anions) >= 100
    assert len(cations) * len(anions) >= 5000


@pytest.mark.parametrize("name", COMMON.split())
def test_common_ions_are_held_under_their_name(name):
    assert read_ion(name).name == name


def test_no_two_ions_of_formulae_have_the_same_atoms_and_charge_unless_their_spelling_tells():
    seen = {}
    for ion in IONS.values():
        twin = seen.setdefault((ion.atoms, ion.charge), ion)
        assert twin is ion or (twin.spellings and ion.spellings), (twin.name, ion.name)


@pytest.mark.parametrize(
    ("typed", "name"),
    [
        ("SO4^2-", "SO4-2"),
        ("SO4^{2-}", "SO4-2"),
        ("SO4^-2", "SO4-2"),
        ("SO4²⁻", "SO4-2"),
        ("SO₄²⁻", "SO4-2"),
        ("Ca²⁺", "Ca+2"),
        ("Ca^2+", "Ca+2"),
        ("Na⁺", "Na+"),
        ("Na+1", "Na+"),
        ("CHO2-", "HCOO-"),
        ("CHOO-", "HCOO-"),
        ("C2H3O2-", "CH3COO-"),
        ("[Fe(CN)6]-3", "Fe(CN)6-3"),
        ("NCS-", "SCN-"),
    ],
)
def test_usual_spellings(typed, name):
    assert read_ion(typed).name == name


def test_an_ending_with_two_readings_is_refused():
    with pytest.raises(FormulaError) as caught:
        read_ion("Ca2+")
    assert "Ca+2" in caught.value.remedy


@pytest.mark.parametrize(("typed", "near"), [("Kz+", "K+"), ("MnO5-", "MnO4-")])
def test_an_unknown_ion_gets_the_nearest(typed, near):
    with pytest.raises(FormulaError, match="Did you mean") as caught:
        read_ion(typed)
    assert near in str(caught.value)
