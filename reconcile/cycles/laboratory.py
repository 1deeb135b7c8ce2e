"""The laboratory's own values, put in place of the tabulated ones."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd

from reconcile.campaign import ENTHALPY_OF_SOLUTION, FORMATION_ENTHALPY, LabReference
from reconcile.chemistry import IONS, read_salt

LABORATORY = "laboratory"  # status and reference set of an own value
U_BASIS = "stated by the laboratory"


def with_own_solution_enthalpies(published: pd.DataFrame, references: Sequence[LabReference]) -> pd.DataFrame:
    """Published enthalpies of solution, the laboratory's own where it states one.

    Parameters
    ----------
    published : DataFrame (S rows)
        As `reference.solution_enthalpies` gives it: index the formulas, value and u / (kJ/mol).
    references : sequence of LabReference
        Those of other quantities, and of salts that are not asked for, change nothing.

    Returns
    -------
    DataFrame (S rows)
        A new one. An own value counts as independent: it was not computed from the formation enthalpies.
    """
    own = {_identity(one): one for one in references if one.quantity == ENTHALPY_OF_SOLUTION}
    out = published.copy()
    if not own:
        return out
    for position, formula in enumerate(out.index):  # salts, not runs
        one = own.get(read_salt(str(formula)).identity)
        if one is not None:
            facts = {**_facts(one), "salt": one.species, "phase": one.phase, "independent": True, "taken_over_by": ""}
            _put(out, position, facts)
    return out


def with_own_formation_enthalpies(formation: pd.DataFrame, references: Sequence[LabReference]) -> pd.DataFrame:
    """A set of formation enthalpies, the laboratory's own values in it; species that the set lacks come last.

    Parameters
    ----------
    formation : DataFrame
        As `reference.formation_enthalpies` gives it: species, phase, identity, charge, value and u / (kJ/mol), …
    references : sequence of LabReference
        Those of other quantities change nothing.

    Returns
    -------
    DataFrame
        A new one. Whether an own value rests on the enthalpy of solution of the same crystal nobody has assessed, and
        `circular` says so.
    """
    own = [one for one in references if one.quantity == FORMATION_ENTHALPY]
    out = formation.copy()
    if not own:
        return out
    if "reference_set" not in out.columns:
        out["reference_set"] = pd.Series(np.nan, index=out.index, dtype=object)
    for one in own:
        identity = _identity(one)
        here = np.flatnonzero((out["phase"].eq(one.phase) & out["identity"].eq(identity)).to_numpy())
        facts = {**_facts(one), "circular": "not assessed"}
        if here.size:
            for position in here.tolist():
                _put(out, position, facts)
            continue
        charge = IONS[one.species].charge if one.phase == "aq" else 0
        whole = {"species": one.species, "phase": one.phase, "charge": charge, "identity": identity, **facts}
        row = pd.DataFrame([{column: whole.get(column, "") for column in out.columns}]).astype(out.dtypes.to_dict())
        out = pd.concat([out, row], ignore_index=True)
    return out


def _identity(one: LabReference) -> str:
    """What the tables find the species by: Salt.identity of a crystal, else its name."""
    return read_salt(one.species).identity if one.phase == "cr" else one.species


def _facts(one: LabReference) -> dict[str, str | float | bool]:
    """What is known about an own value; all that belongs to the tabulated one is emptied."""
    return {
        "value": one.value, "u": one.u, "u_basis": U_BASIS, "source": one.source, "read_in": "", "year": np.nan,
        "status": LABORATORY, "reference_set": LABORATORY, "note": "",
    }  # fmt: skip


def _put(frame: pd.DataFrame, position: int, facts: dict[str, str | float | bool]) -> None:
    """Write the facts into one row, as far as the table has their columns."""
    for place, name in enumerate(frame.columns):
        if name in facts:
            frame.iloc[position, place] = facts[str(name)]
