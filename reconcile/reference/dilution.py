"""Published parameters of the relative apparent molar enthalpy, electrolyte by electrolyte."""

from __future__ import annotations

from functools import lru_cache

import pandas as pd

from reconcile.chemistry import read_salt
from reconcile.reference.identities import year_text
from reconcile.reference.tables import table

DILUTE = 0.2  # mol/kg; a ∂Cᵠ/∂T of exactly 0 in a set fitted up to here was not determined
_NAMES = {
    "beta0_derivative / (kg/(mol K))": "beta0",
    "beta1_derivative / (kg/(mol K))": "beta1",
    "beta2_derivative / (kg/(mol K))": "beta2",
    "c_phi_derivative / (kg^2/(mol^2 K))": "c_phi",
    "alpha1 / (kg^0.5 mol^-0.5)": "alpha1",
    "alpha2 / (kg^0.5 mol^-0.5)": "alpha2",
    "b / (kg^0.5 mol^-0.5)": "b",
    "debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)": "slope",
    "temperature / K": "temperature",
    "max_molality / (mol/kg)": "max_molality",
}


@lru_cache(maxsize=1)
def _all() -> pd.DataFrame:
    frame = table("pitzer_enthalpy").rename(columns=_NAMES)
    frame["u_relative_enthalpy"] = frame["u(relative_apparent_enthalpy) / (J/mol)"] / 1000
    not_determined = frame["c_phi"].eq(0) & ~(frame["max_molality"] > DILUTE)
    frame["c_phi_determined"] = ~not_determined
    frame["charge_type"] = [read_salt(electrolyte).charge_type for electrolyte in frame["electrolyte"]]
    frame["year"] = [year_text(None if pd.isna(year) else int(year)) for year in frame["year"]]
    columns = ["electrolyte", "charge_type", "beta0", "beta1", "beta2", "c_phi", "c_phi_determined", "alpha1", "alpha2"]
    columns += ["b", "slope", "temperature", "max_molality", "u_relative_enthalpy", "u_basis", "preferred", "why"]
    return frame[[*columns, "reference_set", "source", "read_in", "year", "status", "note"]]


def all_dilution_parameters() -> pd.DataFrame:
    """Every set held, a row a set; columns as dilution_parameters, and electrolyte, preferred."""
    return _all().copy()


def dilution_parameters() -> pd.DataFrame:
    """The preferred set of each electrolyte.

    A set belongs to the Debye–Hückel slope it was fitted with. Preferred is a set fitted with our own slope where
    there is one, else one that rests on heats of dilution; `why` says it.

    Returns
    -------
    frame : DataFrame
        Index: electrolyte, as Salt.electrolyte. charge_type; beta0, beta1, beta2 = ∂β/∂T / (kg/(mol K)), beta2 NaN
        but for 2–2; c_phi = ∂Cᵠ/∂T / (kg²/(mol² K)); c_phi_determined (False: an exact 0 that means unknown); alpha1,
        alpha2, b / (kg^½ mol^−½); slope = A_H of the fit / (kJ kg^½ mol^−3/2), NaN where unknown; temperature / K;
        max_molality / (mol/kg), NaN where unknown; u_relative_enthalpy / (kJ/mol), of L_φ, NaN where none is known;
        why, reference_set, source, read_in, year, status, note.

    Examples
    --------
    >>> frame = dilution_parameters()
    >>> frame.loc["NaCl", "slope"], bool(frame.loc["KClO4", "c_phi_determined"])
    (np.float64(1.972), False)
    """
    frame = _all()
    return frame[frame["preferred"]].drop(columns="preferred").set_index("electrolyte")
