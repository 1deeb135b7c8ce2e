"""Names that point somewhere: salts to formulae, runs to lots, calorimeters and batches."""

from __future__ import annotations

import datetime
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from difflib import get_close_matches

import numpy as np
import pandas as pd

from reconcile.campaign.problems import Problems, quoted
from reconcile.campaign.quantities import Built
from reconcile.campaign.tables import Booleans, Integers, Key
from reconcile.chemistry import FormulaError, Salt, read_salt

_DATE = re.compile(r"\d{4}-\d\d-\d\d([T ]\d\d(:?\d\d(:?\d\d([.,]\d+)?)?)?(Z|[+-]\d\d(:?\d\d)?)?)?", re.ASCII)


@dataclass(frozen=True, slots=True, eq=False)
class Spellings:
    """The salts of one table: what each of its rows has, as a position among the distinct texts."""

    salts: tuple[Salt | None, ...]  # by text; None where the text is a problem
    code: Integers  # (n,) position in salts, −1 where the cell is empty


def first_rows(code: Integers, labels: int) -> tuple[Integers, Integers]:
    """For each label the position of the first row that has it, and how many rows have it."""
    counts = np.bincount(code[code >= 0], minlength=labels)
    first = np.full(labels, -1, dtype=np.int64)
    rows = np.flatnonzero(code >= 0)[::-1]
    first[code[rows]] = rows  # the last assignment, that is the first row, stands
    return first, counts.astype(np.int64)


def tell_labels(
    built: Built, name: str, wrong: Sequence[int], say: Callable[[str], tuple[str, str, str, str]], problems: Problems
) -> None:
    """One problem for each wrong text of a column, at its first row, with the number of the others."""
    if not wrong:
        return
    key = built.table.keys[name]
    first, counts = first_rows(key.code, len(key.labels))
    heading = built.headings.find(name)
    for label in wrong:
        if counts[label] == 0:
            continue
        found, expected, remedy, code = say(key.labels[label])
        if counts[label] > 1:
            more = int(counts[label]) - 1
            found += f" (and in {more} more {'row' if more == 1 else 'rows'})"
        row = int(built.table.row[first[label]])
        problems.add(built.table.name, row, heading.text if heading else name, found, expected, remedy, code)


def parsed(key: Key) -> Spellings:
    """Every distinct formula of a column, read once; None for those that do not read."""
    salts: list[Salt | None] = []
    for label in key.labels:
        try:
            salts.append(read_salt(label))
        except FormulaError:
            salts.append(None)
    return Spellings(tuple(salts), key.code)


def spellings(built: Built, problems: Problems) -> Spellings:
    """Every distinct formula of a table, read once, those told that do not read."""
    found = parsed(built.table.keys["salt"])
    wrong = [position for position, salt in enumerate(found.salts) if salt is None]

    def say(label: str) -> tuple[str, str, str, str]:
        try:
            read_salt(label)
        except FormulaError as fault:
            return quoted(label), fault.expected, fault.remedy, "formula"
        raise AssertionError(label)

    tell_labels(built, "salt", wrong, say, problems)
    return found


def look_up(built: Built, name: str, names: Key, file: str, problems: Problems) -> Integers:
    """Row of another table that each row names, −1 where it names none or an unknown one (a problem).

    Parameters
    ----------
    built : Built
        The table that names.
    name : str
        The column that names: sample or calorimeter.
    names : Key
        The column of names in the other table.
    file : str
        The other table's file.
    problems : Problems
        Takes in the unknown names.
    """
    key = built.table.keys[name]
    rows, _ = first_rows(names.code, len(names.labels))
    where = dict(zip(names.labels, rows.tolist(), strict=True))
    target = np.array([where.get(label, -1) for label in key.labels] + [-1], dtype=np.int64)
    wrong = [position for position, label in enumerate(key.labels) if label not in where]

    def say(label: str) -> tuple[str, str, str, str]:
        close = get_close_matches(label, names.labels, n=1, cutoff=0.6)
        remedy = f"Did you mean {close[0]}?" if close else f"Add a row for it to {file}."
        return f"{quoted(label)} is not in {file}", f"a {name} of {file}", remedy, f"unknown {name}"

    tell_labels(built, name, wrong, say, problems)
    return target[key.code]


def duplicates(built: Built, name: str, problems: Problems) -> None:
    """Names that must be unique and are not."""
    key = built.table.keys[name]
    if np.count_nonzero(key.code >= 0) == len(key.labels):
        return
    first, counts = first_rows(key.code, len(key.labels))
    heading = built.headings.find(name)
    again = np.flatnonzero((key.code >= 0) & (counts[key.code] > 1) & (first[key.code] != np.arange(key.code.size)))
    for position in again.tolist():
        label = int(key.code[position])
        found = f"{quoted(key.labels[label])} is there already, in row {built.table.row[first[label]]}"
        problems.add(
            built.table.name, int(built.table.row[position]), heading.text if heading else name, found,
            f"each {name} once", "Give one of the two another name.", f"duplicate {name}",
        )  # fmt: skip


def run_names(key: Key, row: Integers) -> Key:
    """Names of the runs: as typed, whole numbers without a point; the row's number where there is none."""
    labels = list(key.labels)
    pointed = "." in "".join(labels)
    if pointed and all(re.fullmatch(r"[0-9]+(\.0+)?", label) for label in labels):  # whole numbers saved as 17.0
        labels = [label.split(".")[0] for label in labels]
    missing = np.flatnonzero(key.code < 0)
    if not missing.size and not pointed:
        return Key(key.code, key.labels)
    position = {label: place for place, label in enumerate(dict.fromkeys(labels))}
    again = np.array([position[label] for label in labels] + [-1], dtype=np.int64)
    code = again[key.code]
    if len(missing) == len(key.code):
        return Key(np.arange(len(row), dtype=np.int64), tuple(map(str, row.tolist())))
    code[missing] = [position.setdefault(str(number), len(position)) for number in row[missing].tolist()]
    return Key(code, tuple(position))


def batches(built: Built, problems: Problems) -> Key:
    """The batch of each run: as named, else the day of its date (YYYY-MM-DD), else none."""
    named, dates = built.table.keys["batch"], built.table.keys["date"]
    days = [_day(label) for label in dates.labels]

    def say(label: str) -> tuple[str, str, str, str]:
        return quoted(label), "a date in ISO 8601", "Write year-month-day, as in 2026-05-31.", "date"

    tell_labels(built, "date", [place for place, day in enumerate(days) if day is None], say, problems)
    if not dates.labels:
        return named
    names = dict.fromkeys([*named.labels, *(day for day in days if day)])
    position = {name: place for place, name in enumerate(names)}
    by_day = np.array([-1 if day is None else position[day] for day in days] + [-1], dtype=np.int64)[dates.code]
    code, found = pd.factorize(np.where(named.code >= 0, named.code, by_day))  # in order of appearance
    labels = list(names)
    kept = [labels[place] for place in found.tolist() if place >= 0]
    if -1 in found.tolist():
        gap = found.tolist().index(-1)
        code = np.where(code == gap, -1, code - (code > gap))
    return Key(np.asarray(code, dtype=np.int64), tuple(kept))


def _day(text: str) -> str | None:
    """The day of a date in ISO 8601."""
    if not _DATE.fullmatch(text):
        return None
    try:
        datetime.datetime.fromisoformat(text.replace(",", "."))
    except ValueError:
        return None
    return text[:10]


def unify(spelt: Integers, salts: Sequence[Salt | None]) -> tuple[tuple[Salt, ...], Integers]:
    """One salt for all spellings of it, written as first typed; in order of first appearance.

    Parameters
    ----------
    spelt : array (n,)
        Position in ``salts`` of each run, −1 where there is none.
    salts : sequence
        Of all distinct texts.

    Returns
    -------
    salts : tuple of Salt
    salt : array (n,)
        Position in it of each run, −1 where there is none.
    """
    _, appearing = pd.factorize(spelt)
    found: dict[str, int] = {}
    ordered: list[Salt] = []
    moved = np.full(len(salts) + 1, -1, dtype=np.int64)
    for place in appearing.tolist():
        salt = salts[place] if place >= 0 else None
        if salt is None:
            continue
        if salt.identity not in found:
            found[salt.identity] = len(ordered)
            ordered.append(salt)
        moved[place] = found[salt.identity]
    return tuple(ordered), moved[spelt]


def identities(code: Integers, salts: Sequence[Salt | None]) -> Integers:
    """The same number for the same salt, −1 where there is none, so that two columns of spellings can be compared."""
    known: dict[str, int] = {}
    number = [-1 if salt is None else known.setdefault(salt.identity, len(known)) for salt in salts]
    return np.array([*number, -1], dtype=np.int64)[code]


def rows_of(mask: Booleans, built: Built) -> Integers:
    """Rows, as a spreadsheet counts, where a mask is True."""
    return built.table.row[np.flatnonzero(mask)]
