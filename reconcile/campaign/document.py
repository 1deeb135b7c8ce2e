"""campaign.toml as a document: its shape checked, all faults at once with path and what stands there."""

from __future__ import annotations

import copy
from collections.abc import Mapping
from difflib import get_close_matches
from typing import Any

from pydantic import ValidationError

from reconcile.campaign.keys import ACTS, MODELS, CampaignKeys, Document
from reconcile.campaign.places import order, spelt
from reconcile.campaign.problems import Problems, quoted
from reconcile.campaign.settings import UNREADABLE

LATER_TABLES = ("headings", "correct", "period")
LATER_KEYS = {("references", "gas_ions"), ("references", "proton_hydration")}
_UNITS = {"reference_temperature": "K", "max_molality": "mol/kg", "pressure": "kPa", "value": "kJ/mol", "u": "kJ/mol"}
_EXPECTED = {
    "run": "the name of a run", "reason": "a sentence", "quantity": "the quantity that the value is of",
    "species": "a formula or an ion", "value": "a number with its unit",
    "u": "the standard uncertainty of the value, with its unit", "source": "a text that says where the value is from",
}  # fmt: skip

Path = tuple[str | int, ...]


def read_document(file: str, document: dict[str, Any], problems: Problems) -> Document:
    """Check the shape of a parsed campaign.toml.

    What is wrong goes into ``problems``; then it is taken out, so that what is left can be checked further.
    """
    original, document = document, copy.deepcopy(document)
    _refuse_later(file, original, document, problems)
    for _ in range(5):
        try:
            return Document.model_validate(document)
        except ValidationError as faults:
            for fault in faults.errors():
                _tell(file, original, fault["loc"], fault["type"], problems)
                _take_out(document, fault["loc"], fault["type"])
    return Document()


def _refuse_later(file: str, original: dict[str, Any], document: dict[str, Any], problems: Problems) -> None:
    """Tables and keys of the design that this version does not read yet."""
    later: list[Path] = [(name,) for name in LATER_TABLES if name in document]
    later += [(table, key) for table, key in sorted(LATER_KEYS) if key in _table(document, table)]
    for path in later:
        here = document if len(path) == 1 else document[str(path[0])]
        del here[str(path[-1])]
        place = f"[{path[0]}]" if len(path) == 1 else spelt(path)
        problems.add(
            file, None, place, "this is in the design of the input but not yet served",
            "what this version reads", "Delete it for now.", "not yet served", order(original, path),
        )  # fmt: skip


def _table(document: dict[str, Any], name: str) -> dict[str, Any]:
    table = document.get(name)
    return table if isinstance(table, dict) else {}


def _value(document: Any, path: Path) -> Any:
    for step in path:
        try:
            document = document[step]
        except (KeyError, IndexError, TypeError):
            return None
    return document


def _tell(file: str, original: dict[str, Any], path: Path, kind: str, problems: Problems) -> None:
    """One fault of pydantic's in our words."""
    value = _value(original, path)
    place = spelt(path)
    key = str(path[-1]) if path else ""
    if kind == "extra_forbidden":
        found, expected, remedy, code = *_unknown(path, value), "unknown key"
    elif kind in ("missing", "string_too_short"):
        place = spelt(path[:-1]) if len(path) > 2 else place
        owner = _value(original, path[:-1])
        whose = _whose(owner, key)
        found = f"{whose} has no {key}" if whose else f"there is no {key}"
        expected = _EXPECTED.get(key, "a text")
        remedy, code = f'Add {key} = "…{f" {_UNITS[key]}" if key in _UNITS else ""}".', "missing"
    elif kind == "bool_type":
        found, expected, code = _shown(value), "true or false", "type"
        remedy = f"Write {key} = true or {key} = false, without quotation marks."
    elif kind == "string_type":
        found, code = _shown(value), "type"
        expected = "a number with its unit, between quotation marks" if key in _UNITS else "a text"
        remedy = f'Write {key} = "{value} {_UNITS[key]}".' if key in _UNITS else f'Write {key} = "…".'
    elif kind == "value_error":
        found, expected, remedy, code = _shown(value), "a date as in 2026-05-31", "Write year-month-day.", "date"
    else:
        several = "list" in kind or (len(path) == 2 and isinstance(path[1], int))
        expected = f"a table [[{path[0]}]] for each" if several else f"a table [{'.'.join(map(str, path))}]"
        found, remedy, code = _shown(value), "Write keys = values under that line.", "type"
    problems.add(file, None, place, found, expected, remedy, code, order(original, path))


def _whose(owner: Any, key: str) -> str:
    """What an entry is about, in words; empty where that is not typed, or is what is missing."""
    if not isinstance(owner, dict):
        return ""
    if "run" in owner and key != "run":
        return f"run {owner['run']}"
    species = owner.get("species")
    return species if isinstance(species, str) and key != "species" else ""


def _shown(value: Any) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    return quoted(value) if isinstance(value, str) else quoted(value)[1:-1]


def _unknown(path: Path, value: Any) -> tuple[str, str, str]:
    """What to say about a key that nobody knows."""
    key = str(path[-1])
    parents = [str(step) for step in path[:-1] if not isinstance(step, int)]
    if parents[:2] == ["analysis", "salts"] and isinstance(value, dict) and len(path) == 4:
        formula = f"{path[2]}.{key}"
        return f"{quoted(formula)} is taken apart at its point", "one name", f'Write [analysis.salts."{formula}"].'
    model = MODELS.get(".".join(parents[:2]), MODELS.get("".join(parents[:1]), Document))
    names = list(model.model_fields)
    expected = f"one of {', '.join(names)}"
    if not parents and key in CampaignKeys.model_fields:
        return f"{quoted(key)} stands outside a table", expected, "Write it below the line [campaign]."
    if parents == ["reference"] and key == "U":
        return f"{quoted(key)} is unknown", expected, "Write u, the standard uncertainty: U divided by its k."
    close = get_close_matches(key.casefold(), names, n=1, cutoff=0.6)
    return f"{quoted(key)} is unknown", expected, f"Did you mean {close[0]}?" if close else "Delete it."


def _take_out(document: dict[str, Any], path: Path, kind: str) -> None:
    """Remove what is told, or fill in what is missing, so that the rest can be checked."""
    here: Any = document
    for step in path[:-1]:
        if (isinstance(here, Mapping) and step in here) or (isinstance(here, list) and isinstance(step, int)):
            here = here[step]  # type: ignore[index]
        else:
            return
    key = path[-1]
    if isinstance(key, int):
        fields = ACTS[str(path[0])].model_fields
        here[key] = {name: UNREADABLE for name, info in fields.items() if info.is_required()}
    elif path[0] in ACTS and len(path) == 3 and kind != "extra_forbidden" and key not in ("by", "date"):
        here[key] = UNREADABLE
    else:
        here.pop(key, None)
