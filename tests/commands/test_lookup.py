"""reconcile lookup prints for people and as JSON."""

import json

from click.testing import CliRunner

from reconcile.commands.lookup import command


def test_for_a_person():
    result = CliRunner().invoke(command, ["CaCl2.6H2O"])
    assert result.exit_code == 0
    assert result.output.startswith("CaCl2·6H2O: Ca+2 + 2 Cl-, 219.068 g/mol")
    assert "* -2607.9" in result.output  # Wagman et al. 1982
    assert "recalled" in result.output


def test_as_json():
    result = CliRunner().invoke(command, ["SO4^2-", "--json"])
    assert result.exit_code == 0
    assert json.loads(result.output)["species"] == "SO4-2"


def test_an_unknown_species_names_the_nearest():
    result = CliRunner().invoke(command, ["NaCll"])
    assert result.exit_code != 0
    assert "Did you mean NaCl" in result.output
