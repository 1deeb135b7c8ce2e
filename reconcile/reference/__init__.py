"""Published values with uncertainty, source and status; names are loaded when first asked for.

What lookup needs does without pandas, so that a single value is there in a fraction of a second.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from reconcile.reference.checking import ReferenceDataError
    from reconcile.reference.dilution import all_dilution_parameters, dilution_parameters
    from reconcile.reference.formation import formation_enthalpies, formation_sets
    from reconcile.reference.heat_capacity import heat_capacity_changes
    from reconcile.reference.held import lookup
    from reconcile.reference.saturation import solubility
    from reconcile.reference.solution import solution_enthalpies
    from reconcile.reference.species import UnknownSpeciesError
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

_HOME = {
    "ReferenceDataError": "checking",
    "UnknownSpeciesError": "species",
    "all_dilution_parameters": "dilution",
    "dilution_parameters": "dilution",
    "formation_enthalpies": "formation",
    "formation_sets": "formation",
    "heat_capacity_changes": "heat_capacity",
    "lookup": "held",
    "solubility": "saturation",
    "solution_enthalpies": "solution",
    "table": "tables",
    "table_names": "tables",
}


def __getattr__(name: str) -> Any:
    if name not in _HOME:
        raise AttributeError(f"module 'reconcile.reference' has no attribute {name!r}")
    value = getattr(import_module(f"reconcile.reference.{_HOME[name]}"), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
