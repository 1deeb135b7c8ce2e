"""Solubilities as molalities, for cautions only."""

from __future__ import annotations

from collections.abc import Sequence

import pandas as pd

from reconcile.chemistry import FormulaError, read_salt
from reconcile.reference.identities import at, years
from reconcile.reference.tables import table

TEXTS = ("source", "year", "status")


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
    frame = table("solubility")
    salts = [read_salt(formula) for formula in frame["salt"]]
    mass = pd.Series([salt.molar_mass_anhydrous for salt in salts], index=frame.index)
    frame["molality"] = 10 * frame["solubility / (g/100 g)"] / mass
    frame["u"] = 10 * frame["u(solubility) / (g/100 g)"] / mass
    frame["year"] = years(frame)
    frame.index = pd.Index([salt.electrolyte for salt in salts])
    return at(frame[["molality", "u", *TEXTS]], [_electrolyte(formula) for formula in formulas], formulas, TEXTS)


def _electrolyte(formula: str) -> str:
    try:
        return read_salt(formula).electrolyte
    except FormulaError:
        return formula
