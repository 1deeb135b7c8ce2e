"""The tables and keys that campaign.toml may have, as pydantic models."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from typing import Annotated, Any

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, StringConstraints


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


class ReferenceKeys(Strict):
    """[[reference]]: a value of the laboratory's own."""

    quantity: Sentence
    species: Sentence
    value: Sentence
    u: Sentence
    source: Sentence
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
    reference: list[ReferenceKeys] = []


# Tables that stand in the file once for each entry, [[…]].
ACTS: Mapping[str, type[Strict]] = {"exclude": ExcludeKeys, "note": NoteKeys, "reference": ReferenceKeys}
MODELS: Mapping[str, type[Strict]] = {
    "": Document, "campaign": CampaignKeys, "uncertainty": UncertaintyKeys, "analysis": AnalysisKeys,
    "analysis.salts": SaltKeys, "references": ReferencesKeys, **ACTS,
}  # fmt: skip
