"""Change of the heat capacity on dissolving, at infinite dilution, salt by salt."""

from __future__ import annotations

from collections.abc import Sequence

import pandas as pd

from reconcile.chemistry import Salt
from reconcile.reference.capacities import heat_capacity_change


def heat_capacity_changes(salts: Sequence[Salt]) -> pd.DataFrame:
    """ΔsolC_p° of each salt at 298.15 K: dissolved salt + h H2O(l) − crystal.

    The dissolved salt is its own measured value where one is held (NaCl, KCl, NaOH), else the sum of its ions, all of
    one set: SH88, else CRC.

    Parameters
    ----------
    salts : sequence of Salt (n,)

    Returns
    -------
    frame : DataFrame (n rows)
        Index: Salt.formula. value, u / (J/(K mol)), NaN where a part is missing; source (which parts), year, status
        ("derived", or "recalled" where a part is from memory).

    Examples
    --------
    >>> from reconcile.chemistry import read_salt
    >>> frame = heat_capacity_changes([read_salt("NaCl")])
    >>> round(float(frame.loc["NaCl", "value"]), 1)
    -134.3
    """
    changes = [heat_capacity_change(salt) for salt in salts]
    return pd.DataFrame(
        {
            "value": pd.Series([change.value for change in changes], dtype=float),
            "u": pd.Series([change.u for change in changes], dtype=float),
            "source": pd.Series([change.source for change in changes], dtype=object),
            "year": pd.Series([""] * len(changes), dtype=object),
            "status": pd.Series([change.status for change in changes], dtype=object),
        }
    ).set_axis(pd.Index([salt.formula for salt in salts], dtype=object), axis=0)
