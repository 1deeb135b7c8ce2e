"""Relative apparent molar enthalpy, and the extrapolation of all salts to infinite dilution."""

from reconcile.dilution.electrolytes import Electrolytes, electrolytes
from reconcile.dilution.layout import NothingToFit
from reconcile.dilution.priors import PublishedSets, published_sets
from reconcile.dilution.season import Dilution, dilute, model_values
from reconcile.dilution.temperature import HeatCapacityChange, at_the_tables_temperature, heat_capacity_change

__all__ = [
    "Dilution",
    "Electrolytes",
    "HeatCapacityChange",
    "NothingToFit",
    "PublishedSets",
    "at_the_tables_temperature",
    "dilute",
    "electrolytes",
    "heat_capacity_change",
    "model_values",
    "published_sets",
]
