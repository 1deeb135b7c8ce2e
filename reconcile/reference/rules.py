"""What the tables must obey beyond their types: the traps of thermochemical tables."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterator, Sequence
from math import isnan, sqrt

from reconcile.chemistry import FormulaError, read_ion, read_salt
from reconcile.reference.checking import Row, problem
from reconcile.reference.description import TableDescription

WATER = -285.830  # kJ/mol, ΔfH°(H2O, l), CODATA 1989; a set that holds hydrates may not round it
NITRATE = -207.36  # kJ/mol, ΔfH°(NO3-, aq) that the nitrates of the NBS tables were computed with
IN_NBS_LIST = -205.0  # kJ/mol, what their ion list prints
PROTON = 1536.25  # kJ/mol, ΔfH°(H+, g) with the thermal electron: 217.998 + 1312.05 + 6.197 (CODATA 1989, from memory)
OLD_NITRATE = 0.179  # nm, thermochemical radius of NO3- in the set of 1979; 0.200 in that of 1999
ROUNDED_SETS = frozenset({"CRC"})  # printed to 0.1 kJ/mol: its hydrates are shown, not used

Faults = Iterator[str]


def broken_rules(rows: Sequence[Row], table: TableDescription) -> list[str]:
    """Every rule that a table breaks, as lines with file, row and reason."""
    faults = list(_uncertainties(rows, table)) + list(_status(rows, table))
    for rule in _RULES.get(table.name, ()):
        faults += rule(rows, table)
    return faults


def _uncertainties(rows: Sequence[Row], table: TableDescription) -> Faults:
    """An uncertainty has a basis, and a basis has an uncertainty."""
    columns = [column.heading for column in table.columns if column.heading.startswith(("u(", "u_relative"))]
    for row in rows:
        some = any(not isnan(row[column]) for column in columns)
        if some == (row["u_basis"] == "none"):
            yield problem(table, row["row"], "u_basis", row["u_basis"], "none without u, a basis with one")


def _status(rows: Sequence[Row], table: TableDescription) -> Faults:
    """What is from memory was seen nowhere; what was seen says where."""
    for row in rows:
        if row["status"] == "recalled" and row["read_in"]:
            yield problem(table, row["row"], "read_in", row["read_in"], "nothing for a recalled figure")
        if row["status"] == "read" and not row["read_in"] and row["u_basis"] != "convention":
            yield problem(table, row["row"], "read_in", "", "where the figure was read")


def _formation(rows: Sequence[Row], table: TableDescription) -> Faults:
    value = "formation_enthalpy / (kJ/mol)"
    sets_with_hydrates = set()
    for row in rows:
        species, phase, place = row["species"], row["phase"], row["row"]
        if phase in ("aq", "g"):
            yield from _ion(row, "species", table)
        elif species != "H2O":
            yield from _crystal(row, table)
        if (row["electron_convention"] != "") != (phase == "g"):
            yield problem(table, place, "electron_convention", row["electron_convention"], "one for gaseous ions only")
        if (row["circular"] != "") and phase != "cr":
            yield problem(table, place, "circular", row["circular"], "nothing: only crystals can be circular")
        if species == "H+" and phase == "aq" and row[value] != 0:
            yield problem(table, place, value, row[value], "0, by convention")
        if species == "H+" and phase == "g" and abs(row[value] - PROTON) > 0.5:
            yield problem(table, place, value, row[value], f"{PROTON}: without the electron as a gas it is 6.197 lower")
        if row["reference_set"] == "NBS-1982" and species == "NO3-" and abs(row[value] - IN_NBS_LIST) < 0.5:
            yield problem(table, place, value, row[value], f"{NITRATE}: the printed ion contradicts its own nitrates")
        if phase == "cr" and "H2O" in species:
            sets_with_hydrates.add(row["reference_set"])
    for row in (row for row in rows if row["species"] == "H2O"):
        if row["reference_set"] in sets_with_hydrates - ROUNDED_SETS and abs(row[value] - WATER) > 0.0051:
            yield problem(table, row["row"], value, row[value], f"{WATER}: ten waters carry ten times the rounding")


def _ion(row: Row, heading: str, table: TableDescription) -> Faults:
    try:
        ion = read_ion(row[heading])
    except FormulaError as error:
        yield problem(table, row["row"], heading, row[heading], f"{error.expected}. {error.remedy[:-1]}")
        return
    if ion.name != row[heading]:
        yield problem(table, row["row"], heading, row[heading], f"the list's name {ion.name}")
    if ion.charge != row["charge"]:
        yield problem(table, row["row"], "charge", row["charge"], f"{ion.charge}, the charge of {ion.name}")


def _crystal(row: Row, table: TableDescription) -> Faults:
    try:
        salt = read_salt(row["species"])
    except FormulaError as error:
        yield problem(table, row["row"], "species", row["species"], f"{error.expected}. {error.remedy[:-1]}")
        return
    if salt.formula != row["species"]:
        yield problem(table, row["row"], "species", row["species"], f"the spelling {salt.formula}")
    if row["charge"] != 0:
        yield problem(table, row["row"], "charge", row["charge"], "0 for a crystal")


def _solution(rows: Sequence[Row], table: TableDescription) -> Faults:
    for row in rows:
        cycle = row["origin"] == "formation cycle"
        if cycle != (row["status"] == "derived"):
            yield problem(
                table, row["row"], "origin", row["origin"], "formation cycle for derived rows, and only there"
            )
        if row["reference_set"] == "Bichowsky-Rossini-1936" and row["temperature / K"] > 297:
            yield problem(
                table, row["row"], "temperature / K", row["temperature / K"], "291.15: that table is for 18 °C"
            )


def _pitzer(rows: Sequence[Row], table: TableDescription) -> Faults:
    preferred = Counter(row["electrolyte"] for row in rows if row["preferred"])
    seen = set()
    for row in rows:
        electrolyte = row["electrolyte"]
        if electrolyte not in seen and preferred[electrolyte] != 1:
            found = f"{preferred[electrolyte]} sets"
            yield problem(table, row["row"], "preferred", found, "one preferred set an electrolyte")
        seen.add(electrolyte)
    for row in rows:
        if row["preferred"] != (row["why"] != ""):
            yield problem(table, row["row"], "why", row["why"], "a reason for a preferred set, and only there")
        if isnan(row["beta2_derivative / (kg/(mol K))"]) != isnan(row["alpha2 / (kg^0.5 mol^-0.5)"]):
            yield problem(table, row["row"], "alpha2 / (kg^0.5 mol^-0.5)", "", "α₂ with β⁽²⁾, and only there")
        slope = "debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"
        if row["reference_set"].startswith("refit") and isnan(row[slope]):
            yield problem(table, row["row"], slope, "", "the slope that our own fit used")
        if read_salt(row["electrolyte"]).electrolyte != row["electrolyte"]:
            expected = read_salt(row["electrolyte"]).electrolyte
            yield problem(table, row["row"], "electrolyte", row["electrolyte"], f"the spelling {expected}")


def _lattice(rows: Sequence[Row], table: TableDescription) -> Faults:
    for row in rows:
        energy = row["quantity"] == "lattice potential energy"
        if energy and row["gas_ions"]:
            yield problem(table, row["row"], "gas_ions", row["gas_ions"], "nothing for a potential energy")
        if not energy and not row["gas_ions"]:
            yield problem(table, row["row"], "gas_ions", "", "the set of gaseous ions in a lattice enthalpy")


def _ions(rows: Sequence[Row], table: TableDescription) -> Faults:
    for row in rows:
        yield from _ion(row, "ion", table)


def _radius(rows: Sequence[Row], table: TableDescription) -> Faults:
    for row in rows:
        if (row["coordination"] != "") != row["reference_set"].startswith("Shannon"):
            yield problem(table, row["row"], "coordination", row["coordination"], "one for crystal radii only")
        newer = row["reference_set"] == "thermochemical-1999"
        if newer and row["ion"] == "NO3-" and abs(row["radius / nm"] - OLD_NITRATE) < 0.01:
            yield problem(table, row["row"], "radius / nm", row["radius / nm"], "0.200: that is the radius of 1979")


def _weights(rows: Sequence[Row], table: TableDescription) -> Faults:
    """u is the half-width over √3, both as printed."""
    u = "u(standard_atomic_weight) / 1"
    for row in rows:
        expected = row["half_width / 1"] / sqrt(3)
        if abs(row[u] / expected - 1) > 1e-6:
            yield problem(table, row["row"], u, row[u], f"{expected:.8g}, the half-width over √3")


_RULES: dict[str, tuple[Callable[[Sequence[Row], TableDescription], Faults], ...]] = {
    "formation_enthalpy": (_formation,),
    "solution_enthalpy": (_solution,),
    "pitzer_enthalpy": (_pitzer,),
    "lattice_enthalpy": (_lattice,),
    "hydration_enthalpy": (_ions,),
    "ionic_radius": (_ions, _radius),
    "atomic_weights": (_weights,),
}
