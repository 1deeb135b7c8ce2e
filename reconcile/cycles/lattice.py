"""Lattice enthalpies that no table has: from sizes, with the uncertainty that the same equations show elsewhere."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd

from reconcile.chemistry import Salt
from reconcile.reference.lattice import ALL, METHODS, lattice_energies, lattice_spread

UNTRIED = 1e3  # puts a method that was not tried on the class behind every one that was


def estimated_lattice_enthalpies(salts: Sequence[Salt]) -> pd.DataFrame:
    """Δ_latt H° at 298.15 K from a volume or from radii, salt by salt.

    Of the methods that reach a salt and were tried on its class the one with the least spread is taken
    (reference.lattice), else the one with the least spread over all salts; the potential energy is divided by 1 +
    offset, and taken to the enthalpy by (c/2 − 2)RT an ion.

    Parameters
    ----------
    salts : sequence of Salt (n,)

    Returns
    -------
    frame : DataFrame (n rows)
        Index: Salt.formula. value, u / (kJ/mol), NaN for hydrates, double salts, and where neither volume nor radii
        are held; method; class ("all salts" where the class is too small for a spread of its own); salts: how many
        the spread rests on. Two salts of one class share the error of its offset: u is not independent.

    References
    ----------
    Kapustinskii, Quart. Rev. Chem. Soc. 10, 283 (1956); Jenkins, Roobottom, Passmore, Glasser, Inorg. Chem. 38, 3609
    (1999).

    Examples
    --------
    >>> from reconcile.chemistry import read_salt
    >>> frame = estimated_lattice_enthalpies([read_salt("NaCl"), read_salt("CaCl2·6H2O")])
    >>> bool(abs(frame.loc["NaCl", "value"] - 787) < 15), frame["method"].tolist()
    (True, ['Kapustinskii', ''])
    """
    energies, spread = lattice_energies(salts), lattice_spread()
    n = len(salts)
    value, u = np.full(n, np.nan), np.full(n, np.nan)
    taken = pd.DataFrame({"method": [""] * n, "class": [""] * n, "salts": [0] * n}, dtype=object)
    least = np.full(n, np.inf)
    for method in METHODS:
        own = pd.Index([(method, name) for name in energies["class"]])
        known = own.isin(spread.index)
        keys = [key if held else (method, ALL) for key, held in zip(own, known, strict=True)]
        of_class = spread.loc[keys] if n else spread.iloc[:0]
        computed = energies[method].to_numpy() / (1 + of_class["offset"].to_numpy())
        relative = of_class["spread"].to_numpy()
        order = np.where(known, relative, UNTRIED + relative)
        better = np.isfinite(computed) & (order < least)
        least = np.where(better, order, least)
        value = np.where(better, computed - energies["less_enthalpy"].to_numpy(), value)
        u = np.where(better, computed * relative, u)
        taken.loc[better, "method"] = method
        taken.loc[better, "class"] = np.array([name for _, name in keys], dtype=object)[better]
        taken.loc[better, "salts"] = of_class["salts"].to_numpy()[better]
    return pd.DataFrame({"value": value, "u": u}).join(taken).set_index(energies.index)
