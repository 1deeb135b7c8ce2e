"""A CSV file as it stands: bytes to columns of numbers and texts, every row counted as a spreadsheet shows it."""

from __future__ import annotations

import csv
import hashlib
import io
import re
import warnings
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from reconcile.campaign.problems import Problems, quoted

_NUMBER = re.compile(r"([+-]?(?!0[0-9])([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?)?")  # or an empty cell
_COMMA, _LINE_END = ord(","), ord("\n")
_PIECE = 1 << 20  # bytes looked at in one go, so that they stay near the processor
_ALL_DIFFERENT = ("run", "note")  # texts that are seldom repeated; the others are few, and become categories


@dataclass(frozen=True, slots=True, eq=False)
class RawTable:
    """Cells of one file, not yet understood; column j of the frame is named j."""

    file: str
    headings: tuple[str, ...]
    row: NDArray[np.int64]  # (n,) as a spreadsheet counts, the heading being 1
    frame: pd.DataFrame  # (n, columns) float where all cells are numbers, else text; NaN where empty
    complete: bool  # False where rows had to be left out because their cells cannot be told apart
    blank_rows: int


def read_bytes(path: Path, problems: Problems, checksums: dict[str, str]) -> bytes | None:
    """The bytes of a file, BOM taken off; None, with a problem, where it cannot be read or is not UTF-8."""
    file = path.name
    problems.open(file)
    try:
        data = path.read_bytes()
    except OSError as fault:
        why = fault.strerror or type(fault).__name__
        problems.add(file, None, None, f"the file cannot be read: {why}", "a readable file", "", "unreadable")
        return None
    checksums[file] = hashlib.sha256(data).hexdigest()
    data = data.removeprefix(b"\xef\xbb\xbf")
    try:
        if not data.isascii():
            data.decode("utf-8")
        if b"\0" in data:
            raise UnicodeDecodeError("utf-8", data, data.index(b"\0"), data.index(b"\0") + 1, "NUL")
    except UnicodeDecodeError as fault:
        row = data.count(b"\n", 0, fault.start) + 1
        found = f"line {row} holds the byte 0x{data[fault.start]:02X}, which is not UTF-8 text"
        problems.add(file, None, None, found, "a text file in UTF-8", 'Save it as "CSV UTF-8".', "encoding")
        return None
    return data


def read_delimited(
    path: Path, texts: Sequence[str], quantities: Sequence[str], problems: Problems, checksums: dict[str, str]
) -> RawTable | None:
    """A CSV file's cells, numbers already numbers where a whole column is.

    Parameters
    ----------
    path : Path
        The file.
    texts : sequence of str
        Headings whose cells stay text as typed (run 001 is not 1, salt NA is not missing).
    quantities : sequence of str
        Names of quantities, by which a decimal comma that split a cell is recognised.
    problems, checksums
        Collectors.

    Returns
    -------
    RawTable or None
        None, with problems, where nothing can be made of the file.
    """
    data = read_bytes(path, problems, checksums)
    if data is None:
        return None
    file = path.name
    headings = _headings(file, data, problems)
    if headings is None:
        return None
    problems.open(file, headings)
    row: NDArray[np.int64] | None = None
    complete = True
    if not _even(data, len(headings)):
        row, data, complete = _straightened(file, data, headings, quantities, problems)
    frame = _frame(data, headings, texts)
    if row is None:
        row = np.arange(2, len(frame) + 2, dtype=np.int64)
    frame, row, blank = _without_blank_rows(frame, row)
    return RawTable(file, headings, row, frame, complete, blank)


def _headings(file: str, data: bytes, problems: Problems) -> tuple[str, ...] | None:
    """The first row; None, with a problem, where it is no heading."""
    if not (data[:4096].strip() or data.strip()):
        problems.add(file, None, None, "the file is empty", "a row of headings", "", "empty")
        return None
    try:
        first = next(csv.reader(_lines(data), strict=True), [])
    except csv.Error as fault:
        _unreadable(file, 1, fault, problems)
        return None
    headings = tuple(text.strip() for text in first)
    if not any(headings):
        expected = "headings, quantity / unit, in the first row"
        remedy = "Delete the rows above the headings."
        problems.add(file, 1, None, "the first row is blank", expected, remedy, "heading")
        return None
    if len(headings) == 1 and (";" in headings[0] or "\t" in headings[0]):
        sign = "semicolons" if ";" in headings[0] else "tabs"
        found = f"the cells are separated by {sign}, which is in the design of the input but not yet served"
        problems.add(file, 1, None, found, "commas", "Save it as CSV with commas and decimal points.", "not yet served")
        return None
    return headings


def _lines(data: bytes) -> io.TextIOWrapper:
    return io.TextIOWrapper(io.BytesIO(data), encoding="utf-8", newline="")


def _unreadable(file: str, line: int, fault: Exception, problems: Problems) -> None:
    remedy = "Look for a quotation mark that is not closed."
    problems.add(file, None, None, f"line {line} cannot be read: {fault}", "comma-separated cells", remedy, "cells")


def _even(data: bytes, width: int) -> bool:
    """Whether every line plainly has as many cells as the heading; no quotation marks, no blank lines, no surprises."""
    if b'"' in data or (b"\r" in data and data.count(b"\r") != data.count(b"\r\n")):
        return False
    letters = np.frombuffer(data, dtype=np.uint8)
    marks = []
    for start in range(0, letters.size, _PIECE):
        piece = letters[start : start + _PIECE]
        marks.append(piece[(piece == _COMMA) | (piece == _LINE_END)])
    if not data.endswith(b"\n"):
        marks.append(np.array([_LINE_END], dtype=np.uint8))
    order = np.concatenate(marks)
    if order.size % width:
        return False
    lines = order.reshape(-1, width)
    return bool(np.all(lines[:, -1] == _LINE_END) and np.all(lines[:, :-1] == _COMMA))


def _straightened(
    file: str, data: bytes, headings: tuple[str, ...], quantities: Sequence[str], problems: Problems
) -> tuple[NDArray[np.int64], bytes, bool]:
    """Rows told apart one by one, and whether all are left: those with too many or too few cells become problems."""
    width, complete = len(headings), True
    rows: list[int] = []
    good: list[list[str]] = []
    reader = csv.reader(_lines(data), strict=True)
    try:
        for position, cells in enumerate(reader, start=1):
            if position == 1:
                good.append(list(headings))
            elif len(cells) == width or not any(cell.strip() for cell in cells):
                good.append(cells if len(cells) == width else [""] * width)
                rows.append(position)
            else:
                complete = False
                _uneven(file, position, cells, headings, quantities, problems)
    except csv.Error as fault:
        complete = False
        _unreadable(file, reader.line_num, fault, problems)
    text = io.StringIO(newline="")
    csv.writer(text, lineterminator="\n").writerows(good)
    return np.array(rows, dtype=np.int64), text.getvalue().encode(), complete


def _uneven(
    file: str,
    row: int,
    cells: list[str],
    headings: tuple[str, ...],
    quantities: Sequence[str],
    problems: Problems,
) -> None:
    """The problem of one row whose cells are not as many as the headings."""
    place = _split_number(cells, headings, quantities) if len(cells) == len(headings) + 1 else None
    if place is not None:
        whole, part = cells[place].strip(), cells[place + 1].strip()
        expected, remedy = "a number with a decimal point", f"Write {whole}.{part}."
        problems.add(file, row, headings[place], f'"{whole},{part}"', expected, remedy, "decimal comma")
        return
    found = f"{len(cells)} cells, {quoted(','.join(cells))}"
    remedy = "Write decimal points, and put a text that holds a comma between quotation marks."
    if len(cells) < len(headings):
        remedy = "Write the missing commas, even where cells are empty."
    problems.add(file, row, None, found, f"{len(headings)} cells, as in the heading", remedy, "number of cells")


def _split_number(cells: list[str], headings: tuple[str, ...], quantities: Sequence[str]) -> int | None:
    """Where a decimal comma made two cells of one number; None where it may have been several."""
    numeric = [bool(set(re.findall(r"\w+", heading.split("/")[0])) & set(quantities)) for heading in headings]
    places = []
    for place in np.flatnonzero(numeric).tolist():
        whole, part = cells[place].strip(), cells[place + 1].strip()
        joined = [*cells[:place], f"{whole}.{part}", *cells[place + 2 :]]
        split = re.fullmatch(r"[+-]?[0-9]+", whole) and re.fullmatch(r"[0-9]+([eE][+-]?[0-9]+)?", part)
        fits = all(_NUMBER.fullmatch(cell.strip()) for cell, is_one in zip(joined, numeric, strict=True) if is_one)
        if split and fits:
            places.append(place)
    return places[0] if len(places) == 1 else None


def _frame(data: bytes, headings: tuple[str, ...], texts: Sequence[str]) -> pd.DataFrame:
    """The cells by pandas: text where text is meant, numbers where a whole column is numbers.

    Columns of numbers with a text among them may come back mixed; whoever reads the cells looks at each of them.
    """
    meant = {place: heading for place, heading in enumerate(headings) if heading in texts}
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", pd.errors.DtypeWarning)
        return pd.read_csv(
            io.BytesIO(data), engine="c", header=0, names=list(range(len(headings))), index_col=False,
            dtype={place: str if heading in _ALL_DIFFERENT else "category" for place, heading in meant.items()},
            keep_default_na=False, na_values=[""], skip_blank_lines=False,
        )  # fmt: skip


def _without_blank_rows(frame: pd.DataFrame, row: NDArray[np.int64]) -> tuple[pd.DataFrame, NDArray[np.int64], int]:
    """Rows with anything in them; columns of numbers are asked first, the others only about the rows still in doubt."""
    if frame.empty:
        return frame, row, 0
    candidates = np.arange(len(frame))
    for place in sorted(frame.columns, key=lambda place: frame[place].dtype.kind not in "fiu"):
        candidates = candidates[_empty(frame[place].iloc[candidates])]
        if not candidates.size:
            return frame, row, 0
    keep = np.ones(len(frame), dtype=bool)
    keep[candidates] = False
    return frame[keep].reset_index(drop=True), row[keep], int(candidates.size)


def _empty(cells: pd.Series) -> NDArray[np.bool_]:
    """Cells with nothing in them, or only blanks."""
    missing = cells.isna().to_numpy(dtype=bool)
    if cells.dtype.kind in "fiu":
        return missing
    return np.array([gone or not str(cell).strip() for gone, cell in zip(missing, cells, strict=True)], dtype=bool)
