"""One table by name, checked at first use: as plain rows, or as a DataFrame."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from typing import TYPE_CHECKING

from reconcile.chemistry.folder import tables_folder
from reconcile.reference.checking import ReferenceDataError, Row, read_rows
from reconcile.reference.description import TableDescription, descriptions
from reconcile.reference.rules import broken_rules

if TYPE_CHECKING:
    import pandas as pd


def load(name: str, folder: Path) -> list[Row]:
    """Rows of one table, held to the folder's datapackage.json and to the rules of this package.

    Parameters
    ----------
    name : str
        As in datapackage.json: formation_enthalpy.
    folder : Path
        Holds the table and its description.

    Returns
    -------
    rows : list of dict
        See reconcile.reference.checking.read_rows.

    Raises
    ------
    ReferenceDataError
        With file, row and reason of every fault.
    KeyError
        If no table has this name; names those that there are.
    """
    description = _described(name, folder)
    rows = read_rows((folder / description.file).read_text(encoding="utf-8"), description)
    faults = broken_rules(rows, description)
    if faults:
        raise ReferenceDataError(faults)
    return rows


def _described(name: str, folder: Path) -> TableDescription:
    known = descriptions(folder)
    if name not in known:
        raise KeyError(f"no table {name}; there are {', '.join(known)}")
    return known[name]


@lru_cache(maxsize=64)
def rows(name: str) -> tuple[Row, ...]:
    """Rows of a table of this installation, checked and kept: for reading only, and without pandas."""
    return tuple(load(name, tables_folder()))


@lru_cache(maxsize=64)
def _frame(name: str) -> pd.DataFrame:
    import pandas as pd

    description = _described(name, tables_folder())
    held = rows(name)
    columns: dict[str, object] = {}
    for column in description.columns:
        cells = [row[column.heading] for row in held]
        columns[column.heading] = pd.array(cells, dtype="Int64") if column.kind == "integer" else cells
    return pd.DataFrame(columns | {"row": [row["row"] for row in held]})


def table(name: str) -> pd.DataFrame:
    """A table of this installation, checked and kept; a copy, so that nobody changes it for others.

    Text is "" and a number NaN where nothing stands; integers are Int64; `row` counts as a spreadsheet does.

    Examples
    --------
    >>> frame = table("formation_enthalpy")
    >>> float(frame.loc[frame["species"].eq("Cl-") & frame["reference_set"].eq("NBS-1982"), frame.columns[3]].iloc[0])
    -167.159
    """
    return _frame(name).copy()


def table_names() -> tuple[str, ...]:
    """Names of all tables, in the order of datapackage.json."""
    return tuple(descriptions(tables_folder()))
