"""What is held about a species, quantity by quantity, each value with whether a report takes it and why."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from math import isfinite, isnan, nan
from typing import Any

from reconcile.chemistry import Salt
from reconcile.reference.capacities import HeatCapacityChange, heat_capacity_change
from reconcile.reference.checking import Row
from reconcile.reference.identities import identity
from reconcile.reference.limits import is_limit, ranked_limits
from reconcile.reference.species import Species, solution_of
from reconcile.reference.tables import rows

Entry = dict[str, Any]  # the keys that reconcile.reference.held.lookup names


def _of(name: str, column: str, asked: Species) -> list[Row]:
    """Rows of a table about this species, whatever their spelling."""
    if asked.salt is None:
        return [row for row in rows(name) if row[column] == asked.name]
    return [row for row in rows(name) if identity(row[column]) == asked.salt.identity]


def _of_electrolyte(name: str, salt: Salt) -> list[Row]:
    return [row for row in rows(name) if row["electrolyte"] == salt.electrolyte]


def _entry(row: Row, heading: str, conditions: str, used: bool, why: str) -> Entry:
    quantity, _, unit = heading.partition(" / ")
    value, u = row[heading], row.get(f"u({quantity}) / {unit}", nan)
    return {
        "quantity": quantity,
        "value": _number(value),
        "u": _number(u),
        "unit": unit.removeprefix("(").removesuffix(")") if unit.startswith("(") and unit.endswith(")") else unit,
        "conditions": conditions,
        "u_basis": row["u_basis"],
        "reference_set": row["reference_set"],
        "source": row["source"],
        "read_in": row["read_in"],
        "year": row["year"],
        "status": row["status"],
        "note": row["note"],
        "used": used,
        "why": why,
    }


def _number(value: float) -> float | None:
    return value if isfinite(value) else None


def _formation(asked: Species, formation_set: str) -> Iterator[Entry]:
    phases = {"cr": "crystal", "l": "liquid", "aq": "aqueous, infinite dilution", "g": "gaseous"}
    for row in _of("formation_enthalpy", "species", asked):
        used = row["reference_set"] == formation_set
        why = f"of the set {formation_set}, which is used whole" if used else f"of another set than {formation_set}"
        if row["phase"] == "g":
            why = f"gaseous ions of the set {row['reference_set']}: for lattice enthalpies only"
        if used and row["circular"] in ("likely", "possible"):
            why += "; loaded as ions minus the published enthalpy of solution, on which it rests"
        yield _entry(row, "formation_enthalpy / (kJ/mol)", phases[row["phase"]], used, why)


def _solution_enthalpies(asked: Species, formation_set: str) -> Iterator[Entry]:
    if asked.ion is not None:
        return
    heading = "solution_enthalpy / (kJ/mol)"
    order = ranked_limits().get(asked.salt.identity if asked.salt is not None else asked.name, ())
    for row in _of("solution_enthalpy", "salt", asked):
        molality = row["molality / (mol/kg)"]
        at = f"{molality:g} mol/kg" if molality else "infinite dilution"
        at = "molality not told" if isnan(molality) else at
        used = bool(order) and row["row"] == order[0]["row"]
        if used and row["origin"] == "measurement":
            alone = len(order) == 1
            why = "measured; " + ("the only one" if alone else "read before recalled, evaluated before single")
        elif used:
            why = "no measurement is held: ions minus crystal, which is no independent value"
        elif is_limit(row):
            why = f"behind the value of {order[0]['reference_set']}"
        else:
            why = "not at infinite dilution and 298.15 K: never taken for a limit"
        yield _entry(row, heading, f"{at}, {row['temperature / K']:g} K", used, why)


def _dilution(asked: Species, formation_set: str) -> Iterator[Entry]:
    if asked.salt is None:
        return
    found = _of_electrolyte("pitzer_enthalpy", asked.salt)
    preferred = "".join(row["reference_set"] for row in found if row["preferred"])
    for row in found:
        slope = row["debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"]
        top = row["max_molality / (mol/kg)"]
        fitted = "slope unknown" if isnan(slope) else f"slope {slope:g}"
        conditions = fitted + (", range unknown" if isnan(top) else f", to {top:g} mol/kg")
        why = row["why"] or f"behind the set {preferred}"
        for heading, value in row.items():
            if "_derivative" in heading and not isnan(value):
                yield _entry(row, heading, conditions, row["preferred"], why)


def _heat_capacities(asked: Species, formation_set: str) -> Iterator[Entry]:
    heading = "heat_capacity / (J/(K mol))"
    found = _of("heat_capacity", "species", asked)
    for row in found:
        why = "the change on dissolving is computed from it" if len(found) == 1 else "one of several; see the change"
        yield _entry(row, heading, row["state"], False, why)
    change = heat_capacity_change(asked.salt) if asked.salt is not None else HeatCapacityChange()
    if change.status:
        heading = "heat_capacity_change / (J/(K mol))"
        computed: Row = {heading: change.value, f"u({heading.replace(' / ', ') / ', 1)}": change.u}
        computed |= {"u_basis": "propagated: of the parts", "source": change.source, "status": change.status}
        computed |= {"year": None, "reference_set": "", "read_in": "", "note": ""}
        yield _entry(computed, heading, "infinite dilution, 298.15 K", True, "takes runs to the reference temperature")


def _solubility(asked: Species, formation_set: str) -> Iterator[Entry]:
    if asked.salt is None:
        return
    for row in rows("solubility"):
        if solution_of(row["salt"]) == asked.salt.electrolyte:
            conditions = f"{row['temperature / °C']:g} °C, anhydrous salt"
            why = "marks runs above saturation, enters no number"
            yield _entry(row, "solubility / (g/100 g)", conditions, True, why)


def _others(asked: Species, formation_set: str) -> Iterator[Entry]:
    """Lattice, hydration, radii, volumes, ionisation, test reactions: held, and used by no report by themselves."""
    plain: tuple[tuple[str, str, str, Callable[[Row], str]], ...] = (
        ("lattice_enthalpy", "salt", "lattice_enthalpy / (kJ/mol)", lambda row: f"{row['quantity']}, {row['basis']}"),
        (
            "hydration_enthalpy",
            "ion",
            "hydration_enthalpy / (kJ/mol)",
            lambda row: f"proton at {row['proton_hydration / (kJ/mol)']:g} kJ/mol",
        ),
        ("ionic_radius", "ion", "radius / nm", lambda row: f"{row['coordination']} {row['spin']}".strip()),
        ("formula_volume", "species", "volume / nm^3", lambda row: str(row["kind"])),
        ("acid_ionisation", "acid", "pK / 1", lambda row: f"to {row['base']}"),
        ("acid_ionisation", "base", "pK / 1", lambda row: f"of {row['acid']}"),
        (
            "reaction_standard",
            "formula",
            "reaction_enthalpy / (kJ/mol)",
            lambda row: f"{row['reaction']}, {row['medium']}",
        ),
    )
    for name, column, heading, conditions in plain:
        for row in _of(name, column, asked):
            if not isnan(row[heading]):
                yield _entry(row, heading, conditions(row), False, "held; no report takes it by itself")


def _apparent_enthalpies(asked: Species, formation_set: str) -> Iterator[Entry]:
    if asked.salt is None:
        return
    for row in _of_electrolyte("relative_apparent_enthalpy", asked.salt):
        conditions = f"{row['molality / (mol/kg)']:g} mol/kg"
        why = "published parameters are checked with it, and those of our own fitted to it"
        yield _entry(row, "relative_apparent_enthalpy / (J/mol)", conditions, False, why)


SOURCES = (
    _solution_enthalpies,
    _formation,
    _dilution,
    _heat_capacities,
    _solubility,
    _others,
    _apparent_enthalpies,
)
