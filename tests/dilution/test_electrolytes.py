"""Which crystals share a solution, and which salts have no limit."""

import pytest

from reconcile.chemistry import read_salt
from reconcile.dilution import electrolytes
from reconcile.dilution.electrolytes import why_no_limit


def test_hydrates_share_the_solution_of_the_anhydrous_salt():
    found = electrolytes([read_salt(f) for f in ("CaCl2·6H2O", "KCl", "CaCl2", "CaCl2·2H2O")])
    assert found.of_salt.tolist() == [0, 1, 0, 0]
    assert found.charge_type == ("2-1", "1-1")


@pytest.mark.parametrize("formula", ["Na2CO3", "K2S", "Na3PO4", "KCN", "AlCl3·6H2O", "KAl(SO4)2·12H2O"])
def test_reacting_ions_are_named(formula):
    assert "reacts with water" in why_no_limit(read_salt(formula))


@pytest.mark.parametrize("formula", ["NaCl", "CaCl2·6H2O", "NaF", "NaNO2", "(NH4)2Fe(SO4)2·6H2O"])
def test_others_have_a_limit(formula):
    assert why_no_limit(read_salt(formula)) == ""
