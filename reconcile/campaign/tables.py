"""The checked tables of a campaign: columns in the glossary's units, keys as codes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from reconcile.chemistry import Salt

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class Quantity:
    """One quantity of a table, row by row, in the unit of the glossary."""

    value: Floats  # (n,), NaN where the cell is empty
    u: Floats  # (n,), standard uncertainty, same unit; NaN where none is given
    degrees_of_freedom: Floats  # (n,), of u; inf where not stated


@dataclass(frozen=True, slots=True, eq=False)
class Key:
    """A text column as codes: labels[code] is the text of a row, code −1 an empty cell."""

    code: Integers  # (n,)
    labels: tuple[str, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Table:
    """One table of the campaign; every column that the table may have is there, empty or not."""

    name: str  # the file's name, as messages print it
    row: Integers  # (n,), as a spreadsheet counts, the heading being 1
    quantities: Mapping[str, Quantity]
    keys: Mapping[str, Key]

    def __len__(self) -> int:
        """Rows."""
        return len(self.row)


@dataclass(frozen=True, slots=True)
class Remark:
    """Something told and not refused: an assumption, a left-out column, a contradiction in a row."""

    text: str
    affects: str = "all runs"  # whom it concerns, in words


ENTHALPY_OF_SOLUTION, FORMATION_ENTHALPY = "enthalpy of solution", "formation enthalpy"


@dataclass(frozen=True, slots=True)
class LabReference:
    """A value of the laboratory's own that stands in place of the tabulated one, [[reference]]."""

    quantity: str  # enthalpy of solution (at infinite dilution) or formation enthalpy, at 298.15 K
    species: str  # CaCl2·6H2O, Ca+2, H2O
    phase: str  # cr, aq, l
    value: float  # kJ/mol
    u: float  # kJ/mol, > 0
    source: str


@dataclass(frozen=True, slots=True, eq=False)
class Campaign:
    """A laboratory's season, checked: what the rest of the chain computes from."""

    title: str
    laboratory: str
    reference_temperature: float  # K
    pressure: float  # kPa
    runs: Table
    samples: Table
    calorimeters: Table
    salts: tuple[Salt, ...]  # in order of first appearance in the runs
    salt: Integers  # (n,) position in salts, of each run
    sample: Integers  # (n,) row of samples, −1 where the run names a salt straight away
    calorimeter: Integers  # (n,) row of calorimeters, −1 where none is named
    batch: Key  # of the runs; a date makes a batch where none is named
    included: Booleans  # (n,), False where campaign.toml excludes the run
    reason: tuple[str, ...]  # (n,) of the exclusion, "" where included
    published_dilution: Booleans  # (salts,) [analysis] published_dilution, by salt
    max_molality: Floats  # (salts,) mol/kg, [analysis] max_molality, inf where none
    between_batches: Booleans  # (salts,) [analysis] between_batches
    formation_set: str  # [references] set
    remarks: tuple[Remark, ...] = ()
    checksums: Mapping[str, str] = field(default_factory=dict)  # file ─► sha256
    date: str = ""  # [campaign] date, ISO 8601
    notes: tuple[tuple[str, str], ...] = ()  # [[note]]: run, text
    references: tuple[LabReference, ...] = ()  # [[reference]]: values of the laboratory's own
