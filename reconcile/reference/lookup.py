"""Everything held about a salt or an ion, by quantity and source, and which value a report uses."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from difflib import get_close_matches
from math import isfinite
from typing import Any

import pandas as pd

from reconcile.chemistry import FormulaError, Ion, Salt, read_ion, read_salt
from reconcile.reference.dilution import dilution_parameters
from reconcile.reference.heat_capacity import heat_capacity_changes
from reconcile.reference.identities import identities
from reconcile.reference.solution import ranked, solution_enthalpies
from reconcile.reference.tables import table

FORMATION_SET = "NBS-1982"
Row = dict[str, Any]


class UnknownSpeciesError(LookupError):
    """Nothing is known by this name; `nearest` holds the names most like it."""

    def __init__(self, found: str, reason: str, nearest: tuple[str, ...]) -> None:
        self.found, self.nearest = found, nearest
        self.expected = "a salt or an ion, as NaCl, CaCl2·6H2O, Na+, SO4-2"
        self.remedy = f"Did you mean {' or '.join(nearest)}?" if nearest else reason
        super().__init__(f"“{found}” is not known. Expected {self.expected}. {self.remedy}")


@dataclass(frozen=True, slots=True)
class Species:
    """What was asked for, as read: one of the two is None, or both for a substance that is neither."""

    name: str
    salt: Salt | None = None
    ion: Ion | None = None


def lookup(species: str, formation_set: str = FORMATION_SET) -> dict[str, Any]:
    """All that is held about a salt, an ion or water.

    Parameters
    ----------
    species : str
        Any usual spelling: CaCl2·6H2O, CaCl2.6H2O, Ca(NO3)2, Na+, SO4-2, SO4^2-, H2O.
    formation_set : str
        The set of formation enthalpies that a report would use.

    Returns
    -------
    result : dict
        Plain types that json can write. species, kind (salt, ion, substance), nearest (names held that are like it,
        where nothing is held), and for a salt ions, electrolyte, molar_mass, crystals (others of the same solution);
        values: a list of {quantity, value, u, unit, conditions, u_basis, reference_set, source, read_in, year, status,
        note, used, why}. `used` marks the values that a report takes; `why` gives the reason for or against.

    Raises
    ------
    UnknownSpeciesError
        If the text is neither a formula nor an ion of the list; names the nearest.

    Examples
    --------
    >>> result = lookup("CaCl2.6H2O")
    >>> [row["value"] for row in result["values"] if row["used"] and row["quantity"] == "formation_enthalpy"]
    [-2607.9]
    """
    asked = read_species(species)
    values = [row for source in _SOURCES for row in source(asked, formation_set)]
    result: dict[str, Any] = {"species": asked.name, "kind": _kind(asked)}
    if asked.salt is not None:
        salt = asked.salt
        result |= {
            "ions": dict(salt.ions),
            "electrolyte": salt.electrolyte,
            "charge_type": salt.charge_type,
            "molar_mass": salt.molar_mass,
            "crystals": [
                name for name in known_salts() if name != salt.formula and _solution(name) == salt.electrolyte
            ],
        }
    result["nearest"] = [] if values else list(_nearest(asked.name))
    result["values"] = values
    return result


def read_species(typed: str) -> Species:
    """A salt, an ion, or a substance that the tables know by name (water, urea).

    Raises
    ------
    UnknownSpeciesError
        If it is none of these.
    """
    text = "".join(str(typed).split())
    if text in ("H2O", "CO(NH2)2", "C12H22O11"):
        return Species(text)
    try:
        salt = read_salt(text)
        return Species(salt.formula, salt=salt)
    except FormulaError as error:
        salt_error = error
    try:
        ion = read_ion(text)
        return Species(ion.name, ion=ion)
    except FormulaError as error:
        ionic = any(sign in text for sign in "+-⁺⁻")
        reason = error if ionic else salt_error
    nearest = _nearest(text)
    raise UnknownSpeciesError(typed, reason.remedy, nearest) from reason


def known_salts() -> list[str]:
    """Crystals for which a formation or a solution enthalpy is held, in alphabetical order."""
    formation, solution = table("formation_enthalpy"), table("solution_enthalpy")
    names = {*formation.loc[formation["phase"].eq("cr"), "species"], *solution.loc[solution["phase"].eq("cr"), "salt"]}
    return sorted(str(name) for name in names)


def _solution(name: str) -> str:
    try:
        return read_salt(name).electrolyte
    except FormulaError:
        return ""


def _kind(asked: Species) -> str:
    return "salt" if asked.salt is not None else "ion" if asked.ion is not None else "substance"


def _nearest(text: str) -> tuple[str, ...]:
    names = known_salts()
    if any(sign in text for sign in "+-⁺⁻"):
        names = sorted({str(name) for name in table("formation_enthalpy").query("phase == 'aq'")["species"]})
    folded = {name.replace("·", ".").lower(): name for name in reversed(names)}
    near = get_close_matches(text.replace("·", ".").lower(), folded, n=3, cutoff=0.5)
    return tuple(folded[name] for name in near)


def _rows(frame: pd.DataFrame) -> Iterator[Row]:
    for row in frame.to_dict("records"):
        yield {str(name): cell for name, cell in row.items()}


def _of(name: str, column: str, asked: Species) -> pd.DataFrame:
    """Rows of a table about this species, whatever their spelling."""
    frame = table(name)
    if asked.salt is None:
        return frame[frame[column].eq(asked.name)]
    return frame[[key == asked.salt.identity for key in identities(frame[column])]]


def _entry(row: Row, heading: str, conditions: str, used: bool, why: str) -> dict[str, Any]:
    quantity, _, unit = heading.partition(" / ")
    value, u = row[heading], row.get(f"u({quantity}) / {unit}", float("nan"))
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
        "year": None if pd.isna(row["year"]) or row["year"] == "" else int(row["year"]),
        "status": row["status"],
        "note": row["note"],
        "used": used,
        "why": why,
    }


def _number(value: Any) -> float | None:
    return float(value) if pd.notna(value) and isfinite(value) else None


def _formation(asked: Species, formation_set: str) -> Iterator[dict[str, Any]]:
    phases = {"cr": "crystal", "l": "liquid", "aq": "aqueous, infinite dilution", "g": "gaseous"}
    for row in _rows(_of("formation_enthalpy", "species", asked)):
        used = row["reference_set"] == formation_set
        why = f"of the set {formation_set}, which is used whole" if used else f"of another set than {formation_set}"
        if row["phase"] == "g":
            why = f"gaseous ions of the set {row['reference_set']}: for lattice enthalpies only"
        if used and row["circular"] in ("likely", "possible"):
            why += "; loaded as ions minus the published enthalpy of solution, on which it rests"
        yield _entry(row, "formation_enthalpy / (kJ/mol)", phases[row["phase"]], used, why)


def _solution_enthalpies(asked: Species, formation_set: str) -> Iterator[dict[str, Any]]:
    if asked.ion is not None:
        return
    heading = "solution_enthalpy / (kJ/mol)"
    limits = ranked()
    key = asked.salt.identity if asked.salt is not None else asked.name
    order = limits.loc[limits["identity"].eq(key), "row"].tolist()
    best = solution_enthalpies([asked.name]).iloc[0]
    for row in _rows(_of("solution_enthalpy", "salt", asked)):
        molality = row["molality / (mol/kg)"]
        at: str = f"{molality:g} mol/kg" if molality else "infinite dilution"
        at = "molality not told" if pd.isna(molality) else at
        used = bool(order) and row["row"] == order[0]
        if used and best["independent"]:
            why = "measured; " + (
                "the only one" if len(order) == 1 else "read before recalled, evaluated before single"
            )
        elif used:
            why = "no measurement is held: ions minus crystal, which is no independent value"
        elif row["row"] in order:
            why = f"behind the value of {best['reference_set']}"
        else:
            why = "not at infinite dilution and 298.15 K: never taken for a limit"
        yield _entry(row, heading, f"{at}, {row['temperature / K']:g} K", used, why)


def _dilution(asked: Species, formation_set: str) -> Iterator[dict[str, Any]]:
    if asked.salt is None:
        return
    frame = table("pitzer_enthalpy")
    preferred = dilution_parameters()
    for row in _rows(frame[frame["electrolyte"].eq(asked.salt.electrolyte)]):
        slope = row["debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"]
        top = row["max_molality / (mol/kg)"]
        fitted: str = "slope unknown" if pd.isna(slope) else f"slope {slope:g}"
        conditions: str = fitted + (", range unknown" if pd.isna(top) else f", to {top:g} mol/kg")
        why = row["why"] or f"behind the set {preferred['reference_set'].to_dict()[asked.salt.electrolyte]}"
        for heading in frame.columns:
            if "_derivative" in str(heading) and pd.notna(row[heading]):
                yield _entry(row, str(heading), conditions, bool(row["preferred"]), why)


def _heat_capacities(asked: Species, formation_set: str) -> Iterator[dict[str, Any]]:
    heading = "heat_capacity / (J/(K mol))"
    frame = _of("heat_capacity", "species", asked)
    for row in _rows(frame):
        why = "the change on dissolving is computed from it" if len(frame) == 1 else "one of several; see the change"
        yield _entry(row, heading, row["state"], False, why)
    if asked.salt is not None:
        (change,) = _rows(heat_capacity_changes([asked.salt]))
        if change["status"]:
            change |= {"u_basis": "propagated: of the parts", "reference_set": "", "read_in": "", "note": ""}
            change["heat_capacity_change / (J/(K mol))"] = change["value"]
            change["u(heat_capacity_change) / (J/(K mol))"] = change["u"]
            why = "takes runs to the reference temperature"
            yield _entry(change, "heat_capacity_change / (J/(K mol))", "infinite dilution, 298.15 K", True, why)


def _solubility(asked: Species, formation_set: str) -> Iterator[dict[str, Any]]:
    if asked.salt is None:
        return
    frame = table("solubility")
    same = [_solution(name) == asked.salt.electrolyte for name in frame["salt"]]
    for row in _rows(frame[same]):
        conditions = f"{row['temperature / °C']:g} °C, anhydrous salt"
        yield _entry(row, "solubility / (g/100 g)", conditions, True, "marks runs above saturation, enters no number")


def _others(asked: Species, formation_set: str) -> Iterator[dict[str, Any]]:
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
        for row in _rows(_of(name, column, asked)):
            if pd.notna(row[heading]):
                yield _entry(row, heading, conditions(row), False, "held; no report takes it by itself")


def _apparent_enthalpies(asked: Species, formation_set: str) -> Iterator[dict[str, Any]]:
    if asked.salt is None:
        return
    frame = table("relative_apparent_enthalpy")
    for row in _rows(frame[frame["electrolyte"].eq(asked.salt.electrolyte)]):
        conditions = f"{row['molality / (mol/kg)']:g} mol/kg"
        yield _entry(row, "relative_apparent_enthalpy / (J/mol)", conditions, False, "the parameters were fitted to it")


_SOURCES = (
    _solution_enthalpies,
    _formation,
    _dilution,
    _heat_capacities,
    _solubility,
    _others,
    _apparent_enthalpies,
)
