"""From what was measured to the molar enthalpy of solution of one run."""

from reconcile.calorimetry.molar import molality_over_all_water, molar_enthalpy
from reconcile.calorimetry.reduction import ReducedRuns, reduce_runs

__all__ = ["ReducedRuns", "molality_over_all_water", "molar_enthalpy", "reduce_runs"]
