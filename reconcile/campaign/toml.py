"""Reading campaign.toml: from a document of the right shape to settings in the glossary's units."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from difflib import get_close_matches
from pathlib import Path
from typing import TYPE_CHECKING, Any

from reconcile.campaign.columns import FUNCTIONS, LATER_FUNCTIONS, TABLES, Column, columns_of
from reconcile.campaign.delimited import read_bytes
from reconcile.campaign.headings import nearest_heading
from reconcile.campaign.own_values import own_values
from reconcile.campaign.places import order, signed, spelt
from reconcile.campaign.problems import Problems, number, quoted
from reconcile.campaign.quantities import DIVISORS, USUAL_COVERAGE, Default
from reconcile.campaign.settings import (
    FORMATION_SET,
    PRESSURE,
    REFERENCE_TEMPERATURE,
    Choices,
    Exclusion,
    Note,
    Settings,
)
from reconcile.campaign.units import Scale, UnitError, measured
from reconcile.chemistry import FormulaError, read_salt

if TYPE_CHECKING:
    from reconcile.campaign.keys import Document, SaltKeys

_TEMPERATURE = columns_of("runs")["temperature"]
_MOLALITY = columns_of("runs")["molality"]
_PRESSURE = Column(
    "campaign", "pressure", "", "quantity", "kPa", "a pressure", ("kPa", "bar", "Pa"), (1e-3, 110.0), above=0.0
)


def read_settings(path: Path, problems: Problems, checksums: dict[str, str]) -> Settings:
    """Read and check a campaign.toml; what is wrong goes into ``problems``, and a default takes its place."""
    data = read_bytes(path, problems, checksums)
    if data is None:
        return Settings()
    try:
        content = tomllib.loads(data.decode())
    except (tomllib.TOMLDecodeError, RecursionError) as fault:
        where = re.search(r"\(at line (\d+)", str(fault))
        found = str(fault) or "too many brackets within brackets"
        problems.add(
            path.name, int(where[1]) if where else None, None, found, "TOML: key = value, texts in quotation marks",
            'Look at the line: a text needs quotation marks, as in title = "…".', "toml",
        )  # fmt: skip
        return Settings()
    from reconcile.campaign.document import read_document  # loads pydantic

    return _Reader(path.name, content, read_document(path.name, content, problems), problems).settings()


class _Reader:
    """One document on its way to settings."""

    def __init__(self, file: str, content: dict[str, Any], document: Document, problems: Problems) -> None:
        self.file, self.content, self.document, self.problems = file, content, document, problems

    def settings(self) -> Settings:
        """Everything that the file says."""
        keys = self.document.campaign
        return Settings(
            file=self.file,
            title=keys.title or "",
            laboratory=keys.laboratory or "",
            reference_temperature=self._quantity(
                keys.reference_temperature, _TEMPERATURE, REFERENCE_TEMPERATURE, ("campaign", "reference_temperature")
            ),
            pressure=self._quantity(keys.pressure, _PRESSURE, PRESSURE, ("campaign", "pressure")),
            date=keys.date or "",
            defaults={table: self._defaults(table, getattr(self.document.uncertainty, table)) for table in TABLES},
            choices=self._choices(self.document.analysis, ("analysis",)),
            salts=self._salts(),
            formation_set=self._set(),
            references=own_values(self.document.reference, self._refuse),
            exclusions=tuple(
                Exclusion(one.run, signed(one.reason, one.by, one.date), *self._at("exclude", place))
                for place, one in enumerate(self.document.exclude)
            ),
            notes=tuple(
                Note(one.run, signed(one.text, one.by, one.date), *self._at("note", place))
                for place, one in enumerate(self.document.note)
            ),
        )

    def _at(self, *path: str | int) -> tuple[str, tuple[int, ...]]:
        return spelt(path), order(self.content, path)

    def _refuse(self, path: tuple[str | int, ...], found: str, expected: str, remedy: str, code: str) -> None:
        place, order = self._at(*path)
        self.problems.add(self.file, None, place, found, expected, remedy, code, order)

    def _quantity(self, text: str | None, column: Column, default: float, path: tuple[str | int, ...]) -> float:
        """A value with its unit, in the glossary's unit and within the column's bounds."""
        if text is None:
            return default
        try:
            typed, scale = measured(text, column)
        except UnitError as fault:
            self._refuse(path, fault.found, fault.expected, fault.remedy, fault.code)
            return default
        value = scale.slope * typed + scale.origin
        if not (value > column.above and column.lowest <= value <= column.highest):
            unit = column.unit
            bounds = f"{number(column.lowest)} to {number(column.highest)} {unit}"
            expected = bounds if column.highest < 1e9 else f"more than {number(column.above)} {unit}"
            self._refuse(path, quoted(text), expected, "Correct the value or its unit.", "out of range")
            return default
        return value

    def _choices(self, keys: SaltKeys, path: tuple[str | int, ...]) -> Choices:
        most = self._quantity(keys.max_molality, _MOLALITY, -1.0, (*path, "max_molality"))
        most_or_none = most if most > 0 else None
        return Choices(keys.published_dilution, most_or_none, keys.between_batches, *self._at(*path))

    def _salts(self) -> dict[str, tuple[str, Choices]]:
        """[analysis.salts.…] by the salts' identities."""
        found: dict[str, tuple[str, Choices]] = {}
        for formula, keys in self.document.analysis.salts.items():
            path = ("analysis", "salts", formula)
            choices = self._choices(keys, path)
            try:
                salt = read_salt(formula)
            except FormulaError as fault:
                self._refuse(path, quoted(formula), fault.expected, fault.remedy, "formula")
                continue
            if salt.identity in found:
                self._refuse(path, f"{salt.formula} stands here twice", "each salt once", "Merge the two.", "twice")
            found[salt.identity] = (formula, choices)
        return found

    def _set(self) -> str:
        """[references] set: one of those that reference_data holds."""
        name = self.document.references.set
        if name is None:
            return FORMATION_SET
        from reconcile.reference import formation_sets  # loads the tables

        held = formation_sets()
        if name not in held:
            close = get_close_matches(name, held, n=1, cutoff=0.4)
            remedy = f'Did you mean "{close[0]}"?' if close else "Choose one of them."
            self._refuse(("references", "set"), quoted(name), f"one of {', '.join(held)}", remedy, "unknown set")
            return FORMATION_SET
        return name

    def _defaults(self, table: str, keys: Mapping[str, Any]) -> dict[str, Default]:
        """[uncertainty.runs] and its sisters: "u(mass)" = "0.01 g" and the like, as standard uncertainties."""
        stated: dict[str, dict[str, tuple[float, Scale]]] = {}
        for text, value in keys.items():
            path = ("uncertainty", table, text)
            match = re.fullmatch(r"\s*(\w+)\s*\(\s*(\w+)\s*\)\s*", text)
            columns = columns_of(table)
            if match and match[2] in columns and (match[1] in LATER_FUNCTIONS or not columns[match[2]].served):
                found = "this is in the design of the input but not yet served"
                self._refuse(path, found, "what this version reads", "Delete it for now.", "not yet served")
                continue
            if (
                not match
                or match[1] not in FUNCTIONS
                or columns.get(match[2], _PRESSURE).kind == "text"
                or (match[2] not in columns)
            ):
                near = nearest_heading(text if match else f"u({text})", table)
                suggestion = f'Did you mean "{near[1].split(" / ")[0]}"?' if near else "Delete it."
                expected = 'the uncertainty of a quantity of that table, as in "u(mass)"'
                self._refuse(path, f"{quoted(text)} is unknown", expected, suggestion, "unknown key")
                continue
            given = self._given(path, columns[match[2]], match[1], value)
            if given is not None:
                stated.setdefault(match[2], {})[match[1]] = given
        return {
            name: default for name, given in stated.items() if (default := self._one(table, name, given)) is not None
        }

    def _given(
        self, path: tuple[str | int, ...], column: Column, function: str, value: object
    ) -> tuple[float, Scale] | None:
        """The number behind one key of [uncertainty], and its unit."""
        name = path[-1]
        plain = isinstance(value, int | float) and not isinstance(value, bool)
        pure = function == "k" or column.unit == "1"
        if not isinstance(value, str) and not (plain and pure):
            remedy = f'Write "{name}" = {2 if function == "k" else f"""{chr(34)}{value} {column.usual[0]}{chr(34)}"""}.'
            expected = "a number" if function == "k" else "a number with its unit, between quotation marks"
            self._refuse(path, quoted(value)[1:-1], expected, remedy, "type")
            return None
        try:
            kind = _FACTOR if function == "k" else column
            typed, scale = measured(str(value), kind, uncertainty=True)
        except UnitError as fault:
            self._refuse(path, fault.found, fault.expected, fault.remedy, fault.code)
            return None
        if not 0 <= typed < float("inf") or (function == "k" and typed == 0):
            expected = "a coverage factor of more than 0" if function == "k" else "an uncertainty of 0 or more"
            self._refuse(path, quoted(value), expected, "Correct the value.", "uncertainty")
            return None
        return typed, scale

    def _one(self, table: str, name: str, given: dict[str, tuple[float, Scale]]) -> Default | None:
        """The standard uncertainty out of u, U with k, or tol."""
        kinds = [function for function in ("u", "U", "tol") if function in given]
        path = ("uncertainty", table)
        if len(kinds) > 1:
            found = f'there are "{kinds[0]}({name})" and "{kinds[1]}({name})"'
            where = (*path, f"{kinds[1]}({name})")
            self._refuse(where, found, "one for each quantity", "Delete one of the two.", "two uncertainties")
            return None
        if not kinds or (kinds[0] != "U" and "k" in given):
            remedy = f'Add "U({name})" = "…".'
            expected = f'"U({name})" beside it'
            self._refuse((*path, f"k({name})"), "it stands alone", expected, remedy, "uncertainty")
            return None
        typed, scale = given[kinds[0]]
        if kinds[0] != "U":
            return Default(typed / DIVISORS[kinds[0]], scale)
        return Default(typed / given.get("k", (USUAL_COVERAGE, scale))[0], scale)


_FACTOR = Column("campaign", "k", "", "quantity", "1", "a number", ("1",), (1.0, 1.0), above=0.0)
