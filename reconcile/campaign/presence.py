"""Whether a row has a quantity, and telling the rows that lack one they need."""

from __future__ import annotations

import numpy as np

from reconcile.campaign.columns import columns_of
from reconcile.campaign.links import rows_of
from reconcile.campaign.problems import Problems
from reconcile.campaign.quantities import Built
from reconcile.campaign.tables import Booleans


def there(built: Built, name: str) -> Booleans:
    """Rows that have a value, be it a bad one."""
    present: Booleans = ~np.isnan(built.table.quantities[name].value) | built.bad[name]
    return present


def heading_of(built: Built, name: str) -> str | None:
    """The heading of a column as it was typed, None where there is no such column."""
    heading = built.headings.find(name)
    return heading.text if heading else None


def needed(built: Built, name: str, rows: Booleans, why: str, problems: Problems) -> None:
    """Tell the rows, out of some of the runs, that lack a quantity they cannot do without.

    Parameters
    ----------
    built : Built
        The table of runs.
    name : str
        The quantity.
    rows : array (n,)
        True where it is needed.
    why : str
        In words: "a heat needs the mass of the salt".
    problems : Problems
        Takes in one problem for a missing column, else one for each empty cell.
    """
    headings, table = built.headings, built.table
    if name in headings.blamed or not rows.any():
        return
    column = columns_of("runs")[name]
    heading = heading_of(built, name)
    if heading is None:
        problems.add(
            table.name, 1, None, f"there is no column `{column.heading}`; {why}", f"a column `{column.heading}`",
            "Add it.", "missing column", (1, -1),
        )  # fmt: skip
        return
    problems.add_rows(
        table.name, rows_of(rows & ~there(built, name), built), heading, f"the cell is empty; {why}",
        column.dimension, "Fill it in, or leave out the row.", "empty cell",
    )  # fmt: skip
