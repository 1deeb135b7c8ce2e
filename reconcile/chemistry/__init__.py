"""Formulae, ions, molar masses, water."""

from reconcile.chemistry.atomic_weights import standard_atomic_weights
from reconcile.chemistry.formula import FormulaError
from reconcile.chemistry.ions import IONS, Ion, read_ion
from reconcile.chemistry.salts import Salt, read_salt

__all__ = ["IONS", "FormulaError", "Ion", "Salt", "read_ion", "read_salt", "standard_atomic_weights"]
