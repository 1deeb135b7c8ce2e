"""Solubilities as molalities, for cautions only."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd

from reconcile.chemistry import FormulaError, read_salt
from reconcile.reference.identities import year_text
from reconcile.reference.tables import rows


def solubility(formulas: Sequence[str]) -> pd.DataFrame:
    """Molality of the saturated solution at 25 °C, m = 10 s/M with s in g of anhydrous salt per 100 g of water.

    Parameters
    ----------
    formulas : sequence of str (n,)
        Salts in any spelling; a hydrate has the solubility of its electrolyte.

    Returns
    -------
    frame : DataFrame (n rows)
        Index: the formulas as asked. molality, u / (mol/kg), NaN where none is held; source, year, status.

    Examples
    --------
    >>> float(solubility(["NaCl"]).loc["NaCl", "molality"].round(2))
    6.16
    """
    held: dict[str, tuple[float, float, str, str, str]] = {}
    for row in rows("solubility"):
        salt = read_salt(row["salt"])
        per_gram = 10 / salt.molar_mass_anhydrous
        molality = per_gram * row["solubility / (g/100 g)"], per_gram * row["u(solubility) / (g/100 g)"]
        held[salt.electrolyte] = *molality, row["source"], year_text(row["year"]), row["status"]
    found = [held.get(_electrolyte(formula), (np.nan, np.nan, "", "", "")) for formula in formulas]
    frame = pd.DataFrame(found, columns=["molality", "u", "source", "year", "status"], dtype=object)
    frame.index = pd.Index(list(formulas), dtype=object)
    return frame.astype({"molality": float, "u": float})


def _electrolyte(formula: str) -> str:
    try:
        return read_salt(formula).electrolyte
    except FormulaError:
        return formula
