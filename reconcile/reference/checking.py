"""A table held to its description: every fault with file, row and reason."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterator, Sequence

import numpy as np
import pandas as pd

from reconcile.reference.description import Column, TableDescription


class ReferenceDataError(Exception):
    """Tables that may not be used; `problems` holds a line for each fault."""

    def __init__(self, problems: Sequence[str]) -> None:
        self.problems = tuple(problems)
        super().__init__("\n".join(self.problems))


def problem(table: TableDescription, row: int, heading: str, found: object, expected: str) -> str:
    """One line: file, row as a spreadsheet counts, column, what stands there, what was expected."""
    shown = f'"{found}"' if str(found) else "empty"
    return f"{table.file}, row {row}, `{heading}`: {shown}. Expected {expected}."


def read_table(text: str, table: TableDescription) -> pd.DataFrame:
    """Cells of a CSV text, typed as described.

    Parameters
    ----------
    text : str
        The whole file.
    table : TableDescription
        What it should hold.

    Returns
    -------
    frame : DataFrame
        Columns under their headings: text as str (empty where nothing stands), numbers as float64 (NaN), integers
        as Int64, booleans as bool; and `row`, counted as a spreadsheet does.

    Raises
    ------
    ReferenceDataError
        With all faults of the file: heading, length of a row, type, limits, missing cells, repeated keys.
    """
    lines = list(csv.reader(io.StringIO(text)))
    headings = [column.heading for column in table.columns]
    if not lines or lines[0] != headings:
        raise ReferenceDataError(list(_heading_faults(lines[0] if lines else [], headings, table)))
    body = lines[1:]
    lengths = [
        f"{table.file}, row {number}: {len(line)} cells. Expected {len(headings)}."
        for number, line in enumerate(body, start=2)
        if len(line) != len(headings)
    ]
    if lengths:
        raise ReferenceDataError(lengths)
    faults: list[str] = []
    columns: dict[str, object] = {}
    for column, cells in zip(table.columns, zip(*body, strict=True) if body else [()] * len(headings), strict=True):
        columns[column.heading] = _typed(list(cells), column, table, faults)
    faults += _repeated_keys(body, headings, table)
    if faults:
        raise ReferenceDataError(faults)
    frame = pd.DataFrame(columns)
    frame["row"] = np.arange(2, len(body) + 2)
    return frame


def _heading_faults(found: list[str], expected: list[str], table: TableDescription) -> Iterator[str]:
    for heading in expected:
        if heading not in found:
            same = [other for other in found if other.split(" / ")[0] == heading.split(" / ")[0]]
            stands = f'"{same[0]}"' if same else "no such column"
            yield f"{table.file}, row 1, heading: {stands}. Expected `{heading}`."
    for heading in found:
        if heading not in expected:
            yield f'{table.file}, row 1, heading: "{heading}" is not described in datapackage.json.'
    if sorted(found) == sorted(expected):
        yield f"{table.file}, row 1, heading: order differs from datapackage.json."


def _typed(cells: list[str], column: Column, table: TableDescription, faults: list[str]) -> object:
    """The column's values; what is wrong goes into faults."""

    def fault(position: int, expected: str) -> None:
        faults.append(problem(table, position + 2, column.heading, cells[position], expected))

    for i, cell in enumerate(cells):
        if cell != cell.strip():
            fault(i, "no blanks at either end")
        elif column.required and not cell:
            fault(i, "an entry: every row has one here")
    if column.kind == "string":
        pattern = re.compile(column.pattern) if column.pattern else None
        for i, cell in enumerate(cells):
            if cell and column.allowed and cell not in column.allowed:
                fault(i, " or ".join(column.allowed))
            elif cell and pattern and not pattern.match(cell):
                fault(i, f"a text of the form {column.pattern}")
        return cells
    if column.kind == "boolean":
        for i, cell in enumerate(cells):
            if cell not in ("true", "false"):
                fault(i, "true or false")
        return [cell == "true" for cell in cells]
    values = np.full(len(cells), np.nan)
    for i, cell in enumerate(cells):
        if not cell:
            continue
        try:
            values[i] = float(cell)
        except ValueError:
            fault(i, "a number")
            continue
        if not np.isfinite(values[i]):
            fault(i, "a finite number; nothing at all where none is known")
        elif not (column.minimum <= values[i] <= column.maximum and column.above < values[i] < column.below):
            fault(i, _limits(column))
        elif column.kind == "integer" and values[i] != int(values[i]):
            fault(i, "a whole number")
    if column.kind == "integer":
        return pd.array([None if np.isnan(value) else int(value) for value in values], dtype="Int64")
    return values


def _limits(column: Column) -> str:
    bounds = [
        f"at least {column.minimum:g}" if np.isfinite(column.minimum) else "",
        f"at most {column.maximum:g}" if np.isfinite(column.maximum) else "",
        f"more than {column.above:g}" if np.isfinite(column.above) else "",
        f"less than {column.below:g}" if np.isfinite(column.below) else "",
    ]
    return " and ".join(bound for bound in bounds if bound)


def _repeated_keys(body: list[list[str]], headings: list[str], table: TableDescription) -> Iterator[str]:
    places = [headings.index(name) for name in table.key]
    first: dict[tuple[str, ...], int] = {}
    for row, line in enumerate(body, start=2):
        key = tuple(line[place] for place in places)
        if key in first:
            shown = ", ".join(part for part in key if part)
            yield f"{table.file}, row {row}: {shown} stands already in row {first[key]}. Expected each once."
        else:
            first[key] = row
