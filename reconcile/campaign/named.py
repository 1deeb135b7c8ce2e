"""Lots and calorimeters that a table of runs names without a table of their own: taken as they are named."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from reconcile.campaign.links import first_rows, tell_labels
from reconcile.campaign.problems import Problems, quoted
from reconcile.campaign.quantities import Built, empty_table
from reconcile.campaign.tables import Integers, Key, Table


def calorimeters_as_named(runs: Built) -> tuple[Table, Integers]:
    """One calorimeter for each name in the runs, and that of each run; nothing else is known of them."""
    key = runs.table.keys["calorimeter"]
    table = empty_table("calorimeters.csv", "calorimeters", len(key.labels))
    return replace(table, keys={**table.keys, "calorimeter": _each(key)}), key.code


def samples_as_named(runs: Built, problems: Problems) -> tuple[Table, Integers]:
    """One lot for each name in the runs that stands beside a formula, and that of each run.

    A name without a formula in the same row says nothing: it is a problem.
    """
    key, salt = runs.table.keys["sample"], runs.table.keys["salt"]
    table = empty_table("samples.csv", "samples", len(key.labels))
    if not key.labels:
        return table, key.code
    bare = (key.code >= 0) & (salt.code < 0)
    wrong = np.unique(key.code[bare]).tolist() if "salt" not in runs.headings.blamed else []

    def say(label: str) -> tuple[str, str, str, str]:
        found = f"{quoted(label)}, but there is no samples.csv"
        remedy = "Add samples.csv with a row for it, or a column `salt` with the formula in every row."
        return found, "a lot whose salt is known", remedy, "unknown sample"

    tell_labels(runs, "sample", wrong, say, problems)
    first, _ = first_rows(np.where(salt.code >= 0, key.code, -1), len(key.labels))
    formula = np.where(first >= 0, salt.code[first], -1)
    keys = {**table.keys, "sample": _each(key), "salt": Key(formula.astype(np.int64), salt.labels)}
    return replace(table, keys=keys), key.code


def _each(key: Key) -> Key:
    return Key(np.arange(len(key.labels), dtype=np.int64), key.labels)
