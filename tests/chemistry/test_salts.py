"""Salts taken apart into ions."""

from itertools import product
from math import gcd

import pytest
from hypothesis import given
from hypothesis import strategies as st

from reconcile.chemistry import IONS, FormulaError, read_salt

CATIONS = [ion for ion in IONS.values() if ion.in_salts and ion.charge > 0 and ion.name != "H+"]
ANIONS = [ion for ion in IONS.values() if ion.in_salts and ion.charge < 0]


def written(ion, count):
    if count == 1:
        return ion.body
    return f"{ion.body}{count}" if ion.monatomic else f"({ion.body}){count}"


def pair(cation, anion):
    shared = gcd(cation.charge, anion.charge)
    return -anion.charge // shared, cation.charge // shared


@pytest.mark.parametrize(
    ("typed", "ions"),
    [
        ("NH4NO3", {"NH4+": 1, "NO3-": 1}),
        ("NaHCO3", {"Na+": 1, "HCO3-": 1}),
        ("KH2PO4", {"K+": 1, "H2PO4-": 1}),
        ("K3Fe(CN)6", {"K+": 3, "Fe(CN)6-3": 1}),
        ("K4[Fe(CN)6]·3H2O", {"K+": 4, "Fe(CN)6-4": 1}),
        ("AgCs(NO3)2", {"Ag+": 1, "Cs+": 1, "NO3-": 2}),
        ("(NH4)2Fe(SO4)2·6H2O", {"NH4+": 2, "Fe+2": 1, "SO4-2": 2}),
        ("KAl(SO4)2·12H2O", {"K+": 1, "Al+3": 1, "SO4-2": 2}),
        ("NH4Fe(SO4)2·12H2O", {"NH4+": 1, "Fe+3": 1, "SO4-2": 2}),
        ("KCl·MgCl2·6H2O", {"K+": 1, "Mg+2": 1, "Cl-": 3}),
        ("CH3COONa", {"Na+": 1, "CH3COO-": 1}),
        ("NaC2H3O2", {"Na+": 1, "CH3COO-": 1}),
        ("NaCHO2", {"Na+": 1, "HCOO-": 1}),
        ("Na2C2O4", {"Na+": 2, "C2O4-2": 1}),
        ("Hg2Cl2", {"Hg2+2": 1, "Cl-": 2}),
        ("HgCl2", {"Hg+2": 1, "Cl-": 2}),
        ("FeCl2", {"Fe+2": 1, "Cl-": 2}),
        ("FeCl3", {"Fe+3": 1, "Cl-": 3}),
        ("Fe(OH)2", {"Fe+2": 1, "OH-": 2}),
        ("KHF2", {"K+": 1, "HF2-": 1}),
        ("InI3", {"In+3": 1, "I-": 3}),
        ("UO2(NO3)2·6H2O", {"UO2+2": 1, "NO3-": 2}),
        ("N(CH3)4Br", {"N(CH3)4+": 1, "Br-": 1}),
        ("(HOCH2)3CNH3Cl", {"(HOCH2)3CNH3+": 1, "Cl-": 1}),
    ],
)
def test_known_salts(typed, ions):
    salt = read_salt(typed)
    assert dict(salt.ions) == ions
    assert sum(charge * count for charge, (_, count) in zip(salt.charges, salt.ions, strict=True)) == 0
    assert list(salt.charges) == sorted(salt.charges, key=lambda charge: charge < 0), "cations first"


@pytest.mark.parametrize(
    ("typed", "kind"),
    [("NaCl", "1-1"), ("CaCl2", "2-1"), ("Na2SO4", "1-2"), ("MgSO4", "2-2"), ("LaCl3", "3-1"), ("K3Fe(CN)6", "1-3")],
)
def test_charge_type(typed, kind):
    assert read_salt(typed).charge_type == kind
    assert read_salt("AgCs(NO3)2").charge_type == "double"


def test_crystals_of_one_solution_share_the_electrolyte_and_not_the_identity():
    crystals = [read_salt(text) for text in ("CaCl2", "CaCl2·2H2O", "CaCl2·6H2O")]
    assert {salt.electrolyte for salt in crystals} == {"CaCl2"}
    assert len({salt.identity for salt in crystals}) == 3


@pytest.mark.parametrize(
    "spellings",
    [
        ("CaCl2·6H2O", "CaCl2.6H2O", "Ca Cl2 * 6 H2O"),
        ("NaCH3COO", "CH3COONa", "NaC2H3O2", "NaCH3CO2"),
        ("Mg(H2O)6Cl2", "MgCl2·6H2O"),
        ("CdSO4·8/3H2O", "CdSO4·2.667H2O"),
        ("Fe(NH4)2(SO4)2·6H2O", "(NH4)2Fe(SO4)2·6H2O"),
    ],
)
def test_spellings_of_one_salt_have_one_identity(spellings):
    assert len({read_salt(text).identity for text in spellings}) == 1


@pytest.mark.parametrize(
    ("typed", "meant"),
    [
        ("KCl2", "KCl"),
        ("CaCl", "CaCl2"),
        ("CaNO3", r"Ca\(NO3\)2"),
        ("CaPO4", r"Ca3\(PO4\)2"),
        ("FeCl4", "FeCl2 or FeCl3"),
    ],
)
def test_unbalanced_formulae_name_the_salt_that_balances(typed, meant):
    with pytest.raises(FormulaError, match=f"Did you mean {meant}") as caught:
        read_salt(typed)
    assert caught.value.found == typed
    assert "balance" in caught.value.expected


@pytest.mark.parametrize("typed", ["CO(NH2)2", "CH4N2O", "C12H22O11", "NH3", "H2O2", "MgO", "C2H5OH"])
def test_what_is_no_salt_is_not_made_one(typed):
    with pytest.raises(FormulaError):
        read_salt(typed)


def test_a_doubled_formula_unit_is_refused_unless_it_is_written_so():
    with pytest.raises(FormulaError, match="NaCl"):
        read_salt("Na2Cl2")
    assert dict(read_salt("2CaSO4·H2O").ions) == {"Ca+2": 2, "SO4-2": 2}


def test_an_acid_is_remarked():
    assert "acid" in read_salt("HCl").reading_note
    assert read_salt("NaCl").reading_note == ""


def test_every_pair_of_ions_is_read_back():
    """All but formulae that mean another salt: the metal twice, or a metal that has two charges."""
    wrong = []
    for cation, anion in product(CATIONS, ANIONS):
        cations, anions = pair(cation, anion)
        text = written(cation, cations) + written(anion, anions)
        try:
            read = [name for name, _ in read_salt(text).ions]
        except FormulaError:
            read = []
        if read != [cation.name, anion.name]:
            wrong.append((cation, anion))
    assert len(CATIONS) * len(ANIONS) > 12000
    assert len(wrong) < 30
    for cation, anion in wrong:
        shared = {name for name, _ in cation.atoms} & {name for name, _ in anion.atoms}
        charges = {ion.charge for ion in CATIONS if ion.atoms == cation.atoms}
        assert shared or len(charges) > 1 or cation.name == "Hg2+2", (cation.name, anion.name)


@given(st.sampled_from(CATIONS[:12]), st.sampled_from(ANIONS[:40]), st.integers(0, 12))
def test_molar_mass_is_that_of_the_parts(cation, anion, water):
    cations, anions = pair(cation, anion)
    text = written(cation, cations) + written(anion, anions)
    try:
        salt = read_salt(text + (f"·{water}H2O" if water else ""))
    except FormulaError:
        return
    parts = read_salt(text).molar_mass
    assert salt.water == water
    assert salt.molar_mass == pytest.approx(parts + water * 18.015, abs=1e-9)  # 2 × 1.008 + 15.999
    assert salt.molar_mass_anhydrous == pytest.approx(parts, abs=1e-9)


@given(st.text(max_size=12))
def test_any_text_is_a_salt_or_a_formula_error(text):
    try:
        mass = read_salt(text).molar_mass
    except FormulaError as error:
        mass = len(error.expected) * len(error.remedy)
    assert mass > 0
