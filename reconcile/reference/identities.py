"""Species of the tables by what they are, not by how they are spelled."""

from __future__ import annotations

from collections.abc import Iterable
from functools import lru_cache

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


def year_text(year: int | None) -> str:
    """The year of a source as text; "" where none is known."""
    return "" if year is None else str(year)
