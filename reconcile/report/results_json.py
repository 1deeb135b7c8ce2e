"""results.json: everything, at full precision, one record a line."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator, Mapping, Sequence
from typing import Any

import numpy as np
import pandas as pd

from reconcile import __version__
from reconcile.report.columns import TABLES, Column
from reconcile.report.material import Material
from reconcile.report.results import Covariance, Results

SCHEMA_VERSION = "1.0"
MOST_LINES = 2000  # a longer list stands on one line: a third of the time
Record = dict[str, Any]
_encode = json.JSONEncoder(ensure_ascii=False, allow_nan=False, separators=(", ", ": ")).encode


def render(material: Material) -> Iterator[tuple[str, bytes]]:
    """The one file results.json."""
    yield "results.json", "".join(_lines(_whole(material.results))).encode("utf-8", "replace")


def _whole(results: Results) -> Record:
    campaign = results.campaign
    return {
        "schema_version": SCHEMA_VERSION,
        "software_version": __version__,
        "input_checksums": dict(sorted(campaign.checksums.items())),
        "campaign": {
            "title": campaign.title,
            "laboratory": campaign.laboratory,
            "date": campaign.date,
            "reference_temperature": float(campaign.reference_temperature),
            "pressure": float(campaign.pressure),
            "formation_set": campaign.formation_set,
            "runs": len(campaign.runs),
            "runs_included": int(results.salts["runs"].sum()),
            "salts": len(campaign.salts),
        },
        "salts": _salts(results.salts),
        "covariance": _covariance(results.covariance),
        "adjustment": {
            **{key: plain(results.adjustment[key]) for key in ("chi_square", "degrees_of_freedom", "p_value")},
            **{key: plain(value) for key, value in results.adjustment.items()},
            "reconciled": records(results.reconciled, TABLES["reconciled"]),
            "references": records(results.references, TABLES["references"]),
            "cycles": records(results.cycles, TABLES["cycles"]),
        },
        "bias": [_with_interval(record, "unit") for record in records(results.bias, TABLES["bias"])],
        "comparison": records(results.comparison, TABLES["comparison"]),
        "budget": records(results.budget, TABLES["budget"]),
        "assumptions": records(results.assumptions, TABLES["assumptions"]),
        "sources": records(results.sources, TABLES["sources"]),
    }


def _salts(table: pd.DataFrame) -> list[Record]:
    found = []
    for plain_record in records(table, TABLES["salts"]):
        record = _with_interval(plain_record, "coverage_factor")
        record = _moved(record, "parameters", "prior_conflict_p")
        record = _moved(record, "smoothed", "reason")
        found.append(record)
        record["recommended"] = {key: record.pop(f"recommended_{key}") for key in ("value", "u", "from")}
    return found


def _moved(record: Record, key: str, after: str) -> Record:
    """The record with ``key`` standing behind the key ``after``."""
    value = record.pop(key)
    ordered: Record = {}
    for other, inner in record.items():
        ordered[other] = inner
        if other == after:
            ordered[key] = value
    return ordered


def _with_interval(record: Record, after: str) -> Record:
    """interval_low and interval_high as one pair, behind the key ``after``."""
    pair = [record.pop("interval_low"), record.pop("interval_high")]
    return _moved({**record, "interval": pair}, "interval", after)


def _covariance(covariance: Covariance) -> Record:
    names = list(covariance.salts)
    shared = []
    for source, positions, loadings in covariance.shared:
        size = np.asarray(loadings, dtype=float)
        held = np.flatnonzero(size != 0)
        if held.size:
            salts = [names[p] for p in np.asarray(positions)[held].tolist()]
            shared.append({"source": source, "salts": salts, "loading": plain_column(pd.Series(size[held]))})
    return {
        "salts": names,
        "private_variance": plain_column(pd.Series(np.asarray(covariance.private_variance, dtype=float))),
        "shared": shared,
    }


def records(table: pd.DataFrame, columns: Sequence[Column]) -> list[Record]:
    """Rows of a table as dictionaries that JSON can hold: known columns first and in their order, then the others.

    Missing and infinite numbers become None, as does a missing text.
    """
    known = [column.key for column in columns]
    keys = known + [str(name) for name in table.columns if name not in known]
    lists = [plain_column(table[key]) for key in keys]
    return [dict(zip(keys, row, strict=True)) for row in zip(*lists, strict=True)]


def plain_column(series: pd.Series[Any]) -> list[Any]:
    """A column as Python values, what is missing or infinite as None."""
    if pd.api.types.is_bool_dtype(series.dtype):
        return [None if x is pd.NA else x for x in series.tolist()]
    if pd.api.types.is_integer_dtype(series.dtype):
        return [None if x is pd.NA else x for x in series.tolist()]
    if pd.api.types.is_float_dtype(series.dtype):
        numbers = series.to_numpy(dtype=float, na_value=math.nan)
        values: list[Any] = numbers.tolist()
        for position in np.flatnonzero(~np.isfinite(numbers)).tolist():
            values[position] = None
        return values
    if isinstance(series.dtype, pd.StringDtype):
        missing = series.isna().to_numpy()
        return series.tolist() if not missing.any() else series.astype(object).where(~missing, None).tolist()
    return [plain(x) for x in series.tolist()]


def plain(value: Any) -> Any:
    """A value of Python or numpy, however nested, as JSON can hold it."""
    if isinstance(value, float):  # numpy's float64 is one
        return float(value) if math.isfinite(value) else None
    if isinstance(value, str | bool | int) or value is None:
        return value
    if isinstance(value, list | tuple):
        return [plain(x) for x in value]
    if isinstance(value, dict):
        return {str(key): plain(x) for key, x in value.items()}
    if isinstance(value, np.ndarray | np.generic):
        return plain(value.tolist())
    if isinstance(value, set | frozenset):
        return [plain(x) for x in sorted(value)]
    if isinstance(value, Mapping):
        return plain(dict(value))
    if value is pd.NA:
        return None
    raise TypeError(f"{type(value).__name__} has no place in results.json")


def _lines(value: Any, indent: str = "") -> Iterator[str]:
    """Text of the whole: dictionaries opened two deep, of lists one element a line."""
    if isinstance(value, dict) and len(indent) < 2:
        deeper = indent + " "
        for number, (key, inner) in enumerate(value.items()):
            yield f"{',' if number else '{'}\n{deeper}{_encode(key)}: "
            yield from _lines(inner, deeper)
        yield f"\n{indent}}}" if value else "{}"
        yield "" if indent else "\n"
    elif isinstance(value, list) and 0 < len(value) <= MOST_LINES and isinstance(value[0], dict):
        deeper = indent + " "
        for number, inner in enumerate(value):
            yield f"{',' if number else '['}\n{deeper}{_encode(inner)}"
        yield f"\n{indent}]"
    else:
        yield _encode(value)
