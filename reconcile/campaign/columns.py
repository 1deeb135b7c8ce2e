"""The one list of columns: every heading that a campaign's tables may have, and what is known about each."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

INF = math.inf


@dataclass(frozen=True, slots=True)
class Column:
    """One column of the input.

    ``served`` is False for columns that the design of the input has and that this version does not read yet;
    ``used`` is False for those that are read and kept but enter no number yet.
    """

    table: str  # "runs", …
    name: str  # the quantity or key, as it stands in the heading
    meaning: str  # for the person who fills it in
    kind: Literal["text", "quantity"] = "text"
    unit: str = ""  # the glossary's, in which the quantity travels; "1" if it has no dimension
    dimension: str = ""  # in words, for messages: "a mass"
    usual: tuple[str, ...] = ()  # units that laboratories write, for suggestions
    factors: tuple[float, float] = (0.0, INF)  # a unit outside, in glossary units, is a slip (Mg for mg)
    volume: bool = False  # may be a volume of water, converted with its density
    above: float = -INF  # allowed values: more than this …
    lowest: float = -INF  # … or from this …
    highest: float = INF  # … up to this, in glossary units
    ratio: bool = True  # zero means none of it, so that "0.5 %" of it makes sense
    words: tuple[str, ...] = ()  # the only texts allowed
    later_words: tuple[str, ...] = ()  # texts of the design that are not served yet
    required: bool = False  # no row without it
    served: bool = True
    used: bool = True

    @property
    def heading(self) -> str:
        """The heading in the glossary's unit: quantity / unit."""
        return heading(self.name, self.unit)


def heading(name: str, unit: str) -> str:
    """Quantity / unit as the Green Book writes it.

    Examples
    --------
    >>> heading("enthalpy", "kJ/mol"), heading("mass", "g"), heading("mass_fraction", "1")
    ('enthalpy / (kJ/mol)', 'mass / g', 'mass_fraction')
    """
    if unit in ("", "1"):
        return name
    return f"{name} / ({unit})" if any(mark in unit for mark in "/ ·") else f"{name} / {unit}"


def _mass(table: str, name: str, meaning: str, *, served: bool = True) -> Column:
    usual = ("g", "mg", "kg", "µg")
    return Column(table, name, meaning, "quantity", "g", "a mass", usual, (1e-6, 1e3), above=0.0, served=served)


def _molality(name: str, meaning: str, *, above: float = -INF, lowest: float = -INF) -> Column:
    usual = ("mol/kg", "mmol/kg", "mmol/g", "mol/g")
    return Column(
        "runs", name, meaning, "quantity", "mol/kg", "a molality", usual, (1e-6, 1e3), above=above, lowest=lowest
    )


def _heat(table: str, name: str, meaning: str, *, served: bool = True) -> Column:
    usual = ("J", "kJ", "mJ", "cal", "kcal")
    return Column(table, name, meaning, "quantity", "J", "an energy", usual, (1e-6, 4.2e3), served=served)


def _time(table: str, name: str, meaning: str) -> Column:
    return Column(table, name, meaning, "quantity", "s", "a time", ("s", "min", "h"), (1e-3, 86400.0), served=False)


def _temperature(table: str, name: str, meaning: str, *, served: bool = True) -> Column:
    return Column(
        table, name, meaning, "quantity", "K", "a temperature", ("K", "°C", "degC", "mK"), (1e-6, 1.0),
        lowest=273.15, highest=372.7, ratio=False, served=served,
    )  # fmt: skip


def _temperature_change(table: str, meaning: str) -> Column:
    return Column(
        table, "temperature_change", meaning, "quantity", "K", "a temperature difference", ("K", "mK", "°C"),
        (1e-6, 1.0), served=False,
    )  # fmt: skip


COLUMNS: tuple[Column, ...] = (
    Column("runs", "run", "unique name; the row's number where none is given"),
    Column("runs", "sample", "a lot of samples.csv; it or a salt is required"),
    Column("runs", "salt", "the formula as weighed, such as KCl or CaCl2·6H2O; it or a sample is required"),
    Column("runs", "calorimeter", "a row of calorimeters.csv"),
    Column("runs", "batch", "runs made together (a day, a series); the date where none is given"),
    Column("runs", "date", "day of the run, 2026-05-31"),
    _mass("runs", "mass", "salt as weighed"),
    Column(
        "runs", "water", "solvent before the salt, as a mass or a volume; without the salt already in it",
        "quantity", "g", "a mass or a volume", ("g", "mL", "kg", "L", "mg", "µL"), (1e-6, 1e3), volume=True, above=0.0,
    ),
    Column(
        "runs", "amount_concentration", "of the solution, instead of its molality", "quantity", "mol/L",
        "an amount concentration", ("mol/L", "mmol/L"), (1e-6, 1e3), above=0.0, served=False,
    ),
    _molality("molality", "all salt per kilogram of all water after the run", above=0.0),
    _molality("initial_molality", "salt already in the solvent; 0 where none is given", lowest=0.0),
    _molality("final_molality", "where a dilution ends", above=0.0),
    _time("runs", "mixing_time", "moment of mixing in the trace"),
    _temperature("runs", "temperature", "at the start of the run; the reference temperature where none is given"),
    Column(
        "runs", "enthalpy", "molar enthalpy of solution, reduced elsewhere; needs the molality; or of dilution",
        "quantity", "kJ/mol", "a molar enthalpy", ("kJ/mol", "J/mol", "kcal/mol", "cal/mol"), (1e-3, 5.0),
    ),
    _heat("runs", "heat", "absorbed by the dissolution: positive when the solution cools"),
    _temperature_change("runs", "corrected for heat exchange; negative when the solution cools"),
    Column("runs", "trace", "file name below traces/", served=False),
    Column(
        "runs", "solution_heat_capacity", "specific, of the final solution", "quantity", "J/(g K)",
        "a specific heat capacity", ("J/(g K)", "J/(kg K)", "kJ/(kg K)", "cal/(g K)"), (1e-3, 5.0), above=0.0,
        served=False,
    ),
    Column(
        "runs", "role", "sample or dilution; sample where none is given", words=("sample", "dilution"),
        later_words=("standard",),
    ),
    Column("runs", "reaction", "of a certified reaction that is no salt in water", served=False),
    Column("runs", "medium", "solvent of such a reaction", served=False),
    _temperature("runs", "salt_temperature", "where the salt was not as warm as the solvent", served=False),
    Column(
        "runs", "ampoule_volume", "head space saturated on breaking", "quantity", "mL", "a volume", ("mL", "µL"),
        (1e-3, 1e3), lowest=0.0, served=False,
    ),
    _heat("runs", "ampoule_heat", "heat of breaking, from blanks", served=False),
    _mass("runs", "undissolved", "residue weighed back", served=False),
    _time("runs", "dissolution_time", "to the end of the dissolution"),
    Column("runs", "operator", "initials or a code"),
    Column("runs", "note", "free text"),
    Column("samples", "sample", "name of the lot", required=True),
    Column("samples", "salt", "the formula as weighed, such as KCl or CaCl2·6H2O", required=True),
    Column(
        "samples", "mass_fraction", "of that formula in the lot; 1 − water where none is given", "quantity", "1",
        "a mass fraction", ("1", "%"), (1e-9, 1.0), above=0.0, highest=1.0,
    ),
    Column(
        "samples", "water", "mass fraction of water beyond the formula's", "quantity", "1", "a mass fraction",
        ("1", "%"), (1e-9, 1.0), lowest=0.0, highest=1.0,
    ),
    Column(
        "samples", "density", "of the crystal, for the buoyancy correction", "quantity", "g/cm^3", "a density",
        ("g/cm^3", "kg/m^3", "g/mL"), (1e-3, 1.0), above=0.0, used=False,
    ),
    Column("samples", "solid_phase", "polymorph", used=False),
    Column("samples", "drying", "how the lot was dried"),
    Column("samples", "supplier", "who sold it"),
    Column("samples", "supplier_lot", "the supplier's own lot number"),
    Column("samples", "note", "free text"),
    Column("calorimeters", "calorimeter", "name", required=True),
    Column(
        "calorimeters", "heat_capacity", "of the vessel, or of the system", "quantity", "J/K", "a heat capacity",
        ("J/K", "kJ/K", "cal/K"), (1e-3, 4.2e3), above=0.0, used=False,
    ),
    Column("calorimeters", "basis", "vessel or system", words=("vessel", "system"), used=False),
    Column(
        "calorimeters", "calibrated_on", "initial, mean or final system", words=("initial", "mean", "final"),
        used=False,
    ),
    _heat("calorimeters", "parasitic_heat", "absorbed per run by all but the dissolution: evaporation positive"),
    Column("calorimeters", "calibrated_by", "electrical, or the reaction used"),
    Column("calorimeters", "instrument", "make and kind"),
    Column("calorimeters", "note", "free text"),
    Column("calibrations", "calorimeter", "a row of calorimeters.csv", served=False),
    Column("calibrations", "run", "the run to which the calibration belongs", served=False),
    Column("calibrations", "date", "day of the calibration", served=False),
    Column(
        "calibrations", "electrical_energy", "put in", "quantity", "J", "an energy", ("J", "kJ"), (1e-3, 1e3),
        above=0.0, served=False,
    ),
    _temperature_change("calibrations", "corrected for heat exchange"),
    Column("calibrations", "stage", "before or after", words=("before", "after"), served=False),
    _time("traces", "time", "since the recording began"),
    _temperature("traces", "temperature", "of the calorimeter's contents", served=False),
)  # fmt: skip

FUNCTIONS: Mapping[str, str] = {
    "u": "standard uncertainty",
    "U": "expanded uncertainty",
    "k": "coverage factor of U",
    "tol": "half-width of a tolerance",
}
LATER_FUNCTIONS: Mapping[str, str] = {
    "dof": "degrees of freedom of u",
    "sdom": "standard deviation of the mean",
    "2sdom": "twice the standard deviation of the mean",
}
LATER_TABLES = ("calibrations",)
TABLES = ("runs", "samples", "calorimeters")

# Words that laboratories use for our columns; only ever suggested, never taken for them.
OTHER_NAMES: Mapping[str, str] = {
    "compound": "salt", "substance": "salt", "formula": "salt", "lot": "sample", "bottle": "sample", "name": "run",
    "id": "run", "number": "run", "no": "run", "day": "date", "comment": "note", "comments": "note", "remarks": "note",
    "weight": "mass", "solvent": "water", "temp": "temperature", "t": "temperature", "q": "heat", "m": "molality",
    "purity": "mass_fraction", "series": "batch", "experimenter": "operator", "vessel": "calorimeter",
    "concentration": "molality",
}  # fmt: skip

_BY_TABLE: dict[str, dict[str, Column]] = {}
for _column in COLUMNS:
    _BY_TABLE.setdefault(_column.table, {})[_column.name] = _column


def columns_of(table: str) -> Mapping[str, Column]:
    """Every column that a table may have, by name."""
    return _BY_TABLE[table]


def quantities_of(table: str) -> tuple[Column, ...]:
    """The served quantities of a table, in the order of the list."""
    return tuple(column for column in _BY_TABLE[table].values() if column.kind == "quantity" and column.served)


def keys_of(table: str) -> tuple[Column, ...]:
    """The served text columns of a table, in the order of the list."""
    return tuple(column for column in _BY_TABLE[table].values() if column.kind == "text" and column.served)
