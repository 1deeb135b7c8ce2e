"""Standard atomic weights with their uncertainties, out of the one table that holds them."""

from __future__ import annotations

import csv
from functools import lru_cache
from pathlib import Path
from types import MappingProxyType

from reconcile.chemistry.folder import tables_folder

FILE = "atomic_weights.csv"
_VALUE, _U = "standard_atomic_weight / 1", "u(standard_atomic_weight) / 1"


@lru_cache(maxsize=1)
def standard_atomic_weights() -> MappingProxyType[str, tuple[float, float]]:
    """Element to (standard atomic weight, standard uncertainty), g/mol: IUPAC 2021, abridged.

    The published ± is the half-width of a range that holds normal materials, every value within it equally
    plausible, so u = ±/√3 (van der Veen, Meija, Possolo, Hibbert, Pure Appl. Chem. 93, 629, 2021, from memory).
    Sources and status stand in reference_data/atomic_weights.csv. Elements without a standard weight are left out,
    but for radium, which reference tables know as a salt former: mass of its nuclide 226.

    Raises
    ------
    FileNotFoundError
        If the tables are not where the package was installed.
    ValueError
        If a row of the table cannot be read; names file and row.

    Examples
    --------
    >>> value, u = standard_atomic_weights()["Cl"]
    >>> value, round(u, 4)
    (35.45, 0.0058)
    """
    return MappingProxyType(_read(tables_folder() / FILE))


def _read(path: Path) -> dict[str, tuple[float, float]]:
    """Only what formulae need; reconcile.reference holds the whole table to its description."""
    weights: dict[str, tuple[float, float]] = {}
    with path.open(encoding="utf-8", newline="") as file:
        for row, cells in enumerate(csv.DictReader(file), start=2):
            try:
                weights[cells["element"]] = float(cells[_VALUE]), float(cells[_U])
            except (KeyError, TypeError, ValueError) as fault:
                expected = f"an element and numbers below `{_VALUE}` and `{_U}`"
                raise ValueError(f"{path.name}, row {row}: expected {expected}; install reconcile anew") from fault
    return weights


ELEMENTS = frozenset(standard_atomic_weights())
