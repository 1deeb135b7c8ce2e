"""Lattices from sizes: potential energy from radii or volume, and the step from energy to enthalpy."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reconcile.chemistry.ions import Ion
from reconcile.chemistry.water import GAS_CONSTANT

Floats = NDArray[np.float64]

REPULSION = 0.0345  # nm, Kapustinskii's length of repulsion
# Ions of several atoms in a line: five squared terms of motion instead of six (structures: common practice, no source).
LINEAR = frozenset({"OH-", "SH-", "CN-", "SCN-", "OCN-", "N3-", "HF2-", "ClO-", "BrO-", "S2-2", "UO2+2"})


def kapustinskii_energy(
    ion_count: ArrayLike, charge_product: ArrayLike, distance: ArrayLike, constant: float = 120.2
) -> Floats:
    """Lattice potential energy from radii: U = K ν|z₊z₋| (1 − 0.0345/r)/r.

    Parameters
    ----------
    ion_count : float or array (n,)
        ν, ions in a formula unit.
    charge_product : float or array (n,)
        z₊z₋; its sign does not count.
    distance : float or array (n,)
        r = r₊ + r₋ / nm.
    constant : float
        K / (kJ nm/mol).

    Returns
    -------
    energy : array (n,)
        U_pot / (kJ/mol), positive: to take the crystal apart into gaseous ions at rest.

    Raises
    ------
    ValueError
        If a distance is not above 0.0345 nm; names the first position. NaN gives NaN.

    References
    ----------
    Kapustinskii, Quart. Rev. Chem. Soc. 10, 283 (1956).

    Examples
    --------
    >>> kapustinskii_energy(2, -1, 0.102 + 0.181).round()
    np.float64(746.0)
    """
    r = _above(distance, REPULSION, "distance", "nm")
    energy = constant * np.asarray(ion_count) * np.abs(charge_product) * (1 - REPULSION / r) / r
    return np.asarray(energy, dtype=np.float64)[()]


def volume_energy(charge_sum: ArrayLike, volume: ArrayLike, alpha: ArrayLike, beta: ArrayLike) -> Floats:
    """Lattice potential energy from a volume: U = 2I (α V^(−1/3) + β), 2I = Σ n z².

    Parameters
    ----------
    charge_sum : float or array (n,)
        2I = Σ n z² over the ions of a formula unit: NaCl 2, CaCl2 6.
    volume : float or array (n,)
        V of a formula unit / nm³.
    alpha, beta : float or array (n,)
        Of the stoichiometry, kJ nm/mol and kJ/mol.

    Returns
    -------
    energy : array (n,)
        U_pot / (kJ/mol). Fitted to lattices below 5000 kJ/mol: NaN above.

    Raises
    ------
    ValueError
        If a volume is not positive; names the first position. NaN gives NaN.

    References
    ----------
    Jenkins, Roobottom, Passmore, Glasser, Inorg. Chem. 38, 3609 (1999); the limit of 5000 kJ/mol: Glasser, Jenkins,
    J. Am. Chem. Soc. 122, 632 (2000), from memory.

    Examples
    --------
    >>> volume_energy(2, 0.04486, 117.3, 51.9).round()
    np.float64(764.0)
    """
    v = _above(volume, 0.0, "volume", "nm³")
    energy = np.asarray(charge_sum) * (np.asarray(alpha) / np.cbrt(v) + np.asarray(beta))
    return np.where(energy > 5000, np.nan, energy)[()]


def motion_terms(ion: Ion) -> int:
    """Squared terms of a gaseous ion's motion: 3 of translation; with rotation 5 if linear, 6 if not.

    Examples
    --------
    >>> from reconcile.chemistry import IONS
    >>> [motion_terms(IONS[name]) for name in ("Na+", "OH-", "SO4-2")]
    [3, 5, 6]
    """
    return 3 if ion.monatomic else 5 if ion.name in LINEAR else 6


def enthalpy_less_energy(counts: ArrayLike, terms: ArrayLike, temperature: ArrayLike = 298.15) -> Floats:
    """Lattice enthalpy less lattice potential energy: Σ n (c/2 − 2) RT.

    Parameters
    ----------
    counts : array (..., ions)
        n, ions of each kind in a formula unit; 0 for none.
    terms : array (..., ions)
        c of each, see motion_terms.
    temperature : float or array (...)
        K.

    Returns
    -------
    difference : array (...)
        kJ/mol: −2.5 for MX and −3.7 for MX2 of monatomic ions. Of the 2 RT, 3 are the classical vibration of the ion
        in the crystal, less 1 of pV.

    References
    ----------
    Jenkins, Roobottom, Passmore, Glasser, Inorg. Chem. 38, 3609 (1999).

    Examples
    --------
    >>> enthalpy_less_energy([[1, 1], [1, 2]], [[3, 3], [3, 3]]).round(2)
    array([-2.48, -3.72])
    """
    total = np.sum(np.asarray(counts) * (np.asarray(terms) / 2 - 2), axis=-1)
    return np.asarray(total * GAS_CONSTANT * np.asarray(temperature) / 1000, dtype=np.float64)[()]


def _above(values: ArrayLike, limit: float, name: str, unit: str) -> Floats:
    array = np.asarray(values, dtype=np.float64)
    bad = np.flatnonzero(array <= limit)
    if bad.size:
        found = float(array.flat[bad[0]])
        raise ValueError(f"{name} at position {bad[0]}: {found:g} {unit}; expected more than {limit:g} {unit}")
    return array
