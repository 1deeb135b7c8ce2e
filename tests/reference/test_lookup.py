"""lookup: spelling, what is used and why, the nearest known."""

import json

import pytest

from reconcile.reference import UnknownSpeciesError, lookup


def used(result, quantity):
    return [value for value in result["values"] if value["used"] and value["quantity"] == quantity]


@pytest.mark.parametrize(
    ("typed", "name", "kind"),
    [
        ("CaCl2·6H2O", "CaCl2·6H2O", "salt"),
        ("CaCl2.6H2O", "CaCl2·6H2O", "salt"),
        ("Ca(NO3)2", "Ca(NO3)2", "salt"),
        ("Na+", "Na+", "ion"),
        ("SO4-2", "SO4-2", "ion"),
        ("SO4^2-", "SO4-2", "ion"),
        ("SO4²⁻", "SO4-2", "ion"),
        ("H2O", "H2O", "substance"),
    ],
)
def test_any_usual_spelling(typed, name, kind):
    result = lookup(typed)
    assert (result["species"], result["kind"]) == (name, kind)
    assert result["values"]
    assert json.loads(json.dumps(result, allow_nan=False)) == result


def test_one_value_of_a_quantity_is_used_and_it_says_why():
    result = lookup("NaCl")
    (solution,) = used(result, "solution_enthalpy")
    assert solution["value"] == 3.88  # Parker 1965, read, before Archer's 3.86, recalled
    assert solution["status"] == "read"
    (crystal,) = used(result, "formation_enthalpy")
    assert (crystal["value"], crystal["reference_set"]) == (-411.153, "NBS-1982")  # Wagman et al. 1982
    assert "rests" in crystal["why"]
    (slope,) = {value["conditions"] for value in used(result, "beta0_derivative")}
    assert "1.972" in slope
    for value in result["values"]:
        assert value["why"]
        assert value["source"]
        assert value["status"] in ("read", "recalled", "derived")
        assert value["unit"]


def test_another_set_may_be_chosen_whole():
    (crystal,) = used(lookup("NaCl", formation_set="CRC"), "formation_enthalpy")
    assert (crystal["value"], crystal["reference_set"]) == (-411.2, "CRC")  # CRC Handbook, 95th ed.


def test_a_cycle_is_not_called_a_measurement():
    (solution,) = used(lookup("CaCl2·6H2O"), "solution_enthalpy")
    assert "no independent value" in solution["why"]
    assert solution["status"] == "derived"


def test_other_temperatures_are_shown_and_not_used():
    values = [value for value in lookup("BeSO4")["values"] if value["quantity"] == "solution_enthalpy"]
    old = [value for value in values if value["reference_set"] == "Bichowsky-Rossini-1936"]
    assert old
    assert not any(value["used"] for value in old)


def test_crystals_of_the_same_solution_are_named():
    assert set(lookup("CaCl2")["crystals"]) >= {"CaCl2·2H2O", "CaCl2·6H2O"}


@pytest.mark.parametrize(("typed", "near"), [("NaCll", "NaCl"), ("Na2SO5", "Na2SO4"), ("KCl2", "KCl"), ("Kz+", "K+")])
def test_an_unknown_one_gets_the_nearest(typed, near):
    with pytest.raises(UnknownSpeciesError) as caught:
        lookup(typed)
    assert near in caught.value.nearest
    assert near in str(caught.value)


def test_a_salt_of_which_nothing_is_held_gets_the_nearest():
    result = lookup("Rb2SeO4")
    assert result["values"] == []
    assert "Rb2SO4" in result["nearest"]
