"""Published enthalpies of solution at infinite dilution and 298.15 K, salt by salt."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import pandas as pd

from reconcile.reference.identities import STATUS_ORDER, at, best_rows, identities, years
from reconcile.reference.tables import table

# Evaluated tables before single papers; an ions-minus-crystal row only where nobody measured.
SET_ORDER = {"Parker-1965": 0, "certificates": 1, "Archer-1992": 2, "measured": 3}
TEXTS = ("salt", "phase", "u_basis", "source", "read_in", "year", "status", "reference_set", "taken_over_by", "note")
COLUMNS = ("value", "u", "independent", *TEXTS)


@lru_cache(maxsize=1)
def ranked() -> pd.DataFrame:
    """Rows at infinite dilution and 298.15 K, best first, with why the best of a salt is the best."""
    frame = table("solution_enthalpy")
    frame = frame[frame["molality / (mol/kg)"].eq(0) & frame["temperature / K"].eq(298.15)].copy()
    frame["value"] = frame["solution_enthalpy / (kJ/mol)"]
    frame["u"] = frame["u(solution_enthalpy) / (kJ/mol)"]
    frame["independent"] = frame["origin"].eq("measurement")
    frame["year"] = years(frame)
    frame["identity"] = identities(frame["salt"])
    frame["origin_rank"] = (~frame["independent"]).astype(int)
    frame["status_rank"] = frame["status"].map(STATUS_ORDER)
    frame["set_rank"] = frame["reference_set"].map(SET_ORDER).fillna(len(SET_ORDER))
    return frame.sort_values(["origin_rank", "status_rank", "set_rank"], kind="stable")


def solution_enthalpies(formulas: Sequence[str]) -> pd.DataFrame:
    """The published value that a report compares with, for each formula.

    Of several rows of a salt: a measurement before ions minus crystal, a read figure before one from memory, the
    evaluated table (Parker 1965) before single papers. Rows at other temperatures or molalities are never taken.

    Parameters
    ----------
    formulas : sequence of str (n,)
        Salts as weighed, any spelling.

    Returns
    -------
    frame : DataFrame (n rows)
        Index: the formulas as asked. value, u / (kJ/mol), NaN where none is held; independent (False for ions minus
        crystal, and where none is held); u_basis, source, read_in, year, status, reference_set, taken_over_by (the
        formation set computed with the value), note, and salt and phase as the table has them.

    Examples
    --------
    >>> frame = solution_enthalpies(["KCl", "CaCl2.6H2O"])
    >>> [float(value) for value in frame["value"]], [bool(value) for value in frame["independent"]]
    ([17.22, 15.77], [True, False])
    """
    best = best_rows(ranked(), "identity", ("origin_rank", "status_rank", "set_rank"))
    found = at(best[list(COLUMNS)], identities(formulas), formulas, TEXTS)
    found["independent"] = found["independent"].eq(True)
    return found
