"""Species of the tables by what they are, not by how they are spelled."""

from __future__ import annotations

from collections.abc import Iterable
from functools import lru_cache

import pandas as pd

from reconcile.chemistry import FormulaError, read_salt

STATUS_ORDER = {"read": 0, "derived": 1, "recalled": 2}  # of rows of one quantity, species and set


@lru_cache(maxsize=65536)
def identity(species: str) -> str:
    """Identity of a salt (Salt.identity); of anything else its own spelling."""
    try:
        return read_salt(species).identity
    except FormulaError:
        return species


def identities(species: Iterable[str]) -> list[str]:
    """Identity of each."""
    return [identity(str(name)) for name in species]


def best_rows(frame: pd.DataFrame, key: str, order: Iterable[str]) -> pd.DataFrame:
    """The first row of each key when sorted by these columns of ranks, indexed by the key."""
    ranked = frame.sort_values(list(order), kind="stable")
    return ranked.drop_duplicates(key).set_index(key)


def at(frame: pd.DataFrame, keys: list[str], index: Iterable[str], texts: Iterable[str]) -> pd.DataFrame:
    """Rows of a table at these keys under a new index; NaN where there is none, "" in the columns of text."""
    found = frame.reindex(keys)
    found.index = pd.Index(list(index), dtype=object)
    for column in texts:
        found[column] = found[column].astype(object).where(found[column].notna(), "")
    return found


def years(frame: pd.DataFrame) -> list[str]:
    """Years of the sources as text; "" where none is known."""
    return ["" if pd.isna(year) else str(int(year)) for year in frame["year"]]
