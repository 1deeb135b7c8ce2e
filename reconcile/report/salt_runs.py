"""The runs of one salt as a table: dissolutions, additions and dilutions told apart."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from reconcile.report.cells import Line, View, text, two_places, view
from reconcile.report.kinds import WORDS, Kinds
from reconcile.report.markup import minus
from reconcile.report.results import rows
from reconcile.report.rounding import rounded, significant, value_and_u

_HEADS = (
    "Run",
    "Lot",
    "Calorimeter",
    "Batch",
    "Molality / (mol/kg)",
    "Enthalpy / (kJ/mol)",
    "Dilution / (kJ/mol)",
    "At infinite dilution / (kJ/mol)",
    "Standardised residual",
    "Kind",
    "Remark",
)
_ALWAYS = (0, 4, 5, 6, 7, 8)
_NUMERIC = (4, 5, 6, 7, 8)


def runs_of(table: pd.DataFrame | None, kind: Kinds) -> View | None:
    """The table of a salt's runs; None where it has none.

    Parameters
    ----------
    table : DataFrame, optional
        Its rows of the results' runs, under their own index.
    kind : Kinds
        Of all runs.
    """
    if table is None or not len(table):
        return None
    lines: list[Line] = []
    for place, row in zip(table.index, rows(table), strict=True):
        limit, u = row["standard_enthalpy / (kJ/mol)"], row["u(standard_enthalpy) / (kJ/mol)"]
        correction = row["dilution_correction / (kJ/mol)"]
        molality, initial = significant(row["molality / (mol/kg)"], 4), float(kind.initial_molality[place])
        lines.append(
            (
                text(row["run"]),
                text(row["sample"]),
                text(row["calorimeter"]),
                text(row["batch"]),
                f"{significant(initial, 4)} to {molality}" if initial > 0 else molality,
                minus(rounded(row["enthalpy / (kJ/mol)"], row["u(enthalpy) / (kJ/mol)"])),
                minus(value_and_u(correction, u)[0]),
                minus(rounded(limit, u)),
                two_places(row["standardised_residual"]),
                WORDS[kind.code[place]][0] if kind.code[place] else "",
                "" if row["included"] else f"excluded: {text(row['reason'])}",
            )
        )
    used = [place for place in range(len(_HEADS)) if place in _ALWAYS or any(line[place] for line in lines)]
    heads = [_HEADS[place] for place in used]
    numeric = [position for position, place in enumerate(used) if place in _NUMERIC]
    kept = [tuple(line[place] for place in used) for line in lines]
    marked = [i for i, row in enumerate(rows(table)) if abs(row["standardised_residual"]) > 3 or not row["included"]]
    return view("Runs", heads, numeric, kept, _note(kind, table.index.to_numpy()), marked)


def _note(kind: Kinds, places: NDArray[np.int64]) -> str:
    """What two molalities mean, where a run has two."""
    _, added, diluted = kind.counted(places)
    told = ["Two molalities: where the run started and where it ended."] if added or diluted else []
    if added:
        told.append("The enthalpy of a successive addition is per mole of the salt added.")
    if diluted:
        told.append(
            "A heat of dilution is per mole of the salt in the solution; it has no standard enthalpy of solution, and "
            "bears on the dilution parameters only."
        )
    return " ".join(told)
