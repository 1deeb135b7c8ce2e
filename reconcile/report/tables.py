"""tables/*.csv: every table at full precision, described by a Data Package."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Iterator
from typing import Any

import numpy as np
import pandas as pd

from reconcile import __version__
from reconcile.report.columns import PRIMARY_KEYS, TABLES, Column, Kind
from reconcile.report.kinds import WORDS, kinds
from reconcile.report.material import Material
from reconcile.report.results import Results

_STARTS_A_FORMULA = ("=", "+", "-", "@", "\t", "\r")
_TYPES = {"text": "string", "list": "string", "number": "number", "integer": "integer", "boolean": "boolean"}


def render(material: Material) -> Iterator[tuple[str, bytes]]:
    """One CSV a table, then tables/datapackage.json."""
    resources = []
    for name, table in _tables(material.results):
        columns = _all_columns(name, table)
        data = to_csv(table, columns)
        resources.append(_resource(name, columns, data))
        yield f"tables/{name}.csv", data
    yield "tables/datapackage.json", _package(material.results, resources)


def inert(text: str) -> str:
    """The text with a leading apostrophe if a spreadsheet would take it for a formula.

    Examples
    --------
    >>> inert("=1+1"), inert("R017"), inert("-5 drops spilt")
    ("'=1+1", 'R017', "'-5 drops spilt")
    """
    return f"'{text}" if text.startswith(_STARTS_A_FORMULA) else text


def to_csv(table: pd.DataFrame, columns: tuple[Column, ...]) -> bytes:
    """UTF-8, commas, LF; numbers as the shortest text that reads back the same; empty where missing or infinite."""
    shown = pd.DataFrame({position: _cells(table[c.key], c.kind) for position, c in enumerate(columns)})
    text: str = shown.to_csv(index=False, header=[c.heading for c in columns], lineterminator="\n", na_rep="")
    return text.encode("utf-8", "replace")


def _cells(series: pd.Series[Any], kind: Kind) -> pd.Series[Any]:
    if kind == "number":
        return series.astype(float).replace([float("inf"), float("-inf")], float("nan"))
    if kind == "integer":
        return series.astype("Int64")
    if kind == "boolean":
        return series.map({True: "true", False: "false"})
    if kind == "list":
        return series.map(lambda cell: inert("; ".join(str(x) for x in cell)))
    codes, labels = pd.factorize(series)  # a million cells hold few texts
    texts = pd.Series([inert(str(label)) for label in labels] or [""], dtype=object)
    return texts.reindex(codes).reset_index(drop=True)


def _all_columns(name: str, table: pd.DataFrame) -> tuple[Column, ...]:
    """The known columns in their order, then what the table has besides and a cell can hold."""
    known = TABLES[name]
    keys = {column.key for column in known}
    others = [(str(c), _kind(table[c])) for c in table.columns if c not in keys]
    return known + tuple(Column(key, kind, "see the report") for key, kind in others if kind)


def _kind(series: pd.Series[Any]) -> Kind | None:
    if pd.api.types.is_bool_dtype(series.dtype):
        return "boolean"
    if pd.api.types.is_integer_dtype(series.dtype):
        return "integer"
    if pd.api.types.is_float_dtype(series.dtype):
        return "number"
    return "text" if all(isinstance(cell, str) for cell in series.dropna()) else None


def _tables(results: Results) -> Iterator[tuple[str, pd.DataFrame]]:
    yield "salts", results.salts
    yield "runs", _runs(results)
    for name in ("reconciled", "references", "cycles", "bias", "comparison", "budget", "assumptions"):
        yield name, getattr(results, name)
    yield "sources", results.sources
    yield "smoothed", _smoothed(results)
    yield "parameters", _parameters(results)
    yield "covariance", _covariance(results)


def _runs(results: Results) -> pd.DataFrame:
    """The runs with what kind each is and where it started."""
    kind = kinds(results.campaign)
    words = np.array([one for one, _ in WORDS], dtype=object)
    return results.runs.assign(**{"kind": words[kind.code], "initial_molality / (mol/kg)": kind.initial_molality})


def _smoothed(results: Results) -> pd.DataFrame:
    pairs = zip(results.salts["salt"], results.salts["smoothed"], strict=True)
    lines = [{"salt": salt, **line} for salt, smoothed in pairs for line in smoothed]
    return pd.DataFrame(lines, columns=["salt", "molality", "enthalpy", "u"])


def _parameters(results: Results) -> pd.DataFrame:
    pairs = zip(results.salts["salt"], results.salts["parameters"], strict=True)
    lines = [(salt, name, value, u) for salt, found in pairs for name, (value, u) in found.items()]
    return pd.DataFrame(lines, columns=["salt", "parameter", "value", "u"])


def _covariance(results: Results) -> pd.DataFrame:
    held = results.covariance
    lines = [("", salt, variance**0.5) for salt, variance in zip(held.salts, held.private_variance, strict=True)]
    for source, positions, loadings in held.shared:
        lines += [(source, held.salts[p], x) for p, x in zip(positions, loadings, strict=True) if x != 0]
    return pd.DataFrame(lines, columns=["source", "salt", "loading"])


def _resource(name: str, columns: tuple[Column, ...], data: bytes) -> dict[str, Any]:
    fields = []
    for column in columns:
        entry = {"name": column.heading, "type": _TYPES[column.kind], "description": column.meaning}
        fields.append({**entry, "unit": column.unit} if column.unit else entry)
    schema: dict[str, Any] = {"fields": fields, "missingValues": [""]}
    if name in PRIMARY_KEYS:
        schema["primaryKey"] = list(PRIMARY_KEYS[name])
    return {
        "name": name,
        "type": "table",
        "path": f"{name}.csv",
        "format": "csv",
        "mediatype": "text/csv",
        "encoding": "utf-8",
        "bytes": len(data),
        "hash": f"sha256:{hashlib.sha256(data).hexdigest()}",
        "schema": schema,
    }


def _package(results: Results, resources: list[dict[str, Any]]) -> bytes:
    package = {
        "$schema": "https://datapackage.org/profiles/2.0/datapackage.json",
        "name": "enthalpies-of-solution",
        "title": results.campaign.title,
        "description": (
            "Standard molar enthalpies of solution of a calorimetric campaign, with their uncertainties and tests. "
            "A text that a spreadsheet would take for a formula has a leading apostrophe; an empty number is missing "
            f"or infinite. Written by reconcile {__version__}."
        ),
        "resources": resources,
    }
    return (json.dumps(package, ensure_ascii=False, indent=2, allow_nan=False) + "\n").encode("utf-8", "replace")
