"""What the tables must obey beyond their types: the traps of thermochemical tables."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import Any

import pandas as pd

from reconcile.chemistry import FormulaError, read_ion, read_salt
from reconcile.reference.checking import problem
from reconcile.reference.description import TableDescription

WATER = -285.830  # kJ/mol, ΔfH°(H2O, l), CODATA 1989; a set that holds hydrates may not round it
NITRATE = -207.36  # kJ/mol, ΔfH°(NO3-, aq) that the nitrates of the NBS tables were computed with
IN_NBS_LIST = -205.0  # kJ/mol, what their ion list prints
ROUNDED_SETS = frozenset({"CRC"})  # printed to 0.1 kJ/mol: its hydrates are shown, not used

Faults = Iterator[str]


def broken_rules(frame: pd.DataFrame, table: TableDescription) -> list[str]:
    """Every rule that a table breaks, as lines with file, row and reason."""
    faults = list(_uncertainties(frame, table)) + list(_status(frame, table))
    for rule in _RULES.get(table.name, ()):
        faults += rule(frame, table)
    return faults


def _rows(frame: pd.DataFrame) -> Iterator[dict[str, Any]]:
    names = [str(name) for name in frame.columns]
    for cells in zip(*(frame[name].tolist() for name in names), strict=True):
        yield dict(zip(names, cells, strict=True))


def _uncertainties(frame: pd.DataFrame, table: TableDescription) -> Faults:
    """An uncertainty has a basis, and a basis has an uncertainty."""
    columns = [name for name in frame.columns if name.startswith(("u(", "u_relative"))]
    some = frame[columns].notna().any(axis=1)
    none = frame["u_basis"] == "none"
    for place in frame.loc[some == none, "row"]:
        yield problem(table, int(place), "u_basis", frame["u_basis"][place - 2], "none without u, a basis with one")


def _status(frame: pd.DataFrame, table: TableDescription) -> Faults:
    """What is from memory was seen nowhere; what was seen says where."""
    recalled = (frame["status"] == "recalled") & (frame["read_in"] != "")
    for row in frame.loc[recalled, "row"]:
        yield problem(table, int(row), "read_in", frame["read_in"][row - 2], "nothing for a recalled figure")
    unseen = (frame["status"] == "read") & (frame["read_in"] == "") & (frame["u_basis"] != "convention")
    for row in frame.loc[unseen, "row"]:
        yield problem(table, int(row), "read_in", "", "where the figure was read")


def _formation(frame: pd.DataFrame, table: TableDescription) -> Faults:
    value = "formation_enthalpy / (kJ/mol)"
    sets_with_hydrates = set()
    for row in _rows(frame):
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
        if row["reference_set"] == "NBS-1982" and species == "NO3-" and abs(row[value] - IN_NBS_LIST) < 0.5:
            yield problem(table, place, value, row[value], f"{NITRATE}: the printed ion contradicts its own nitrates")
        if phase == "cr" and "H2O" in species:
            sets_with_hydrates.add(row["reference_set"])
    for row in _rows(frame[frame["species"] == "H2O"]):
        if row["reference_set"] in sets_with_hydrates - ROUNDED_SETS and abs(row[value] - WATER) > 0.0051:
            yield problem(table, row["row"], value, row[value], f"{WATER}: ten waters carry ten times the rounding")


def _ion(row: dict[str, Any], heading: str, table: TableDescription) -> Faults:
    try:
        ion = read_ion(row[heading])
    except FormulaError as error:
        yield problem(table, row["row"], heading, row[heading], f"{error.expected}. {error.remedy[:-1]}")
        return
    if ion.name != row[heading]:
        yield problem(table, row["row"], heading, row[heading], f"the list's name {ion.name}")
    if ion.charge != row["charge"]:
        yield problem(table, row["row"], "charge", row["charge"], f"{ion.charge}, the charge of {ion.name}")


def _crystal(row: dict[str, Any], table: TableDescription) -> Faults:
    try:
        salt = read_salt(row["species"])
    except FormulaError as error:
        yield problem(table, row["row"], "species", row["species"], f"{error.expected}. {error.remedy[:-1]}")
        return
    if salt.formula != row["species"]:
        yield problem(table, row["row"], "species", row["species"], f"the spelling {salt.formula}")
    if row["charge"] != 0:
        yield problem(table, row["row"], "charge", row["charge"], "0 for a crystal")


def _solution(frame: pd.DataFrame, table: TableDescription) -> Faults:
    for row in _rows(frame):
        cycle = row["origin"] == "formation cycle"
        if cycle != (row["status"] == "derived"):
            yield problem(
                table, row["row"], "origin", row["origin"], "formation cycle for derived rows, and only there"
            )
        if row["reference_set"] == "Bichowsky-Rossini-1936" and row["temperature / K"] > 297:
            yield problem(
                table, row["row"], "temperature / K", row["temperature / K"], "291.15: that table is for 18 °C"
            )


def _pitzer(frame: pd.DataFrame, table: TableDescription) -> Faults:
    preferred = frame[frame["preferred"]].groupby("electrolyte").size()
    for electrolyte in dict.fromkeys(frame["electrolyte"]):
        if preferred.get(electrolyte, 0) != 1:
            first = int(frame.loc[frame["electrolyte"] == electrolyte, "row"].iloc[0])
            found = int(preferred.get(electrolyte, 0))
            yield problem(table, first, "preferred", f"{found} sets", "one preferred set an electrolyte")
    for row in _rows(frame):
        if row["preferred"] != (row["why"] != ""):
            yield problem(table, row["row"], "why", row["why"], "a reason for a preferred set, and only there")
        if pd.notna(row["beta2_derivative / (kg/(mol K))"]) != pd.notna(row["alpha2 / (kg^0.5 mol^-0.5)"]):
            yield problem(table, row["row"], "alpha2 / (kg^0.5 mol^-0.5)", "", "α₂ with β⁽²⁾, and only there")
        slope = "debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"
        if row["reference_set"].startswith("refit") and pd.isna(row[slope]):
            yield problem(table, row["row"], slope, "", "the slope that our own fit used")
        if read_salt(row["electrolyte"]).electrolyte != row["electrolyte"]:
            expected = read_salt(row["electrolyte"]).electrolyte
            yield problem(table, row["row"], "electrolyte", row["electrolyte"], f"the spelling {expected}")


def _lattice(frame: pd.DataFrame, table: TableDescription) -> Faults:
    for row in _rows(frame):
        energy = row["quantity"] == "lattice potential energy"
        if energy and row["gas_ions"]:
            yield problem(table, row["row"], "gas_ions", row["gas_ions"], "nothing for a potential energy")
        if not energy and not row["gas_ions"]:
            yield problem(table, row["row"], "gas_ions", "", "the set of gaseous ions in a lattice enthalpy")


def _ions(frame: pd.DataFrame, table: TableDescription) -> Faults:
    for row in _rows(frame):
        yield from _ion(row, "ion", table)


def _radius(frame: pd.DataFrame, table: TableDescription) -> Faults:
    for row in _rows(frame):
        if (row["coordination"] != "") != row["reference_set"].startswith("Shannon"):
            yield problem(table, row["row"], "coordination", row["coordination"], "one for crystal radii only")


_RULES: dict[str, tuple[Callable[[pd.DataFrame, TableDescription], Faults], ...]] = {
    "formation_enthalpy": (_formation,),
    "solution_enthalpy": (_solution,),
    "pitzer_enthalpy": (_pitzer,),
    "lattice_enthalpy": (_lattice,),
    "hydration_enthalpy": (_ions,),
    "ionic_radius": (_ions, _radius),
}
