"""A table held to its description: every fault with file, row and reason."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterator, Sequence
from math import isfinite, nan
from typing import Any

from reconcile.reference.description import Column, TableDescription

Row = dict[
    str, Any
]  # heading: str, float (NaN where nothing stands), int or None, bool; and `row` as a spreadsheet counts


class ReferenceDataError(Exception):
    """Tables that may not be used; `problems` holds a line for each fault."""

    def __init__(self, problems: Sequence[str]) -> None:
        self.problems = tuple(problems)
        super().__init__("\n".join(self.problems))


def problem(table: TableDescription, row: int, heading: str, found: object, expected: str) -> str:
    """One line: file, row as a spreadsheet counts, column, what stands there, what was expected."""
    shown = f'"{found}"' if str(found) else "empty"
    return f"{table.file}, row {row}, `{heading}`: {shown}. Expected {expected}."


def read_rows(text: str, table: TableDescription) -> list[Row]:
    """Cells of a CSV text, typed as described; needs neither numpy nor pandas.

    Parameters
    ----------
    text : str
        The whole file.
    table : TableDescription
        What it should hold.

    Returns
    -------
    rows : list of dict
        By heading: text as str ("" where nothing stands), numbers as float (NaN), integers as int (None), booleans as
        bool; and `row`, counted as a spreadsheet does.

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
    cells = zip(*body, strict=True) if body else iter([()] * len(headings))
    columns = [_typed(column, typed, table, faults) for column, typed in zip(table.columns, cells, strict=True)]
    faults += _repeated_keys(body, headings, table)
    if faults:
        raise ReferenceDataError(faults)
    names = [*headings, "row"]
    return [dict(zip(names, row, strict=True)) for row in zip(*columns, range(2, len(body) + 2), strict=True)]


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


def _typed(column: Column, cells: Sequence[str], table: TableDescription, faults: list[str]) -> list[Any]:
    """The column's values; what is wrong goes into faults."""
    wrong = {
        **{i: "no blanks at either end" for i, cell in enumerate(cells) if cell != cell.strip()},
        **{i: "an entry: every row has one here" for i, cell in enumerate(cells) if column.required and not cell},
    }
    if column.kind == "string":
        values: list[Any] = list(cells)
        wrong |= _wrong_texts(column, cells)
    elif column.kind == "boolean":
        values = [cell == "true" for cell in cells]
        wrong |= {i: "true or false" for i, cell in enumerate(cells) if cell not in ("true", "false")}
    else:
        values, wrong_numbers = _numbers(column, cells)
        wrong = wrong_numbers | wrong
    faults += [problem(table, i + 2, column.heading, cells[i], expected) for i, expected in sorted(wrong.items())]
    return values


def _wrong_texts(column: Column, cells: Sequence[str]) -> dict[int, str]:
    if column.allowed:
        expected = " or ".join(column.allowed)
        return {i: expected for i, cell in enumerate(cells) if cell and cell not in column.allowed}
    if column.pattern:
        pattern = re.compile(column.pattern)
        expected = f"a text of the form {column.pattern}"
        return {i: expected for i, cell in enumerate(cells) if cell and not pattern.match(cell)}
    return {}


def _numbers(column: Column, cells: Sequence[str]) -> tuple[list[Any], dict[int, str]]:
    whole = column.kind == "integer"
    values: list[Any] = [None if whole else nan] * len(cells)
    wrong: dict[int, str] = {}
    for i, cell in enumerate(cells):
        if not cell:
            continue
        try:
            value = float(cell)
        except ValueError:
            wrong[i] = "a number"
            continue
        if not isfinite(value):
            wrong[i] = "a finite number; nothing at all where none is known"
        elif not (column.minimum <= value <= column.maximum and column.above < value < column.below):
            wrong[i] = _limits(column)
        elif whole and value != int(value):
            wrong[i] = "a whole number"
        else:
            values[i] = int(value) if whole else value
    return values, wrong


def _limits(column: Column) -> str:
    bounds = [
        f"at least {column.minimum:g}" if isfinite(column.minimum) else "",
        f"at most {column.maximum:g}" if isfinite(column.maximum) else "",
        f"more than {column.above:g}" if isfinite(column.above) else "",
        f"less than {column.below:g}" if isfinite(column.below) else "",
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
