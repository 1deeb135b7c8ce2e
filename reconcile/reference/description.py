"""The tables described once: datapackage.json, read into small frozen objects."""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any


@dataclass(frozen=True, slots=True)
class Column:
    """One column: its heading and what may stand below it (Table Schema)."""

    heading: str  # as in the file: formation_enthalpy / (kJ/mol)
    kind: str  # string, number, integer, boolean
    unit: str
    meaning: str
    required: bool
    allowed: tuple[str, ...]  # enum; empty: anything
    pattern: str
    minimum: float  # −inf: none
    maximum: float
    above: float  # exclusiveMinimum
    below: float  # exclusiveMaximum

    @property
    def quantity(self) -> str:
        """The heading without its unit."""
        return self.heading.split(" / ")[0]


@dataclass(frozen=True, slots=True)
class TableDescription:
    """One table of the folder."""

    name: str
    file: str
    title: str
    columns: tuple[Column, ...]
    key: tuple[str, ...]  # headings that together occur once


@lru_cache(maxsize=8)
def descriptions(folder: Path) -> Mapping[str, TableDescription]:
    """Every table of a folder by name, in the order of its datapackage.json."""
    package = json.loads((folder / "datapackage.json").read_text(encoding="utf-8"))
    tables = {}
    for resource in package["resources"]:
        schema = resource["schema"]
        columns = tuple(_column(field) for field in schema["fields"])
        tables[resource["name"]] = TableDescription(
            resource["name"], resource["path"], resource["title"], columns, tuple(schema["primaryKey"])
        )
    return tables


def _column(field: Mapping[str, Any]) -> Column:
    limits = field.get("constraints", {})
    infinite = float("inf")
    return Column(
        heading=field["name"],
        kind=field["type"],
        unit=field.get("unit", ""),
        meaning=field.get("description", ""),
        required=bool(limits.get("required", False)),
        allowed=tuple(limits.get("enum", ())),
        pattern=limits.get("pattern", ""),
        minimum=float(limits.get("minimum", -infinite)),
        maximum=float(limits.get("maximum", infinite)),
        above=float(limits.get("exclusiveMinimum", -infinite)),
        below=float(limits.get("exclusiveMaximum", infinite)),
    )
