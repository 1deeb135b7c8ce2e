"""Cells: columns of text to codes and labels, columns of numbers to floats, bad ones told one by one."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

import numpy as np
import pandas as pd

from reconcile.campaign.problems import Problems, number, quoted
from reconcile.campaign.tables import Booleans, Floats, Integers, Key

_LETTERS = re.compile(r"[a-df-zA-DF-Z_]")
_COMMA = re.compile(r"[+-]?\d+,\d+(?:[eE][+-]?\d+)?")
_MINUS = re.compile(r"[−–‐‑]\s*\d+\.?\d*(?:[eE][+-]?\d+)?")
_CONCISE = re.compile(r"[+-]?\d+\.?\d*\(\d+\.?\d*\)")
_WITH_UNIT = re.compile(r"([+-]?\d+\.?\d*(?:[eE][+-]?\d+)?)\s*[^\W\d_°%].*|([+-]?\d+\.?\d*)\s*[°%].*")


@dataclass(frozen=True, slots=True, eq=False)
class Numbers:
    """One column of numbers as typed; NaN where the cell is empty or bad."""

    value: Floats  # (n,)
    bad: Booleans  # (n,) True where something stands that is no number; a problem tells it


def numbers(cells: pd.Series, file: str, row: Integers, heading: str, problems: Problems) -> Numbers:
    """A column's cells as floats.

    A column that pandas read as numbers is looked at only for infinities; any other cell by cell where it is not empty
    and not a number.
    """
    if cells.dtype.kind in "fiu":
        value = cells.to_numpy(dtype=np.float64)
        bad = np.isinf(value)
    else:
        text = cells.astype(object)
        value = pd.to_numeric(text, errors="coerce").to_numpy(dtype=np.float64)
        typed = text.notna().to_numpy(dtype=bool)
        odd = np.flatnonzero(typed & ~np.isfinite(value))
        bad = np.zeros(value.size, dtype=bool)
        bad[odd] = [bool(str(cell).strip()) for cell in text.iloc[odd]]
        mixed = np.flatnonzero(typed & np.isfinite(value))  # to_numeric also takes "0x10", "True"
        strange = [isinstance(cell, bool) or bool(_LETTERS.search(str(cell))) for cell in text.iloc[mixed]]
        bad[mixed[np.array(strange, dtype=bool)]] = True
    for position in np.flatnonzero(bad).tolist():
        found = cells.iloc[position]
        if isinstance(found, float) and math.isinf(found):
            found = number(found)
        expected, remedy, code = _mend(str(found).strip())
        problems.add(file, int(row[position]), heading, quoted(found), expected, remedy, code)
    if bad.any():
        value = np.where(bad, np.nan, value)
    return Numbers(value, bad)


def _mend(text: str) -> tuple[str, str, str]:
    """What was expected instead of a text that is no number, how to mend it, and the kind of the fault."""
    if _COMMA.fullmatch(text):
        return "a number with a decimal point", f"Write {text.replace(',', '.')}.", "decimal comma"
    if _MINUS.fullmatch(text):
        return "a number with a hyphen as minus sign", f"Write -{text[1:].strip()}.", "minus sign"
    if _CONCISE.fullmatch(text):
        found = "a number; the concise notation is in the design of the input but not yet served"
        return found, f"Write {text.split('(')[0]}, and the uncertainty in a column u(…).", "not yet served"
    if text.lstrip("+-").casefold() in ("inf", "infinity", "nan"):
        return "a finite number", "Leave the cell empty if nothing was measured.", "not finite"
    with_unit = _WITH_UNIT.fullmatch(text)
    if with_unit:
        return "a number", f"Write {with_unit[1] or with_unit[2]}; the unit stands in the heading.", "not a number"
    return "a number", "Write it with a decimal point, or leave the cell empty.", "not a number"


def key(cells: pd.Series) -> Key:
    """A column of text as codes into its distinct texts, in order of appearance; surrounding blanks do not count."""
    if isinstance(cells.dtype, pd.CategoricalDtype):
        codes, appearing = pd.factorize(np.append(cells.cat.codes.to_numpy(dtype=np.int64), -1))
        code = np.where(appearing < 0, -1, np.cumsum(appearing >= 0) - 1)[codes[:-1]]
        typed = [str(label) for label in cells.cat.categories[appearing[appearing >= 0]]]
    else:
        codes, found = pd.factorize(cells)
        code = np.asarray(codes, dtype=np.int64)
        typed = np.asarray(found, dtype=object).tolist()
    labels = _stripped(typed)
    if labels != typed:
        known: dict[str, int] = {}
        moved = [known.setdefault(label, len(known)) if label else -1 for label in labels]
        code = np.array([*moved, -1], dtype=np.int64)[code]  # the code −1 of an empty cell meets the last entry
        labels = list(known)
    code.flags.writeable = False
    return Key(code, tuple(labels))


def _stripped(texts: list[str]) -> list[str]:
    """Texts without surrounding blanks; looks at all of them in one go first, for a million is many."""
    joined = "\n" + "\n".join(texts) + "\n"
    if joined.isascii() and not any(blank in joined for blank in ("\n\n", " \n", "\n ", "\t", "\r", "\v", "\f")):
        return texts
    return [text.strip() for text in texts]


def no_key(rows: int) -> Key:
    """A text column that is not there; takes no memory."""
    return Key(np.broadcast_to(np.int64(-1), rows), ())


def no_numbers(rows: int, value: float = math.nan) -> Floats:
    """The same number in every row, by default none; takes no memory."""
    return np.broadcast_to(np.float64(value), rows)
