"""Which published enthalpy of solution stands for a salt: the one rule that reports and lookup follow."""

from __future__ import annotations

from functools import lru_cache

from reconcile.reference.checking import Row
from reconcile.reference.identities import STATUS_ORDER, identity
from reconcile.reference.tables import rows

# Evaluated tables before single papers; an ions-minus-crystal row only where nobody measured.
SET_ORDER = {"Parker-1965": 0, "certificates": 1, "Archer-1992": 2, "measured": 3}


def is_limit(row: Row) -> bool:
    """Whether a row of solution_enthalpy.csv is for infinite dilution and 298.15 K; a blank molality is not."""
    return bool(row["molality / (mol/kg)"] == 0 and row["temperature / K"] == 298.15)


def rank(row: Row) -> tuple[int, int, int]:
    """Lower is better: measured before derived, read before recalled, evaluated before single."""
    measured = row["origin"] == "measurement"
    return int(not measured), STATUS_ORDER[row["status"]], SET_ORDER.get(row["reference_set"], len(SET_ORDER))


@lru_cache(maxsize=1)
def ranked_limits() -> dict[str, tuple[Row, ...]]:
    """By identity of the salt: its rows at infinite dilution and 298.15 K, the one that a report takes first."""
    held: dict[str, list[Row]] = {}
    for row in sorted(filter(is_limit, rows("solution_enthalpy")), key=rank):
        held.setdefault(identity(row["salt"]), []).append(row)
    return {key: tuple(found) for key, found in held.items()}
