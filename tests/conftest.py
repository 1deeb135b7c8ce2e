"""A campaign written into a temporary folder, read and analysed."""

import pytest

from reconcile import analyse, read_campaign
from reconcile.campaign.writing import write_campaign


@pytest.fixture
def analysed(tmp_path):
    """Function of the tables and of campaign.toml's text: the Analysis of the campaign that they make."""
    number = iter(range(1000))

    def make(runs, toml=None, **tables):
        folder = tmp_path / f"campaign {next(number)}"
        write_campaign(folder, toml, {"runs": runs, **tables})
        return analyse(read_campaign(folder))

    return make
