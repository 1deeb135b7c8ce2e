"""Relative apparent molar enthalpy of a solution: the limiting law and the empirical terms."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.constants import R

Floats = NDArray[np.float64]

B = 1.2  # kg^½ mol^−½; K. S. Pitzer, J. Phys. Chem. 77 (1973) 268 (from memory)
TERMS = ("beta0", "beta1", "c_phi", "beta2")  # the order of the four parameters everywhere


@dataclass(frozen=True, slots=True, eq=False)
class Composition:
    """What the equation must know of an electrolyte; arrays of one shape, of electrolytes or of runs."""

    charge_factor: Floats  # ½ Σ ν z²: ionic strength over molality
    cation_anion: Floats  # ν₊ν₋, 1; NaN for more than two ions
    third: Floats  # ν₊z₊ / (2|z₊z₋|^½), the factor of C^φ; NaN for more than two ions
    alpha1: Floats  # kg^½ mol^−½
    alpha2: Floats  # kg^½ mol^−½, 0 where β⁽²⁾ is not used

    def of(self, code: NDArray[np.int64]) -> Composition:
        """The same, spread over runs."""
        return Composition(
            self.charge_factor[code], self.cation_anion[code], self.third[code], self.alpha1[code], self.alpha2[code]
        )


def composition(ions: list[tuple[tuple[str, float], ...]], charges: list[tuple[int, ...]]) -> Composition:
    """Composition of electrolytes from their ions (name, ν) and charges; cations first."""
    factor = np.array(
        [0.5 * sum(nu * z * z for (_, nu), z in zip(i, q, strict=True)) for i, q in zip(ions, charges, strict=True)]
    )
    pair = np.array([len(q) == 2 for q in charges])
    nu = np.array([[i[0][1], i[-1][1]] for i in ions]).reshape(-1, 2)
    z = np.array([[q[0], q[-1]] for q in charges], float).reshape(-1, 2)
    two_two = pair & (np.abs(z) >= 2).all(axis=1)
    product = np.abs(z[:, 0] * z[:, 1])
    return Composition(
        factor,
        np.where(pair, nu[:, 0] * nu[:, 1], np.nan),
        np.where(pair, nu[:, 0] * z[:, 0] / (2 * np.sqrt(product)), np.nan),
        np.where(two_two, 1.4, 2.0),
        np.where(two_two, 12.0, 0.0),
    )


def decay(x: ArrayLike) -> Floats:
    """g(x) = 2[1 − (1 + x)e⁻ˣ]/x², 1 at x = 0.

    Examples
    --------
    >>> decay([0.0, 2.0]).round(6)
    array([1.      , 0.296997])
    """
    x = np.asarray(x, float)
    safe = np.where(x > 1e-4, x, 1.0)
    return np.where(x > 1e-4, 2 * (1 - (1 + safe) * np.exp(-safe)) / safe**2, 1 - 2 * x / 3)


def limiting_law(molality: ArrayLike, charge_factor: ArrayLike, slope: ArrayLike) -> Floats:
    """Debye–Hückel term of L_φ: (A_H/b)(I/m) ln(1 + b√I), which is ν|z₊z₋|(A_H/2b) ln(1 + b√I) for two ions.

    Parameters
    ----------
    molality : array (n,)
        mol/kg.
    charge_factor : array (n,) or float
        I/m = ½Σνz².
    slope : array (n,) or float
        A_H / (kJ kg^½ mol^−3/2).

    Returns
    -------
    array (n,), kJ/mol.

    References
    ----------
    K. S. Pitzer, Activity Coefficients in Electrolyte Solutions, 2nd ed., ch. 3 (1991), from memory.

    Examples
    --------
    >>> limiting_law([1e-8], 1.0, 1.986).round(7)  # A_H √m for a 1–1 salt
    array([0.0001986])
    """
    factor = np.asarray(charge_factor, float)
    return np.asarray(np.asarray(slope) * factor / B * np.log1p(B * np.sqrt(factor * np.asarray(molality, float))))


def empirical_terms(
    molality: ArrayLike, temperature: ArrayLike, what: Composition, reference: float = 298.15
) -> Floats:
    """The four empirical terms of L_φ, each for one unit of its scaled parameter.

    The scaled parameters p are what an ionic strength of 1 mol/kg would do: with s = ½Σνz² the terms are
    s·m, s·m·g(α₁√I), (s·m)² and s·m·g(α₂√I), times (T/T_ref)², in kJ/mol. `from_scaled` turns p into β's.

    Parameters
    ----------
    molality, temperature : array (n,)
        mol/kg and K.
    what : Composition of n runs
    reference : float
        K, at which a scaled parameter has its unit size.

    Returns
    -------
    array (n, 4), in the order of TERMS; the last column is 0 where β⁽²⁾ is not used.
    """
    strength = np.asarray(molality, float) * what.charge_factor
    root = np.sqrt(strength)
    fourth = np.where(what.alpha2 > 0, decay(what.alpha2 * root), 0.0)
    columns = [strength, strength * decay(what.alpha1 * root), strength**2, strength * fourth]
    return np.column_stack(columns) * ((np.asarray(temperature, float) / reference) ** 2)[:, None]


def scale_of_parameters(what: Composition, temperature: float = 298.15) -> Floats:
    """Scaled parameter per unit of ∂β⁽⁰⁾/∂T, ∂β⁽¹⁾/∂T, ∂C^φ/∂T, ∂β⁽²⁾/∂T: array (B, 4), kJ/mol per kg/(mol K).

    From L_φ = … − 2ν₊ν₋RT²[m β⁽⁰⁾ᴸ + m g β⁽¹⁾ᴸ + m² ν₊z₊ Cᵠᴸ/(2|z₊z₋|^½)]; NaN for more than two ions.
    """
    front = -2 * what.cation_anion * R * temperature**2 / 1000 / what.charge_factor
    third = front * what.third / what.charge_factor
    return np.column_stack([front, front, third, front])
