"""Formulae in the spellings of laboratories, and what is refused."""

import pytest

from reconcile.chemistry.formula import FormulaError, count_atoms, read_formula


@pytest.mark.parametrize(
    "typed",
    [
        "CaCl2·6H2O",
        "CaCl2.6H2O",
        "CaCl2 · 6 H2O",
        "CaCl2*6H2O",
        "CaCl2•6H2O",
        "CaCl₂·6H₂O",
        " CaCl2 . 6H2O ",
        "CaCl2⋅6H2O",
    ],
)
def test_one_spelling_for_every_dot(typed):
    formula = read_formula(typed)
    assert formula.text == "CaCl2·6H2O"
    assert formula.anhydrous_text == "CaCl2"
    assert formula.atoms == {"Ca": 1, "Cl": 2}
    assert formula.water == 6


@pytest.mark.parametrize(
    ("typed", "text", "water"),
    [
        ("CaSO4·½H2O", "CaSO4·0.5H2O", 0.5),
        ("CaSO4.0.5H2O", "CaSO4·0.5H2O", 0.5),
        ("CdCl2.2.5H2O", "CdCl2·2.5H2O", 2.5),
        ("KF·1½H2O", "KF·1.5H2O", 1.5),
        ("CdSO4·8/3H2O", "CdSO4·8/3H2O", 8 / 3),
        ("2CaSO4·H2O", "2CaSO4·H2O", 1),
        ("[Co(H2O)6]Cl2", "[Co(H2O)6]Cl2", 6),
        ("NaCl", "NaCl", 0),
    ],
)
def test_water_of_hydration(typed, text, water):
    formula = read_formula(typed)
    assert formula.text == text
    assert formula.water == pytest.approx(water, abs=1e-12)


def test_leading_count_multiplies_the_salt_and_not_the_water():
    assert read_formula("2CaSO4·H2O").atoms == {"Ca": 2, "S": 2, "O": 8}


def test_nested_brackets():
    assert count_atoms("(N(CH3)4)2SO4") == {"N": 2, "C": 8, "H": 24, "S": 1, "O": 4}


@pytest.mark.parametrize(
    ("typed", "expected"),
    [
        ("", "a formula"),
        ("CaCl2·xH2O", "known number of waters"),
        ("CaCl2·nH2O", "known number of waters"),
        ("CaCl2·aq", "known number of waters"),
        ("Ca2+", "two readings"),
        ("Na+", "not an ion"),
        ("SO4^2-", "not an ion"),
        ("SO4²⁻", "not an ion"),
        ("NaCl(s)", "without its state"),
        ("CaSO4·0,5H2O", "without commas"),
        ("CaCl2 6H2O", "a dot before water"),
        ("Ca(NO3)2)", "brackets in pairs"),
        ("Ca((NO3)2", "brackets in pairs"),
        ("CaCl2·", "both sides of the dot"),
        ("CaCl2··6H2O", "both sides of the dot"),
        ("KN03", "counts from 1 to 999"),
        ("NaXo", "is none"),
        ("H2O", "a salt"),
        ("CdSO4·8/0H2O", "a divisor"),
        ("=cmd|' /C calc'!A0", "element symbols"),
        ("Ca()Cl2", "inside the brackets"),
    ],
)
def test_refused_with_reason_and_remedy(typed, expected):
    with pytest.raises(FormulaError) as caught:
        read_formula(typed)
    assert expected in caught.value.expected
    assert caught.value.remedy.endswith((".", "?"))
    assert caught.value.found == typed
    assert caught.value.remedy in str(caught.value)


@pytest.mark.parametrize(("typed", "meant"), [("NACL", "NaCl"), ("na2so4", "Na2SO4"), ("KNO3".lower(), "KNO3")])
def test_wrong_case_is_recognised_and_not_guessed(typed, meant):
    with pytest.raises(FormulaError, match=f"Did you mean {meant}"):
        read_formula(typed)


def test_a_very_long_text_does_not_flood_the_message():
    with pytest.raises(FormulaError) as caught:
        read_formula("K" * 5000 + "?")
    assert len(str(caught.value)) < 300
