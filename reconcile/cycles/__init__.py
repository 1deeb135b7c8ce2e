"""Hess cycles: one adjustment of all salts with the reference values."""

from reconcile.cycles.adjustment import Adjustment, adjust
from reconcile.cycles.laboratory import with_own_formation_enthalpies, with_own_solution_enthalpies
from reconcile.cycles.network import Network, network

__all__ = [
    "Adjustment", "Network", "adjust", "network", "with_own_formation_enthalpies", "with_own_solution_enthalpies",
]  # fmt: skip
