"""Headings: quantity / unit, u(quantity) / unit and so on, each recognised or refused with the nearest known one."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from difflib import SequenceMatcher, get_close_matches

from reconcile.campaign.columns import FUNCTIONS, LATER_FUNCTIONS, OTHER_NAMES, Column, columns_of, heading
from reconcile.campaign.problems import Problems, quoted
from reconcile.campaign.units import Scale, UnitError, scale

_HEADING = re.compile(
    r"(?:(?P<function>\w+)\s*\(\s*(?P<inner>\w+)\s*\)|(?P<name>\w+))\s*(?:/\s*(?P<unit>.*))?", re.DOTALL
)


@dataclass(frozen=True, slots=True)
class Heading:
    """A recognised heading: which column, which of its uncertainties ("" the value itself), how its cells scale."""

    text: str
    place: int
    column: Column
    function: str
    scale: Scale


@dataclass(frozen=True, slots=True)
class Headings:
    """The headings of one table, and the quantities and keys that a refused heading seems to have meant."""

    known: tuple[Heading, ...]
    blamed: frozenset[str]
    refused: tuple[tuple[str, int], ...] = ()  # heading and place of quantities whose unit is a problem

    def find(self, name: str, function: str = "") -> Heading | None:
        """The heading of a column, or of an uncertainty of it."""
        return next((known for known in self.known if known.column.name == name and known.function == function), None)

    def has(self, name: str) -> bool:
        """Whether the column is there, or was meant by a heading that is a problem already."""
        return name in self.blamed or self.find(name) is not None


def read_headings(file: str, table: str, texts: Iterable[str], empty: Iterable[bool], problems: Problems) -> Headings:
    """Recognise every heading of a table.

    Parameters
    ----------
    file, table : str
        The file's name for messages; runs, samples or calorimeters.
    texts : iterable of str
        The headings as written.
    empty : iterable of bool
        Whether there is nothing in the column below.
    problems : Problems
        Takes in what cannot be served.
    """
    known: list[Heading] = []
    blamed: set[str] = set()
    refused: list[tuple[str, int]] = []
    seen: dict[tuple[str, str], str] = {}
    for place, (text, nothing) in enumerate(zip(texts, empty, strict=True)):
        if not text:
            if not nothing:
                found = f"column {place + 1} has cells but no heading"
                problems.add(file, 1, None, found, "a heading over every column", "Name it, or empty it.", "heading")
            continue
        found_heading = _one(file, table, text, place, problems, blamed, refused)
        if found_heading is None:
            continue
        key = (found_heading.column.name, found_heading.function)
        if key in seen:
            found = f'"{text}" stands for the same as "{seen[key]}"'
            problems.add(file, 1, text, found, "one column for each", "Delete one of the two.", "twice", (1, place))
            continue
        seen[key] = text
        known.append(found_heading)
    for one in known:
        if one.function == "k" and (one.column.name, "U") not in seen and one.column.name not in blamed:
            wanted = heading(f"U({one.column.name})", one.column.unit)
            problems.add(
                file, 1, one.text, f'"{one.text}" stands alone', "a column of expanded uncertainties beside it",
                f"Add `{wanted}`, or delete the column.", "uncertainty", order=(1, one.place),
            )  # fmt: skip
        assumed = one.column.name == "temperature"  # the reference temperature stands in
        if one.function and not assumed and one.column.name not in blamed and (one.column.name, "") not in seen:
            problems.add(
                file, 1, one.text, f'"{one.text}" has no quantity beside it', f"a column `{one.column.heading}`",
                "Add it, or delete the column.", "uncertainty", order=(1, one.place),
            )  # fmt: skip
    return Headings(tuple(known), frozenset(blamed), tuple(refused))


def _one(
    file: str,
    table: str,
    text: str,
    place: int,
    problems: Problems,
    blamed: set[str],
    refused: list[tuple[str, int]],
) -> Heading | None:
    """One heading; None, with a problem, if it is not served."""

    def refuse(found: str, expected: str, remedy: str, code: str) -> None:
        problems.add(file, 1, text, found, expected, remedy, code, order=(1, place))

    columns = columns_of(table)
    match = _HEADING.fullmatch(text)
    name = (match["inner"] or match["name"]) if match else ""
    function = (match["function"] or "") if match else ""
    if not match or name not in columns or (function not in FUNCTIONS and function not in LATER_FUNCTIONS and function):
        elsewhere = _other_table(name, table)
        nearest = None if elsewhere else nearest_heading(text, table)
        if nearest:
            blamed.add(nearest[0])
        remedy = elsewhere or "Delete the column, or put it into `note`."
        if nearest:
            remedy = f"Did you mean `{nearest[1]}`?"
        refuse(f"{quoted(text)} is unknown", "quantity / unit", remedy, "unknown column")
        return None
    column = columns[name]
    blamed_if_refused = {name}
    if function and column.kind == "text":
        refuse(f'"{text}": {name} is a text', "an uncertainty of a quantity", "Delete the column.", "uncertainty")
        return None
    if not column.served or function in LATER_FUNCTIONS:
        remedy = _meanwhile(name, function)
        blamed.update(blamed_if_refused if function else _served_instead(name))
        found = f"{quoted(text)} is in the design of the input but not yet served"
        refuse(found, "a column that this version reads", remedy, "not yet served")
        return None
    if column.kind == "text" or function == "k":
        if match["unit"] is not None and match["unit"].strip() != "1":
            bare = f"k({name})" if function else name
            refuse(f"{quoted(text)} has a unit", "no unit", f"Write `{bare}`.", "unit")
            blamed.update(blamed_if_refused)
            return None
        return Heading(text, place, column, function, Scale())
    try:
        return Heading(text, place, column, function, scale(match["unit"], column, uncertainty=bool(function)))
    except UnitError as fault:
        remedy = fault.remedy
        if function:
            remedy = remedy.replace(f"`{name}", f"`{function}({name})", 1)
        refuse(f"{quoted(text)}: {fault.found}", fault.expected, remedy, fault.code)
        blamed.update(blamed_if_refused)
        refused.append((text, place))
        return None


def _served_instead(name: str) -> set[str]:
    """What a row is not to be blamed for missing while a heading that would have replaced it is refused."""
    return {
        "temperature_change": {"heat", "enthalpy"}, "trace": {"heat", "enthalpy"}, "amount_concentration": {"molality"},
        "reaction": {"salt"},
    }.get(name, set())  # fmt: skip


def _meanwhile(name: str, function: str) -> str:
    if function == "dof":
        return "Delete the column; u counts as if it had infinitely many degrees of freedom."
    if function:
        return f"Give a standard uncertainty u({name}) instead."
    return {
        "temperature_change": "Give `heat / J` instead.",
        "trace": "Give `heat / J` instead.",
        "solution_heat_capacity": "Delete the column: it serves only with temperature_change.",
        "amount_concentration": "Give `molality / (mol/kg)` instead.",
    }.get(name, "Delete the column for now.")


def _other_table(name: str, table: str) -> str:
    """A hint where the column belongs to another table."""
    for other in ("runs", "samples", "calorimeters"):
        if other != table and name in columns_of(other):
            return f"It belongs into {other}.csv."
    return ""


def nearest_heading(text: str, table: str) -> tuple[str, str] | None:
    """The known column that an unknown heading comes nearest to, and its heading; None if none is near.

    Examples
    --------
    >>> nearest_heading("Mass (g)", "runs")
    ('mass', 'mass / g')
    >>> nearest_heading("u(masss) / mg", "runs")
    ('mass', 'u(mass) / g')
    """
    columns = columns_of(table)
    served = [name for name, column in columns.items() if column.served]
    match = re.match(r"\s*(2?\w+?)\s*\(\s*(\w+)\s*\)", text)
    function = match[1] if match and match[1] in FUNCTIONS and len(match[2]) > 2 else ""
    body = match[2] if match and function else text
    bare = re.sub(r"[/(\[,;].*", "", body, flags=re.DOTALL).strip().casefold()
    whole = bare.replace(" ", "_").replace("-", "_")
    parts = get_close_matches(whole, served, n=1, cutoff=0.85) or re.findall(r"[^\W_]+", bare)  # a slip is no part
    words = [whole, *parts]
    for word in words:
        if word in served or word in OTHER_NAMES:
            name = word if word in served else OTHER_NAMES[word]
            if name in served:
                return name, _spelt(columns[name], function)
    best = [(SequenceMatcher(None, word, name).ratio(), name) for word in words for name in served if len(word) > 1]
    ratio, name = max(best, default=(0.0, ""))
    if ratio >= 0.7:
        return name, _spelt(columns[name], function)
    full = {columns[name].heading: name for name in served}
    close = get_close_matches(text.casefold(), full, n=1, cutoff=0.65)
    return (full[close[0]], close[0]) if close else None


def _spelt(column: Column, function: str) -> str:
    if not function or column.kind == "text":
        return column.heading
    return heading(f"{function}({column.name})", "" if function == "k" else column.unit)
