"""A campaign's runs laid out, and extrapolated, without cycles and the rest."""

import pytest

from reconcile import read_campaign, reference
from reconcile.calorimetry import reduce_runs
from reconcile.campaign.writing import write_campaign
from reconcile.chemistry import water
from reconcile.dilution import dilute, heat_capacity_change, published_sets
from reconcile.dilution.layout import lay_out


@pytest.fixture(scope="session")
def sets():
    return published_sets(reference.dilution_parameters(), float(water.debye_hueckel_slope(298.15)))


@pytest.fixture
def laid_out(tmp_path, sets):
    """Function of the tables: the Layout (`fit=False`) or the Dilution of the campaign that they make."""
    number = iter(range(1000))

    def make(runs, toml=None, fit=True, **tables):
        folder = tmp_path / f"campaign {next(number)}"
        write_campaign(folder, toml, {"runs": runs, **tables})
        campaign = read_campaign(folder)
        change = heat_capacity_change(campaign.salts, reference.heat_capacity_changes(campaign.salts))
        return (dilute if fit else lay_out)(campaign, reduce_runs(campaign), sets, change)

    return make
