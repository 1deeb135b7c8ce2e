"""One set of formation enthalpies, whole."""

from __future__ import annotations

from functools import lru_cache

import pandas as pd

from reconcile.reference.identities import identities, year_text
from reconcile.reference.tables import table

COLUMNS = (
    "species",
    "phase",
    "charge",
    "value",
    "u",
    "u_basis",
    "circular",
    "electron_convention",
    "source",
    "read_in",
    "year",
    "status",
    "note",
    "identity",
)


def formation_sets() -> tuple[str, ...]:
    """Names of the sets held."""
    return tuple(dict.fromkeys(table("formation_enthalpy")["reference_set"]))


def formation_enthalpies(set_name: str = "NBS-1982") -> pd.DataFrame:
    """Standard enthalpies of formation of one set at 298.15 K.

    A set is used whole: ions of one evaluation with crystals of another leave cycle errors of up to 3 kJ/mol.

    Parameters
    ----------
    set_name : str
        NBS-1982, CRC, CODATA (ions, few crystals), or a set of gaseous ions: CRC-atoms+IE, JANAF-1998.

    Returns
    -------
    frame : DataFrame
        species, phase (cr, l, aq, g), charge; value, u / (kJ/mol) and u_basis; circular (crystals: likely, possible,
        no, not assessed); electron_convention (gaseous ions); source, read_in, year, status, note; identity
        (Salt.identity of crystals, else the species).

    Raises
    ------
    KeyError
        If there is no such set; names those that there are.

    Examples
    --------
    >>> frame = formation_enthalpies().set_index(["species", "phase"])
    >>> float(frame.loc[("CaCl2·6H2O", "cr"), "value"])
    -2607.9
    """
    if set_name not in formation_sets():
        raise KeyError(f"no set of formation enthalpies {set_name}; there are {', '.join(formation_sets())}")
    return _set(set_name).copy()


@lru_cache(maxsize=8)
def _set(set_name: str) -> pd.DataFrame:
    frame = table("formation_enthalpy")
    frame = frame[frame["reference_set"].eq(set_name)].reset_index(drop=True)
    frame["value"] = frame["formation_enthalpy / (kJ/mol)"]
    frame["u"] = frame["u(formation_enthalpy) / (kJ/mol)"]
    frame["charge"] = frame["charge"].astype("int64")
    frame["year"] = [year_text(None if pd.isna(year) else int(year)) for year in frame["year"]]
    crystal = frame["phase"].eq("cr")
    frame["identity"] = frame["species"].where(~crystal, identities(frame["species"]))
    return frame[list(COLUMNS)]
