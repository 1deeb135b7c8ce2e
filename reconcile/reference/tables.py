"""One table by name, checked at first use."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path

import pandas as pd

from reconcile.reference.checking import ReferenceDataError, read_table
from reconcile.reference.description import descriptions
from reconcile.reference.folder import tables_folder
from reconcile.reference.rules import broken_rules


def load(name: str, folder: Path) -> pd.DataFrame:
    """One table of a folder, held to the folder's datapackage.json and to the rules of this package.

    Parameters
    ----------
    name : str
        As in datapackage.json: formation_enthalpy.
    folder : Path
        Holds the table and its description.

    Returns
    -------
    frame : DataFrame
        See reconcile.reference.checking.read_table.

    Raises
    ------
    ReferenceDataError
        With file, row and reason of every fault.
    KeyError
        If no table has this name; names those that there are.
    """
    known = descriptions(folder)
    if name not in known:
        raise KeyError(f"no table {name}; there are {', '.join(known)}")
    description = known[name]
    frame = read_table((folder / description.file).read_text(encoding="utf-8"), description)
    faults = broken_rules(frame, description)
    if faults:
        raise ReferenceDataError(faults)
    return frame


@lru_cache(maxsize=64)
def _loaded(name: str) -> pd.DataFrame:
    return load(name, tables_folder())


def table(name: str) -> pd.DataFrame:
    """A table of this installation, checked and kept; a copy, so that nobody changes it for others.

    Examples
    --------
    >>> frame = table("formation_enthalpy")
    >>> float(frame.loc[frame["species"].eq("Cl-") & frame["reference_set"].eq("NBS-1982"), frame.columns[3]].iloc[0])
    -167.159
    """
    return _loaded(name).copy()


def table_names() -> tuple[str, ...]:
    """Names of all tables, in the order of datapackage.json."""
    return tuple(descriptions(tables_folder()))
