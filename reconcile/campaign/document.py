"""campaign.toml as a document: its tables and keys by pydantic, all faults at once with path and what stands there."""

from __future__ import annotations

import copy
import datetime
from collections.abc import Mapping
from difflib import get_close_matches
from typing import Annotated, Any

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, StringConstraints, ValidationError

from reconcile.campaign.places import order, spelt
from reconcile.campaign.problems import Problems, quoted
from reconcile.campaign.settings import UNREADABLE

LATER_TABLES = ("headings", "reference", "correct", "period")
LATER_KEYS = {("references", "gas_ions"), ("references", "proton_hydration")}


def _date(value: object) -> object:
    """TOML dates as text; a text must be ISO 8601."""
    if isinstance(value, datetime.date):  # a datetime is one too
        return value.isoformat()
    if isinstance(value, str):
        datetime.date.fromisoformat(value[:10])
    return value


def _name(value: object) -> object:
    """A run named by a whole number may be typed as one."""
    return str(value) if isinstance(value, int) and not isinstance(value, bool) else value


Sentence = Annotated[str, StringConstraints(strip_whitespace=True, min_length=1)]
Name = Annotated[Sentence, BeforeValidator(_name)]
Date = Annotated[str, BeforeValidator(_date)]


class Strict(BaseModel):
    """No unknown keys, no silent conversions."""

    model_config = ConfigDict(extra="forbid", strict=True)


class CampaignKeys(Strict):
    """[campaign]."""

    title: Sentence | None = None
    laboratory: Sentence | None = None
    reference_temperature: Sentence | None = None
    pressure: Sentence | None = None
    date: Date | None = None


class UncertaintyKeys(Strict):
    """[uncertainty]: by table; the headings in it are checked by the list of columns."""

    runs: dict[str, Any] = {}
    samples: dict[str, Any] = {}
    calorimeters: dict[str, Any] = {}


class SaltKeys(Strict):
    """[analysis.salts.KCl]."""

    published_dilution: bool | None = None
    max_molality: Sentence | None = None
    between_batches: bool | None = None


class AnalysisKeys(SaltKeys):
    """[analysis]."""

    salts: dict[str, SaltKeys] = {}


class ReferencesKeys(Strict):
    """[references]."""

    set: Sentence | None = None


class ExcludeKeys(Strict):
    """[[exclude]]."""

    run: Name
    reason: Sentence
    by: Sentence | None = None
    date: Date | None = None


class NoteKeys(Strict):
    """[[note]]."""

    run: Name
    text: Sentence
    by: Sentence | None = None
    date: Date | None = None


class Document(Strict):
    """The whole file."""

    campaign: CampaignKeys = Field(default_factory=CampaignKeys)
    uncertainty: UncertaintyKeys = Field(default_factory=UncertaintyKeys)
    analysis: AnalysisKeys = Field(default_factory=AnalysisKeys)
    references: ReferencesKeys = Field(default_factory=ReferencesKeys)
    exclude: list[ExcludeKeys] = []
    note: list[NoteKeys] = []


_MODELS: Mapping[str, type[Strict]] = {
    "": Document, "campaign": CampaignKeys, "uncertainty": UncertaintyKeys, "analysis": AnalysisKeys,
    "analysis.salts": SaltKeys, "references": ReferencesKeys, "exclude": ExcludeKeys, "note": NoteKeys,
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
        run = owner.get("run") if isinstance(owner, dict) else None
        found = f"run {run} has no {key}" if run is not None and key != "run" else f"there is no {key}"
        expected = {"run": "the name of a run", "reason": "a sentence"}.get(key, "a text")
        remedy, code = f'Add {key} = "…".', "missing"
    elif kind == "bool_type":
        found, expected, code = _shown(value), "true or false", "type"
        remedy = f"Write {key} = true or {key} = false, without quotation marks."
    elif kind == "string_type":
        found, code = _shown(value), "type"
        units = {"reference_temperature": "K", "max_molality": "mol/kg", "pressure": "kPa"}
        expected = "a number with its unit, between quotation marks" if key in units else "a text"
        remedy = f'Write {key} = "{value} {units[key]}".' if key in units else f'Write {key} = "…".'
    elif kind == "value_error":
        found, expected, remedy, code = _shown(value), "a date as in 2026-05-31", "Write year-month-day.", "date"
    else:
        several = "list" in kind or (len(path) == 2 and isinstance(path[1], int))
        expected = f"a table [[{path[0]}]] for each" if several else f"a table [{'.'.join(map(str, path))}]"
        found, remedy, code = _shown(value), "Write keys = values under that line.", "type"
    problems.add(file, None, place, found, expected, remedy, code, order(original, path))


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
    model = _MODELS.get(".".join(parents[:2]), _MODELS.get("".join(parents[:1]), Document))
    names = list(model.model_fields)
    expected = f"one of {', '.join(names)}"
    if not parents and key in CampaignKeys.model_fields:
        return f"{quoted(key)} stands outside a table", expected, "Write it below the line [campaign]."
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
        here[key] = {"run": UNREADABLE, "reason": UNREADABLE, "text": UNREADABLE}
        names = ExcludeKeys if path[0] == "exclude" else NoteKeys
        here[key] = {name: here[key][name] for name, info in names.model_fields.items() if info.is_required()}
    elif path[0] in ("exclude", "note") and len(path) == 3 and kind != "extra_forbidden" and key not in ("by", "date"):
        here[key] = UNREADABLE
    else:
        here.pop(key, None)
