"""What campaign.toml may say: the laboratory's defaults, choices, own values, exclusions and notes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from reconcile.campaign.quantities import Default
from reconcile.campaign.tables import LabReference

REFERENCE_TEMPERATURE = 298.15  # K
PRESSURE = 100.0  # kPa
FORMATION_SET = "NBS-1982"
UNREADABLE = "\0"  # stands for a name that is a problem already


@dataclass(frozen=True, slots=True)
class Choices:
    """[analysis], or its table for one salt; None where nothing is chosen."""

    published_dilution: bool | None = None
    max_molality: float | None = None  # mol/kg
    between_batches: bool | None = None
    place: str = ""
    order: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True)
class Exclusion:
    """A run that the laboratory leaves out, and why."""

    run: str
    reason: str
    place: str
    order: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Note:
    """A remark of the laboratory's on a run."""

    run: str
    text: str
    place: str
    order: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Settings:
    """What campaign.toml says, or the defaults where it says nothing."""

    file: str = "campaign.toml"
    title: str = ""
    laboratory: str = ""
    reference_temperature: float = REFERENCE_TEMPERATURE  # K
    pressure: float = PRESSURE  # kPa
    date: str = ""
    defaults: Mapping[str, Mapping[str, Default]] = field(default_factory=dict)  # table ─► quantity ─► uncertainty
    choices: Choices = field(default_factory=Choices)
    salts: Mapping[str, tuple[str, Choices]] = field(default_factory=dict)  # identity ─► formula, choices
    formation_set: str = FORMATION_SET
    references: tuple[LabReference, ...] = ()
    exclusions: tuple[Exclusion, ...] = ()
    notes: tuple[Note, ...] = ()
