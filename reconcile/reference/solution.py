"""Published enthalpies of solution at infinite dilution and 298.15 K, salt by salt."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd

from reconcile.reference.identities import identities, year_text
from reconcile.reference.limits import ranked_limits

TEXTS = ("salt", "phase", "u_basis", "source", "read_in", "year", "status", "reference_set", "taken_over_by", "note")
_NONE = {"value": np.nan, "u": np.nan, "independent": False} | dict.fromkeys(TEXTS, "")


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
    held = ranked_limits()
    taken = [_as_given(found[0]) if (found := held.get(key)) else _NONE for key in identities(formulas)]
    index = pd.Index(list(formulas), dtype=object)
    frame = pd.DataFrame(taken, index=index, columns=["value", "u", "independent", *TEXTS])
    return frame.astype({"value": float, "u": float, "independent": bool} | dict.fromkeys(TEXTS, object))


def _as_given(row: dict[str, object]) -> dict[str, object]:
    year = row["year"]
    return row | {
        "value": row["solution_enthalpy / (kJ/mol)"],
        "u": row["u(solution_enthalpy) / (kJ/mol)"],
        "independent": row["origin"] == "measurement",
        "year": year_text(year if isinstance(year, int) else None),
    }
