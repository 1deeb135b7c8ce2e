"""Change of the heat capacity on dissolving, at infinite dilution."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from reconcile.chemistry import Salt
from reconcile.reference.identities import STATUS_ORDER, best_rows, identities
from reconcile.reference.tables import table

# SH88 sums of ions lie nearer to values measured for salts than the older CRC ions: NaCl −85.3 against −83.8.
SET_ORDER = {"modern": 0, "SH88": 1, "CRC": 2, "NBS-1982": 3}


@lru_cache(maxsize=1)
def _best() -> dict[str, pd.DataFrame]:
    """By state: the best value of each species."""
    frame = table("heat_capacity").rename(
        columns={"heat_capacity / (J/(K mol))": "value", "u(heat_capacity) / (J/(K mol))": "u"}
    )
    frame["set_rank"] = frame["reference_set"].map(SET_ORDER).fillna(len(SET_ORDER))
    frame["status_rank"] = frame["status"].map(STATUS_ORDER)
    frame["key"] = frame["species"]
    solids = frame["state"].isin(["crystal", "salt, infinite dilution"])
    frame.loc[solids, "key"] = identities(frame.loc[solids, "species"])
    crystal = frame["state"].eq("crystal")
    older = frame["state"].eq("ion, infinite dilution") & frame["reference_set"].eq("CRC")
    return {
        "older ion": best_rows(frame[older], "key", ("status_rank",)),
        "crystal": best_rows(frame[crystal], "key", ("status_rank", "set_rank")),
        "ion": best_rows(frame[frame["state"].eq("ion, infinite dilution")], "key", ("set_rank", "status_rank")),
        "salt": best_rows(frame[frame["state"].eq("salt, infinite dilution")], "key", ("set_rank", "status_rank")),
        "liquid": best_rows(frame[frame["state"].eq("liquid")], "key", ("status_rank", "set_rank")),
    }


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
    best = _best()
    n = len(salts)
    row = np.concatenate([np.full(len(salt.ions), i) for i, salt in enumerate(salts)]) if n else np.zeros(0, int)
    ions = [ion for salt in salts for ion, _ in salt.ions]
    count = np.array([number for salt in salts for _, number in salt.ions])
    held = best["ion"].reindex(ions)
    value = np.bincount(row, count * held["value"].to_numpy(float), n)
    variance = np.bincount(row, (count * held["u"].to_numpy(float)) ** 2, n)
    sets = held["reference_set"].to_numpy()
    mixed = _differs(row, pd.factorize(sets)[0], n)
    older = best["older ion"].reindex(ions)
    value = np.where(mixed, np.bincount(row, count * older["value"].to_numpy(float), n), value)
    variance = np.where(mixed, np.bincount(row, (count * older["u"].to_numpy(float)) ** 2, n), variance)
    recalled = np.bincount(row, held["status"].eq("recalled").to_numpy(float), n) > 0
    dissolved = best["salt"].reindex([salt.identity.rsplit("|", 1)[0] + "|H2O*0.000" for salt in salts])
    own = dissolved["value"].notna().to_numpy()
    value = np.where(own, dissolved["value"].to_numpy(float), value)
    variance = np.where(own, dissolved["u"].to_numpy(float) ** 2, variance)
    recalled = np.where(own, dissolved["status"].eq("recalled"), recalled)
    water = np.array([salt.water for salt in salts])
    liquid, u_liquid = (float(best["liquid"][column].to_dict()["H2O"]) for column in ("value", "u"))
    crystal = best["crystal"].reindex([salt.identity for salt in salts])
    change = value + water * liquid - crystal["value"].to_numpy(float)
    variance = variance + (water * u_liquid) ** 2 + crystal["u"].to_numpy(float) ** 2
    recalled |= crystal["status"].eq("recalled").to_numpy()
    known = np.isfinite(change)
    parts = np.where(own, "dissolved salt", np.where(mixed, "ions (CRC)", "ions (SH88)"))
    return pd.DataFrame(
        {
            "value": change,
            "u": np.where(known, np.sqrt(variance), np.nan),
            "source": np.where(known, parts + np.where(water > 0, " + water - crystal", " - crystal"), "").astype(
                object
            ),
            "year": "",
            "status": np.where(known, np.where(recalled, "recalled", "derived"), "").astype(object),
        },
        index=pd.Index([salt.formula for salt in salts], dtype=object),
    )


def _differs(row: NDArray[np.int64], code: NDArray[np.intp], n: int) -> NDArray[np.bool_]:
    """Whether a salt's ions come from more than one set (code −1: an ion without a value)."""
    low, high = np.full(n, 99), np.full(n, -1)
    np.minimum.at(low, row, code)
    np.maximum.at(high, row, code)
    differs: NDArray[np.bool_] = low != high
    return differs
