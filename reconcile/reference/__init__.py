"""Published values with uncertainty, source and status."""

from reconcile.reference.checking import ReferenceDataError
from reconcile.reference.dilution import all_dilution_parameters, dilution_parameters
from reconcile.reference.formation import formation_enthalpies, formation_sets
from reconcile.reference.heat_capacity import heat_capacity_changes
from reconcile.reference.lookup import UnknownSpeciesError, lookup
from reconcile.reference.solubility import solubility
from reconcile.reference.solution import solution_enthalpies
from reconcile.reference.tables import table, table_names

__all__ = [
    "ReferenceDataError",
    "UnknownSpeciesError",
    "all_dilution_parameters",
    "dilution_parameters",
    "formation_enthalpies",
    "formation_sets",
    "heat_capacity_changes",
    "lookup",
    "solubility",
    "solution_enthalpies",
    "table",
    "table_names",
]
