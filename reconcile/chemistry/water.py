"""Water at 100 kPa: density, permittivity, heat capacity, Debye–Hückel slopes."""

from __future__ import annotations

from functools import lru_cache
from typing import NamedTuple

import numpy as np
from numpy.polynomial import Chebyshev
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]

MOLAR_MASS_OF_WATER = 18.015  # g/mol; from the IUPAC 2021 weights H 1.008, O 15.999 (from memory)
LOWEST, HIGHEST = 273.15, 372.7  # K; above, water at 100 kPa is steam
PRESSURE = 1e5  # Pa
DEGREE = 20  # of the tables: interpolation errors below 1e-9 of the value
SOURCE = "IAPWS-95 density, IAPWS-97 static permittivity (Fernández et al. 1997), through the package chemicals"

# CODATA 2022 (exact but the last, whose u is 1.6e-10 of it); tests compare them with scipy.constants
AVOGADRO = 6.02214076e23  # 1/mol
BOLTZMANN = 1.380649e-23  # J/K
ELEMENTARY_CHARGE = 1.602176634e-19  # C
ELECTRIC_CONSTANT = 8.8541878188e-12  # F/m
GAS_CONSTANT = AVOGADRO * BOLTZMANN  # J/(mol K)

# Spread of A_H between published evaluations, as a fraction: 0.7 % at 25 °C, the two computed tables of
# debye_hueckel_slope.csv 1 % apart from 30 to 85 °C and slowly more above, 2.3 % at 5 °C, 4.9 % at 0 °C.
_SPREAD_AT = (273.15, 278.15, 283.15, 293.15, 298.15, 303.15, 358.15, 372.7)  # K
_SPREAD = (0.05, 0.024, 0.012, 0.007, 0.007, 0.01, 0.01, 0.012)


class _Tables(NamedTuple):
    density: Chebyshev
    permittivity: Chebyshev
    specific_heat_capacity: Chebyshev
    osmotic_slope: Chebyshev


@lru_cache(maxsize=1)
def _tables() -> _Tables:
    """Chebyshev tables of the slow formulations, made at first use."""
    from chemicals.iapws import iapws95_properties, iapws95_rho
    from chemicals.permittivity import permittivity_IAPWS

    domain = [LOWEST, HIGHEST]

    def table(function: np.vectorize) -> Chebyshev:
        return Chebyshev.interpolate(function, DEGREE, domain=domain)

    density = table(np.vectorize(lambda t: iapws95_rho(float(t), PRESSURE)))  # type: ignore[no-untyped-call]
    permittivity = table(np.vectorize(lambda t: permittivity_IAPWS(float(t), float(density(t)))))
    heat_capacity = table(np.vectorize(lambda t: iapws95_properties(float(t), PRESSURE)[5] / 1000))  # type: ignore[no-untyped-call]
    slope = table(lambda t: _osmotic_slope(t, density(t), permittivity(t)))  # type: ignore[arg-type]
    return _Tables(density, permittivity, heat_capacity, slope)


def _osmotic_slope(temperature: Floats, density: Floats, permittivity: Floats) -> Floats:
    """A_φ = ⅓ (2πN_A ρ)^½ (e²/4πε₀εkT)^3/2, in kg^½ mol^−½ (ρ in kg/m³)."""
    bjerrum_length = ELEMENTARY_CHARGE**2 / (4 * np.pi * ELECTRIC_CONSTANT * permittivity * BOLTZMANN * temperature)
    slope: Floats = np.sqrt(2 * np.pi * AVOGADRO * density) / 3 * bjerrum_length**1.5
    return slope


def _within(temperature: ArrayLike) -> Floats:
    t = np.asarray(temperature, dtype=np.float64)
    bad = ~((t >= LOWEST) & (t <= HIGHEST)) & ~np.isnan(t)
    if bad.any():
        first = float(t[bad].flat[0])
        raise ValueError(f"{first:g} K is outside {LOWEST} to {HIGHEST} K, where water at 100 kPa is liquid")
    return t


def density(temperature: ArrayLike) -> Floats:
    """Density of air-free water at 100 kPa, kg/m³.

    Parameters
    ----------
    temperature : float or array (n,)
        K, from 273.15 to 372.7; NaN gives NaN.

    Returns
    -------
    density : array (n,)

    Raises
    ------
    ValueError
        If a temperature is outside.

    References
    ----------
    IAPWS-95: Wagner, Pruß, J. Phys. Chem. Ref. Data 31, 387 (2002), computed by the package chemicals.

    Examples
    --------
    >>> density(298.15).round(2)
    np.float64(997.05)
    """
    return np.asarray(_tables().density(_within(temperature)))[()]


def permittivity(temperature: ArrayLike) -> Floats:
    """Relative static permittivity of water at 100 kPa; arguments and errors as density.

    References
    ----------
    Fernández, Goodwin, Lemmon, Levelt Sengers, Williams, J. Phys. Chem. Ref. Data 26, 1125 (1997), computed by the
    package chemicals.
    """
    return np.asarray(_tables().permittivity(_within(temperature)))[()]


def specific_heat_capacity(temperature: ArrayLike) -> Floats:
    """Isobaric specific heat capacity of water at 100 kPa, J/(g K) (IAPWS-95); arguments and errors as density.

    Examples
    --------
    >>> specific_heat_capacity(298.15).round(4)
    np.float64(4.1813)
    """
    return np.asarray(_tables().specific_heat_capacity(_within(temperature)))[()]


def osmotic_slope(temperature: ArrayLike) -> Floats:
    """Debye–Hückel slope of the osmotic coefficient, A_φ / (kg^½ mol^−½); arguments and errors as density.

    Examples
    --------
    >>> osmotic_slope(298.15).round(4)
    np.float64(0.3913)
    """
    return np.asarray(_tables().osmotic_slope(_within(temperature)))[()]


def debye_hueckel_slope(temperature: ArrayLike) -> Floats:
    """Debye–Hückel slope of the enthalpy, A_H = 4RT² (∂A_φ/∂T)_p, in kJ kg^½ mol^−3/2.

    Pitzer's convention: the limiting law is L_φ = ν|z₊z₋| (A_H/2) √I; older papers print ν|z₊z₋| A_H/3 with an A_H
    that is 3/2 of this one. Arguments and errors as density.

    Examples
    --------
    >>> debye_hueckel_slope(298.15).round(3)
    np.float64(1.972)
    """
    t = _within(temperature)
    return np.asarray(4 * GAS_CONSTANT * t**2 * _tables().osmotic_slope.deriv()(t) / 1000)[()]


def heat_capacity_slope(temperature: ArrayLike) -> Floats:
    """Debye–Hückel slope of the heat capacity, A_J = (∂A_H/∂T)_p, in J kg^½ mol^−3/2 K⁻¹; arguments as density."""
    t = _within(temperature)
    slope = _tables().osmotic_slope
    return np.asarray(4 * GAS_CONSTANT * (2 * t * slope.deriv()(t) + t**2 * slope.deriv(2)(t)))[()]


def slope_relative_u(temperature: ArrayLike) -> Floats:
    """Standard uncertainty of A_H as a fraction of it: how far published evaluations lie apart.

    0.007 at 298.15 K (1.972 IAPWS; 1.986 Archer and Wang 1990, Pitzer, Peiper and Busey 1984), 0.05 at 273.15 K.
    Arguments and errors as density.
    """
    return np.interp(_within(temperature), _SPREAD_AT, _SPREAD)[()]
