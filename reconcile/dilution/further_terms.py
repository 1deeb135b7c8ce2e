"""Where the equation's parameters are not enough: away from 298.15 K, and at high ionic strength."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reconcile.dilution.electrolytes import Electrolytes

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]

OF_PARAMETERS = 298.15  # K, the temperature of all published dilution parameters
DRIFT = 0.04  # kJ/(K mol) per unit of ½Σνz²: prior sd of ∂L_φ/∂T beyond the limiting law, at 1 mol/kg
BEND = 100.0  # K over which that derivative may change by its own size (calibrated, below)
EQUATION = 0.10  # kJ/mol per unit of ½Σνz², on I^1.5 and on I^2.5/10
STRONG = 1.0  # mol/kg: an electrolyte measured beyond this ionic strength has the equation's own error
AWAY_LINE, STRONG_LINE = "dilution away from 298.15 K", "equation at high ionic strength"
LINES = (AWAY_LINE,) * 6 + (STRONG_LINE,) * 2


def further_terms(molality: Floats, temperature: Floats, charge_factor: Floats) -> Floats:
    """Eight further terms of L_φ, each scaled to a prior of mean 0 and sd 1: array (n, 8), kJ/mol.

    Three shapes, m, m/(1 + √m)² and m²/10, each with the temperature difference and with its square, and the error of
    the equation on I^1.5 and on I^2.5/10. Calibrated by marginal likelihood: DRIFT and BEND on the NaCl runs at 24, 44
    and 59 °C (Hubert et al. 1997), whose log-likelihood is near its maximum there and 16 lower without a bend (the
    limit then comes out as 4.05 kJ/mol, where 3.88 is right); EQUATION on the tables of NaCl and KCl (Parker 1965) and
    of HCl (NBS 1982), which ask for about 0.1.

    Parameters
    ----------
    molality, temperature, charge_factor : array (n,)
        mol/kg, K and ½Σνz².
    """
    away = temperature - OF_PARAMETERS
    away = np.where(np.abs(away) > 1e-9, away, 0.0)
    shapes = np.column_stack([molality, molality / (1 + np.sqrt(molality)) ** 2, molality**2 / 10])
    drift = DRIFT * (charge_factor * away)[:, None] * shapes
    bend = drift * (away / BEND)[:, None]
    strength = molality * charge_factor
    equation = EQUATION * charge_factor[:, None] * np.column_stack([strength**1.5, strength**2.5 / 10])
    return np.hstack([drift, bend, equation])


def terms_needed(temperature: Floats, molality: Floats, what: Electrolytes, block: Integers) -> Booleans:
    """Which of the terms each electrolyte has, (B, 8): of temperature where a run is away, the last two above STRONG.

    Parameters
    ----------
    temperature, molality : array (n,)
        K and mol/kg.
    what : Electrolytes of B blocks
    block : int array (n,)
    """
    warm, strong = np.zeros(len(what.name), bool), np.zeros(len(what.name), bool)
    np.logical_or.at(warm, block, np.abs(temperature - OF_PARAMETERS) > 1e-9)
    np.logical_or.at(strong, block, molality * what.composition.charge_factor[block] > STRONG)
    return np.hstack([np.repeat(warm[:, None], 6, axis=1), np.repeat(strong[:, None], 2, axis=1)])
