"""What a run observes: a dissolution into water or into a solution of the salt, or a dilution."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.calorimetry import ReducedRuns
from reconcile.dilution.electrolytes import Electrolytes
from reconcile.dilution.further_terms import further_terms
from reconcile.dilution.models import empirical_terms, limiting_law
from reconcile.statistics import Ledger, sources_of_one_line

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]


def along(runs: ReducedRuns, shape: Callable[[Floats], Floats]) -> Floats:
    """Change of a function of molality in each run, per mole of salt: [n₂ f(m₂) − n₁ f(m₁)]/(n₂ − n₁).

    A heat of dilution, per mole of salt, is f(m₂) − f(m₁).

    Parameters
    ----------
    runs : ReducedRuns of n runs
    shape : function
        Of molality (n,), mol/kg; 0 at 0. Its value may be (n,) or (n, k).
    """
    final = shape(runs.molality.value)
    before = runs.initial_share
    if not before.any():
        return final
    after = before + runs.dissolves
    initial = shape(runs.initial_molality)
    if final.ndim == 2:
        after, before = after[:, None], before[:, None]
    return np.asarray(after * final - before * initial)


def observed_part(
    runs: ReducedRuns,
    what: Electrolytes,
    block: Integers,
    mean: Floats,
    slope: Floats,
    relative_u_slope: Floats,
    heat_capacity_change: Floats,
    reference_temperature: float,
) -> Ledger:
    """Runs less what is known of their dilution and temperature.

    Parameters
    ----------
    runs : ReducedRuns of n runs
    what : Electrolytes
    block : int array (n,)
    mean : array (B, 4)
        Prior mean of the scaled parameters.
    slope, relative_u_slope : array (n,)
        A_H at the run's temperature, kJ kg^½ mol^−3/2, and its relative standard uncertainty, one source for all.
    heat_capacity_change : array (n,)
        ΔsolC_p° of the run's salt, J/(K mol).
    reference_temperature : float, K

    Returns
    -------
    Ledger (n,), kJ/mol
    """
    one = what.composition.of(block)
    away = np.where(runs.dissolves, runs.temperature - reference_temperature, 0.0)

    def relative(at: Floats) -> Floats:
        terms = np.einsum("nj,nj->n", empirical_terms(at, runs.temperature, one), mean[block])
        return np.asarray(limiting_law(at, one.charge_factor, slope) + terms)

    def rise(at: Floats) -> Floats:
        step = np.maximum(1e-4 * at, 1e-12)
        return np.asarray((relative(at + step) - relative(at - step)) / (2 * step))

    value = runs.enthalpy.value - along(runs, relative) - heat_capacity_change * away / 1000
    at_end = (runs.initial_share + runs.dissolves) * rise(runs.molality.value)
    private = runs.enthalpy.private - at_end[:, None] * runs.molality.private
    loading = runs.enthalpy.loading - sparse.diags_array(at_end) @ runs.molality.loading
    ledger = Ledger(value, private, runs.enthalpy.lines, sparse.csr_array(loading), runs.enthalpy.sources)
    if runs.u_initial_molality.any():
        at_start = np.where(runs.initial_molality > 0, rise(np.maximum(runs.initial_molality, 1e-9)), 0.0)
        before = runs.initial_share * at_start * runs.u_initial_molality
        ledger = ledger.with_private(before[:, None], ["molality as given"])
    by_temperature = np.where(runs.dissolves, heat_capacity_change / 1000 * runs.u_temperature, 0.0)
    ledger = ledger.with_private(by_temperature[:, None], ["temperature of the run"])
    law = along(runs, lambda at: limiting_law(at, one.charge_factor, slope))
    by_slope = sparse.csr_array((relative_u_slope * law)[:, None])
    return ledger.with_sources(by_slope, sources_of_one_line(["Debye–Hückel slope"], "Debye–Hückel slope"))


def basis_of(runs: ReducedRuns, what: Electrolytes, block: Integers, terms: Booleans) -> Floats:
    """Empirical terms, and those of the eight further terms that are in use, along each run: (n, 4 + used)."""
    one = what.composition.of(block)
    basis = along(runs, lambda at: empirical_terms(at, runs.temperature, one))
    if not terms.any():
        return basis
    further = along(runs, lambda at: further_terms(at, runs.temperature, one.charge_factor)[:, terms])
    return np.hstack([basis, further])
