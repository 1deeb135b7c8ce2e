"""Campaigns with known truth: enthalpies at any molality, and what a laboratory would write down of them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from reconcile.chemistry import read_salt, water
from reconcile.chemistry.water import MOLAR_MASS_OF_WATER
from reconcile.dilution import electrolytes
from reconcile.dilution.models import empirical_terms, limiting_law

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

SLOPE_SPREAD = 0.007  # relative, of the Debye–Hückel slope: a campaign's true slope is drawn from it


@dataclass(frozen=True, slots=True, eq=False)
class Truth:
    """What is true in a simulated campaign."""

    salts: tuple[str, ...]
    standard_enthalpy: Floats  # (S,), kJ/mol
    parameters: Floats  # (S, 4), scaled dilution parameters, kJ/mol at I = 1 mol/kg
    slope_factor: float = 1.0  # true A_H over the computed one
    gain: Mapping[str, float] = field(default_factory=dict)  # calorimeter ─► measured = (1 + gain) × true
    lot_water: Mapping[str, float] = field(default_factory=dict)  # lot ─► mass fraction of liquid water, not stated
    shortfall: Mapping[int, float] = field(default_factory=dict)  # row ─► fraction of its heat that was lost

    def enthalpy(self, salt: Integers, molality: Floats, temperature: float = 298.15) -> Floats:
        """ΔsolH(m) of salts, kJ/mol, (n,)."""
        what = electrolytes([read_salt(s) for s in self.salts])
        one = what.composition.of(what.of_salt[salt])
        slope = self.slope_factor * water.debye_hueckel_slope(np.full(len(molality), temperature))
        terms = empirical_terms(molality, np.full(len(molality), temperature), one)
        dilution = limiting_law(molality, one.charge_factor, slope) + np.einsum(
            "nj,nj->n", terms, self.parameters[salt]
        )
        return np.asarray(self.standard_enthalpy[salt] + dilution)


def draw_truth(
    salts: Sequence[str],
    population: Mapping[str, Floats],
    rng: np.random.Generator,
    jitter: float = 0.1,
    size: float = 20.0,
) -> Truth:
    """A truth whose dilution follows published sets of *other* salts of the charge type, jittered.

    Parameters
    ----------
    salts : formulas
    population : mapping
        Charge type ─► scaled parameter sets (k, 4).
    rng : Generator
    jitter : float
        Relative standard deviation put on each parameter.
    size : float
        Standard deviation of ΔsolH°, kJ/mol.
    """
    read = [read_salt(s) for s in salts]
    what = electrolytes(read)
    by_block = []
    for kind in what.charge_type:
        sets = population[kind]
        by_block.append(sets[rng.integers(len(sets))] * (1 + jitter * rng.standard_normal(4)))
    parameters = np.array(by_block)[what.of_salt]
    return Truth(
        tuple(salts),
        size * rng.standard_normal(len(salts)),
        parameters,
        1 + SLOPE_SPREAD * float(rng.standard_normal()),
    )


def enthalpy_rows(
    truth: Truth,
    runs: int,
    molality: tuple[float, float],
    u: float,
    rng: np.random.Generator,
    declared: bool = True,
    calorimeters: Sequence[str] = (),
) -> pd.DataFrame:
    """A runs table of enthalpies already reduced: `runs` rows a salt, molalities spread in the logarithm.

    Parameters
    ----------
    truth : Truth
    runs : int
        A salt.
    molality : (low, high), mol/kg
    u : float
        Standard deviation of a run, kJ/mol; also what is declared.
    rng : Generator
    declared : bool
        Whether the table has an uncertainty column.
    calorimeters : names, used in turn
    """
    salt = np.repeat(np.arange(len(truth.salts)), runs)
    m = np.exp(rng.uniform(np.log(molality[0]), np.log(molality[1]), len(salt)))
    value = truth.enthalpy(salt, m)
    table = {
        "run": [f"R{i + 1:0{len(str(len(salt)))}d}" for i in range(len(salt))],
        "salt": np.array(truth.salts, dtype=object)[salt],
    }
    if calorimeters:
        which = np.arange(len(salt)) % len(calorimeters)
        value = value * (1 + np.array([truth.gain.get(c, 0.0) for c in calorimeters])[which])
        table["calorimeter"] = np.array(calorimeters, dtype=object)[which]
    value = value + u * rng.standard_normal(len(salt))
    table["molality / (mol/kg)"] = m
    table["enthalpy / (kJ/mol)"] = value
    if declared:
        table["u(enthalpy) / (kJ/mol)"] = u
    return pd.DataFrame(table)


def heat_rows(
    truth: Truth,
    sample: Sequence[str],
    sample_salt: Mapping[str, str],
    calorimeter: Sequence[str],
    molality: Floats,
    water_mass: Floats,
    u_mass: float,
    u_water: float,
    relative_u_heat: float,
    rng: np.random.Generator,
) -> pd.DataFrame:
    """A runs table as weighed and read: masses with their weighing errors, heats with gain, wet lots and lost heat.

    Parameters
    ----------
    truth : Truth
    sample, calorimeter : names (n,)
    sample_salt : mapping
        Lot ─► formula.
    molality, water_mass : array (n,)
        Aimed at, mol/kg and g.
    u_mass, u_water : float, g
    relative_u_heat : float

    Returns
    -------
    DataFrame with sample, calorimeter, mass, water, heat as a balance and a calorimeter show them.
    """
    salts = [read_salt(s) for s in truth.salts]
    salt = np.array([truth.salts.index(sample_salt[s]) for s in sample])
    molar_mass = np.array([s.molar_mass for s in salts])[salt]
    hydrate = np.array([s.water for s in salts])[salt]
    wet = np.array([truth.lot_water.get(s, 0.0) for s in sample])
    # mass of the wet lot that gives the molality aimed at over all water
    aimed = molality * water_mass / 1000
    amount = aimed / (
        1 - molality * hydrate * MOLAR_MASS_OF_WATER / 1000 - molality * molar_mass * wet / (1 - wet) / 1000
    )
    mass = amount * molar_mass / (1 - wet)
    true_molality = 1000 * amount / (water_mass + amount * hydrate * MOLAR_MASS_OF_WATER + mass * wet)
    heat = amount * truth.enthalpy(salt, true_molality) * 1000
    heat = heat * (1 + np.array([truth.gain.get(c, 0.0) for c in calorimeter]))
    heat = heat * (1 + relative_u_heat * rng.standard_normal(len(salt)))
    for row, part in truth.shortfall.items():
        heat[row] *= 1 - part
    return pd.DataFrame(
        {
            "sample": list(sample),
            "calorimeter": list(calorimeter),
            "mass / g": (mass + u_mass * rng.standard_normal(len(salt))).round(4),
            "water / g": (water_mass + u_water * rng.standard_normal(len(salt))).round(2),
            "heat / J": heat.round(3),
        }
    )
