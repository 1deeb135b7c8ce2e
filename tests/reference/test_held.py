"""lookup: spelling, what is used and why, the nearest known."""

import json
import subprocess
import sys

import pytest

import reconcile
from reconcile import reference
from reconcile.chemistry import read_salt
from reconcile.commands import main
from reconcile.reference import UnknownSpeciesError, lookup
from reconcile.reference.species import known_salts


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


def test_lookup_and_reports_take_the_same_values():
    "For every salt held: enthalpy of solution, heat capacity change, parameters, crystal of the set."
    salts = [name for name in known_salts() if name not in ("CO(NH2)2", "C12H22O11")]
    solution = reference.solution_enthalpies(salts)["value"]
    change = reference.heat_capacity_changes([read_salt(name) for name in salts])["value"]
    dilution = reference.dilution_parameters()["beta0"]
    crystals = reference.formation_enthalpies()
    crystals = crystals[crystals["phase"].eq("cr")].set_index("identity")["value"]
    for name in salts:
        salt, result = read_salt(name), lookup(name)
        expected = {
            "solution_enthalpy": solution[name],
            "heat_capacity_change": change[salt.formula],
            "beta0_derivative": dilution.get(salt.electrolyte, float("nan")),
            "formation_enthalpy": crystals.get(salt.identity, float("nan")),
        }
        for quantity, value in expected.items():
            shown = [entry["value"] for entry in used(result, quantity)]
            assert shown == ([] if value != value else [value]), (name, quantity)


def test_it_is_public_and_lazy():
    assert reconcile.lookup is lookup
    program = (
        "import sys; from reconcile import lookup;"
        "[lookup(text) for text in ('CaCl2.6H2O', 'Ca(NO3)2', 'Na+', 'SO4^2-', 'Rb2SeO4', 'H2O')];"
        "print([name for name in ('numpy', 'pandas', 'scipy', 'pint', 'chemicals') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


@pytest.mark.parametrize(
    ("typed", "status"),
    [("CaCl2·6H2O", 0), ("SO4^2-", 0), ("Rb2SeO4", 0), ("NaCll", 2), ("Ca2+", 2), ("", 2), ("Xx", 2)],
)
def test_exit_status_of_the_command(typed, status, capsys):
    assert main(["lookup", typed]) == status
    shown = capsys.readouterr()
    assert bool(shown.out) == (status == 0)
    assert bool(shown.err) == (status == 2)
    assert main(["lookup", typed, "--json"]) == status
    text = capsys.readouterr().out
    assert json.loads(text)["species"] if status == 0 else text == ""
