"""Hess cycles: one adjustment of all salts with the reference values."""

from reconcile.cycles.adjustment import Adjustment, adjust
from reconcile.cycles.network import Network, network

__all__ = ["Adjustment", "Network", "adjust", "network"]
