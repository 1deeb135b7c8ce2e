"""Heat of a run to molar enthalpy of solution, and masses to molality over all water."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reconcile.chemistry.water import MOLAR_MASS_OF_WATER

Floats = NDArray[np.float64]


def molar_enthalpy(heat: ArrayLike, mass: ArrayLike, molar_mass: ArrayLike, mass_fraction: ArrayLike = 1.0) -> Floats:
    """Molar enthalpy of solution, run by run: ΔsolH = q M / (w m).

    Parameters
    ----------
    heat : array (n,)
        Absorbed by the dissolution, q / J; positive when the solution cools.
    mass : array (n,)
        Salt as weighed, m / g.
    molar_mass : array (n,) or float
        Of the formula as weighed, M / (g/mol).
    mass_fraction : array (n,) or float
        Of that formula in the lot, w / 1.

    Returns
    -------
    enthalpy : array (n,)
        ΔsolH / (kJ/mol).

    Raises
    ------
    ValueError
        If an amount is not positive; names the first position.

    References
    ----------
    Definition: IUPAC Green Book, 3rd ed., 2.11 (from memory).

    Examples
    --------
    >>> molar_enthalpy([235.86, 117.93], [1.0, 0.5], 74.551).round(3)
    array([17.584, 17.584])
    """
    pure = np.multiply(mass, mass_fraction)
    bad = np.flatnonzero(~(pure > 0))  # so written, NaN is bad too
    if bad.size:
        raise ValueError(f"salt at position {bad[0]}: {float(pure.flat[bad[0]])} g; expected more than 0 g")
    return np.asarray(np.asarray(heat, float) * np.asarray(molar_mass, float) / pure / 1000)


def molality_over_all_water(
    mass: ArrayLike,
    water: ArrayLike,
    molar_mass: ArrayLike,
    mass_fraction: ArrayLike = 1.0,
    hydrate_water: ArrayLike = 0.0,
    lot_water: ArrayLike = 0.0,
) -> Floats:
    """Molality of the final solution: amount of salt over solvent, water of hydration and water of the lot.

    Parameters
    ----------
    mass, water : array (n,)
        Salt as weighed and solvent before the salt, both in g.
    molar_mass : array (n,) or float
        Of the formula as weighed, g/mol.
    mass_fraction : array (n,) or float
        Of that formula in the lot, 1.
    hydrate_water : array (n,) or float
        Moles of water in a mole of the formula, 1.
    lot_water : array (n,) or float
        Mass fraction of additional water in the lot, 1.

    Returns
    -------
    molality : array (n,)
        mol/kg.

    References
    ----------
    Definition of molality: IUPAC Green Book, 3rd ed., 2.10 (from memory); all water is solvent.

    Examples
    --------
    A mole of CaCl2·6H2O in 891.91 g of water is 1 mol in 1 kg.

    >>> molality_over_all_water([219.07], [891.91], 219.07, 1.0, 6.0).round(4)
    array([1.])
    """
    mass, water = np.asarray(mass, float), np.asarray(water, float)
    amount = mass * np.asarray(mass_fraction, float) / np.asarray(molar_mass, float)
    solvent = (
        water + amount * np.asarray(hydrate_water, float) * MOLAR_MASS_OF_WATER + mass * np.asarray(lot_water, float)
    )
    return np.asarray(1000 * amount / solvent)
