"""Runs at other temperatures: the heat-capacity change of each salt, held or estimated."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy import sparse

from reconcile.chemistry import Salt
from reconcile.statistics import Collector, Ledger, stack

Floats = NDArray[np.float64]

TYPICAL = -130.0  # J/(K mol) per unit of ½Σνz²: near NaCl −134, KCl −166, CaCl2/3 −117 (reference_data)
U_TYPICAL = 60.0
OF_WATER = 35.0  # J/(K mol) for each water of hydration: 75 as liquid less about 40 in the crystal (our judgement)
U_OF_WATER = 15.0
TABLES = 298.15  # K, of all published enthalpies of solution and formation
LINE = "heat capacity of dissolution"
HEAT_CAPACITY = "ΔsolCp°"  # how the names of its sources begin
U_CURVATURE = 2.0  # J/(K² mol) per unit of ½Σνz², of dΔsolC_p/dT (design, 5.2)


@dataclass(frozen=True, slots=True, eq=False)
class HeatCapacityChange:
    """ΔsolC_p° of each salt, J/(K mol)."""

    value: Floats  # (S,)
    u: Floats  # (S,)
    held: NDArray[np.bool_]  # (S,) False where it is only typical of the charge type

    def take(self, salts: NDArray[np.int64]) -> HeatCapacityChange:
        """That of some of the salts."""
        return HeatCapacityChange(self.value[salts], self.u[salts], self.held[salts])


def heat_capacity_change(salts: Sequence[Salt], held: pd.DataFrame) -> HeatCapacityChange:
    """ΔsolC_p° from the reference tables, else a typical value with a wide uncertainty.

    Parameters
    ----------
    salts : sequence of Salt
    held : DataFrame
        `reference.heat_capacity_changes(salts)`: a row a salt with value and u, NaN where none is held.
    """
    factor = np.array([0.5 * sum(nu * z * z for (_, nu), z in zip(s.ions, s.charges, strict=True)) for s in salts])
    value, u = held["value"].to_numpy(float), held["u"].to_numpy(float)
    known = np.isfinite(value)
    hydrate = np.array([s.water for s in salts])
    return HeatCapacityChange(
        np.where(known, value, TYPICAL * factor + OF_WATER * hydrate),
        np.where(known & np.isfinite(u), u, np.hypot(U_TYPICAL * factor, U_OF_WATER * hydrate)),
        known,
    )


def at_the_tables_temperature(
    crystals: Ledger, salts: Sequence[Salt], change: HeatCapacityChange, temperature: float
) -> Ledger:
    """Standard enthalpies carried from the reference temperature to 298.15 K, where all tables stand.

    Parameters
    ----------
    crystals : Ledger (C,)
        At `temperature`, kJ/mol.
    salts : sequence of C salts
    change : HeatCapacityChange (C,)
        Of these salts.
    temperature : float, K

    Returns
    -------
    Ledger (C,). Where runs were corrected with the same ΔsolC_p°, that source cancels as far as it should.
    """
    away = TABLES - temperature
    if abs(away) < 1e-9:
        return crystals
    everyone, ones = np.arange(len(salts)), np.ones(len(salts))
    factor = np.array([0.5 * sum(nu * z * z for (_, nu), z in zip(s.ions, s.charges, strict=True)) for s in salts])
    collected = Collector(len(salts))
    names = [f"{HEAT_CAPACITY} of {s.formula}" for s in salts]
    collected.group(everyone, change.u, names, LINE, ones * away / 1000)
    curvature = [f"{name}: its change with temperature" for name in names]
    collected.group(everyone, U_CURVATURE * factor, curvature, LINE, ones * away**2 / 2000)
    sources, (loading,) = collected.finish()
    none = np.zeros((len(salts), 0))
    step = Ledger(change.value * away / 1000, none, (), loading, sources)
    both = sparse.hstack([sparse.eye_array(len(salts)), sparse.eye_array(len(salts))], format="csr")
    return stack([crystals, step]).map(sparse.csr_array(both))
