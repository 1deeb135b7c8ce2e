"""Runs that start in a solution, heats of dilution and successive additions: what they must have, what is told."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from reconcile.campaign.columns import columns_of
from reconcile.campaign.links import rows_of
from reconcile.campaign.presence import heading_of, needed, there
from reconcile.campaign.problems import Problems
from reconcile.campaign.quantities import Built
from reconcile.campaign.tables import Booleans, Floats, Integers, Remark, Table
from reconcile.chemistry import Salt

DILUTION = "dilution"
TOLD_SALTS = 10  # of more salts only so many are named
_BY_ENTHALPY = "Give the enthalpy of dilution, per mole of salt, in `enthalpy / (kJ/mol)`, and empty the cell."
# What the row of a dilution may not have: what it has instead, how to mend it, and the kind of the fault.
_FOREIGN = {
    "molality": (
        "an empty cell: a dilution has an initial and a final molality",
        "Move it to `final_molality / (mol/kg)`, or empty the cell.", "not of a dilution",
    ),
    "heat": ("the enthalpy of dilution; its heat is not yet served", _BY_ENTHALPY, "not yet served"),
    "mass": ("an empty cell; the masses of a dilution are not yet served", _BY_ENTHALPY, "not yet served"),
    "water": ("an empty cell; the masses of a dilution are not yet served", _BY_ENTHALPY, "not yet served"),
}  # fmt: skip


def dilution_rows(built: Built) -> Booleans:
    """Rows that are heats of dilution.

    One whose role is a problem already, its word or the column's heading, is taken for what it looks like, so that
    everything else that is wrong with it is told in the same go.
    """
    role = built.table.keys["role"]
    dilution = _of_role(role.code, role.labels, (DILUTION,))
    final = built.headings.find("final_molality")
    return dilution if final is None else dilution | (_undecided(built) & there(built, "final_molality"))


def _of_role(code: Integers, labels: Sequence[str], words: Sequence[str]) -> Booleans:
    matches: Booleans = np.array([*(label in words for label in labels), False], dtype=bool)[code]
    return matches


def _undecided(built: Built) -> Booleans:
    """Rows whose role is a problem already."""
    role, words = built.table.keys["role"], columns_of("runs")["role"].words
    if "role" in built.headings.blamed:
        return np.ones(len(built.table), dtype=bool)
    return (role.code >= 0) & ~_of_role(role.code, role.labels, words)


def check_dilutions(built: Built, dilution: Booleans, problems: Problems) -> None:
    """What the row of a dilution must have and may not have, and that no other row has a final molality.

    Parameters
    ----------
    built : Built
        The table of runs.
    dilution : array (n,)
        From `dilution_rows`.
    problems : Problems
        Takes in every fault.
    """
    _final_elsewhere(built, dilution, problems)
    if not dilution.any():
        return
    if built.headings.has("heat") or built.headings.has("enthalpy"):  # else told already
        without_heat = dilution & ~there(built, "heat")
        needed(built, "enthalpy", without_heat, "a dilution needs its enthalpy, per mole of salt", problems)
    needed(built, "initial_molality", dilution, "a dilution needs the molality that it starts from", problems)
    needed(built, "final_molality", dilution, "a dilution needs the molality that it ends at", problems)
    for name, (expected, remedy, code) in _FOREIGN.items():
        _tell(built, name, dilution & there(built, name), "{} in the row of a dilution", expected, remedy, code,
              problems)  # fmt: skip
    initial = built.table.quantities["initial_molality"].value
    final = built.table.quantities["final_molality"].value
    _tell(
        built, "initial_molality", dilution & (initial == 0), "{} in the row of a dilution",
        "more than 0 mol/kg: a dilution starts from a solution", "Write the molality of the solution diluted.",
        "out of range", problems,
    )  # fmt: skip
    with np.errstate(invalid="ignore"):
        reverse = dilution & (initial > 0) & (final >= initial)
    for position in np.flatnonzero(reverse).tolist():
        problems.add(
            built.table.name, int(built.table.row[position]), heading_of(built, "final_molality"),
            f"{_amount(built, 'final_molality', position)} from an initial {initial[position]:.6g} mol/kg",
            f"less than {initial[position]:.6g} mol/kg: a dilution makes the solution more dilute",
            "Correct one of the two, or exchange them.", "no dilution",
        )  # fmt: skip


def _final_elsewhere(built: Built, dilution: Booleans, problems: Problems) -> None:
    """A final molality where the role says that the run is no dilution."""
    wrong = there(built, "final_molality") & ~dilution
    if not wrong.any():
        return
    if not built.headings.has("role"):
        problems.add(
            built.table.name, 1, None, "there is no column `role`; a final molality belongs to a dilution",
            f"a column `role` with {DILUTION} in the rows of dilutions", "Add it.", "missing column", (1, -1),
        )  # fmt: skip
        return
    _tell(
        built, "final_molality", wrong, "{} in a row that is no dilution",
        f"an empty cell, or the role {DILUTION}", f"Write {DILUTION} in `role`, or move it to `molality / (mol/kg)`.",
        "not of a sample", problems,
    )  # fmt: skip


def check_additions(built: Built, dilution: Booleans, problems: Problems) -> None:
    """A molality that a run ends at is larger than the one it starts from; masses speak for themselves."""
    quantities = built.table.quantities
    initial, molality = quantities["initial_molality"].value, quantities["molality"].value
    weighed = there(built, "mass") & there(built, "water")
    with np.errstate(invalid="ignore"):
        wrong = ~dilution & ~weighed & (initial > 0) & (molality <= initial)
    for position in np.flatnonzero(wrong).tolist():
        problems.add(
            built.table.name, int(built.table.row[position]), heading_of(built, "molality"),
            f"{_amount(built, 'molality', position)} after the run, from an initial {initial[position]:.6g} mol/kg",
            f"more than {initial[position]:.6g} mol/kg: it is the salt there before and the salt added",
            "Write the molality of the final solution, all salt in all water.", "no addition",
        )  # fmt: skip


def _tell(
    built: Built, name: str, rows: Booleans, found: str, expected: str, remedy: str, code: str, problems: Problems
) -> None:
    """The same problem in each row, with what stands there; loops over the bad rows only."""
    for position, row in zip(np.flatnonzero(rows).tolist(), rows_of(rows, built).tolist(), strict=True):
        there_stands = found.format(_amount(built, name, position))
        problems.add(built.table.name, row, heading_of(built, name), there_stands, expected, remedy, code)


def _amount(built: Built, name: str, position: int) -> str:
    """What stands in a cell, in the glossary's unit; the name of the column where that is no number."""
    value = float(built.table.quantities[name].value[position])
    return f"a {name}" if np.isnan(value) else f"{value:.6g} {columns_of('runs')[name].unit}"


def remarks_of_solutions(runs: Table, salts: Sequence[Salt], salt: Integers) -> tuple[Remark, ...]:
    """How many runs are dilutions, how many start in a solution, of which salts, and how they are taken.

    Parameters
    ----------
    runs : Table
        Checked, n rows.
    salts : sequence
        Of the campaign.
    salt : array (n,)
        Position in ``salts`` of each run.
    """
    role = runs.keys["role"]
    dilution = _of_role(role.code, role.labels, (DILUTION,))
    initial: Floats = runs.quantities["initial_molality"].value
    addition = ~dilution & (initial > 0)
    remarks = []
    if dilution.any():
        diluted = np.bincount(salt[dilution], minlength=len(salts))
        dissolved = np.bincount(salt[~dilution], minlength=len(salts))
        are = "1 run is a heat" if diluted.sum() == 1 else f"{diluted.sum()} runs are heats"
        text = f"{are} of dilution, of {_named(salts, diluted)}: per mole of salt, of the solution and of no crystal"
        remarks.append(Remark(text, f"salt {_named(salts, diluted, count=False)}"))
        alone = np.where(dissolved == 0, diluted, 0)
        if alone.any():
            names = _named(salts, alone, count=False)
            remarks.append(Remark(f"no run dissolves {names}: there are heats of dilution only", f"salt {names}"))
    if addition.any():
        added = np.bincount(salt[addition], minlength=len(salts))
        start = "1 run starts" if added.sum() == 1 else f"{added.sum()} runs start"
        text = (
            f"{start} in a solution of the salt that is added ({_named(salts, added)}): `water` is taken as all the "
            "water in it without its salt, `molality` as that of all salt after the run, `enthalpy` as per mole added"
        )
        remarks.append(Remark(text, f"salt {_named(salts, added, count=False)}"))
    return tuple(remarks)


def _named(salts: Sequence[Salt], runs: Integers, *, count: bool = True) -> str:
    """The salts that have runs, with how many each: KCl (2), NaCl (1)."""
    places = np.flatnonzero(runs).tolist()
    names = [salts[one].formula + (f" ({runs[one]})" if count else "") for one in places[:TOLD_SALTS]]
    left = len(places) - len(names)
    return ", ".join(names) + (f" and {left} more" if left else "")
