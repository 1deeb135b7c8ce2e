"""From a file's cells to quantities in the glossary's units, each with its standard uncertainty."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from reconcile.campaign.cells import Numbers, key, no_key, no_numbers, numbers
from reconcile.campaign.columns import Column, keys_of, quantities_of
from reconcile.campaign.delimited import RawTable
from reconcile.campaign.headings import Heading, Headings
from reconcile.campaign.problems import Problems, number
from reconcile.campaign.tables import Booleans, Floats, Key, Quantity, Table
from reconcile.campaign.units import Scale

DIVISORS = {"u": 1.0, "tol": math.sqrt(3.0)}  # GUM 4.3.7: half-width of a rectangular distribution (from memory)
USUAL_COVERAGE = 2.0


@dataclass(frozen=True, slots=True)
class Default:
    """An uncertainty for a whole column, from campaign.toml; a row's own value wins."""

    u: float  # in the unit that scale leads from, a standard uncertainty
    scale: Scale


@dataclass(frozen=True, slots=True, eq=False)
class Built:
    """A table, and what its checks have to know about it."""

    table: Table
    headings: Headings
    bad: Mapping[str, Booleans]  # by quantity: rows whose cell is a problem already
    complete: bool  # no row had to be left out
    blank_rows: int = 0
    assumed: int = 0  # rows whose temperature is the reference temperature for want of their own


def empty_table(name: str, table: str, rows: int = 0) -> Table:
    """A table with every column and nothing in them."""
    nothing = Quantity(no_numbers(rows), no_numbers(rows), no_numbers(rows, math.inf))
    return Table(
        name, np.zeros(rows, dtype=np.int64), {column.name: nothing for column in quantities_of(table)},
        {column.name: no_key(rows) for column in keys_of(table)},
    )  # fmt: skip


def build(
    raw: RawTable,
    headings: Headings,
    table: str,
    defaults: Mapping[str, Default],
    reference_temperature: float,
    problems: Problems,
) -> Built:
    """Every served column of a table, there or not.

    Parameters
    ----------
    raw : RawTable
        The cells, n rows.
    headings : Headings
        What the columns are.
    table : str
        runs, samples or calorimeters.
    defaults : mapping
        Uncertainties by quantity, for rows that have a value and no uncertainty of their own.
    reference_temperature : float
        K; stands in the rows of `temperature` that have none.
    problems : Problems
        Takes in every cell that does not serve.
    """
    keys: dict[str, Key] = {}
    rows = len(raw.row)
    for column in keys_of(table):
        heading = headings.find(column.name)
        keys[column.name] = no_key(rows) if heading is None else key(raw.frame[heading.place])
    for text, place in headings.refused:
        numbers(raw.frame[place], raw.file, raw.row, text, problems)
    quantities: dict[str, Quantity] = {}
    bad: dict[str, Booleans] = {}
    stood_in = 0
    ordered = sorted(quantities_of(table), key=lambda column: column.name != "temperature")  # a volume needs it
    for column in ordered:
        assumed = reference_temperature if column.name == "temperature" else math.nan
        warmth = quantities["temperature"].value if column.volume else None
        builder = _Builder(raw, headings, column, warmth, problems)
        quantities[column.name], bad[column.name] = builder.quantity(defaults.get(column.name), assumed)
        stood_in += builder.assumed
    quantities = {column.name: quantities[column.name] for column in quantities_of(table)}
    return Built(Table(raw.file, raw.row, quantities, keys), headings, bad, raw.complete, raw.blank_rows, stood_in)


class _Builder:
    """One quantity of one table."""

    def __init__(
        self, raw: RawTable, headings: Headings, column: Column, temperature: Floats | None, problems: Problems
    ) -> None:
        self.raw, self.headings, self.column, self.problems = raw, headings, column, problems
        self.temperature = temperature
        self.rows = len(raw.row)
        self.assumed = 0

    def quantity(self, default: Default | None, assumed: float) -> tuple[Quantity, Booleans]:
        """Value and standard uncertainty, and the rows whose cells are problems."""
        value, bad = self._value(assumed)
        u = self._uncertainty(value, default)
        for array in (value, u):
            array.flags.writeable = False
        return Quantity(value, u, no_numbers(self.rows, math.inf)), bad

    def _value(self, assumed: float) -> tuple[Floats, Booleans]:
        heading = self.headings.find(self.column.name)
        if heading is None:
            return no_numbers(self.rows, assumed), np.broadcast_to(np.False_, self.rows)
        cells = self._numbers(heading)
        value = self._scaled(cells.value, heading.scale)
        bad = cells.bad | self._outside(cells.value, value, heading)
        if not math.isnan(assumed):
            self.assumed = int(np.count_nonzero(np.isnan(cells.value) & ~bad))
            value = np.where(np.isnan(value), assumed, value) if self.assumed or bad.any() else value
        return value, bad

    def _numbers(self, heading: Heading) -> Numbers:
        return numbers(self.raw.frame[heading.place], self.raw.file, self.raw.row, heading.text, self.problems)

    def _scaled(self, typed: Floats, scale: Scale, *, value: bool = True) -> Floats:
        """Typed numbers in the glossary's unit; an uncertainty takes the slope only."""
        scaled = typed * scale.slope if scale.slope != 1.0 else typed
        if value and scale.origin:
            scaled = scaled + scale.origin
        return scaled * self._grams_per_millilitre() if scale.volume else scaled

    def _grams_per_millilitre(self) -> Floats:
        """Density of water at each row's temperature; water's table ends at 273.15 and 372.7 K."""
        from reconcile.chemistry.water import density  # loads the properties of water

        assert self.temperature is not None
        temperature = np.clip(self.temperature, 273.15, 372.7)
        if self.rows and np.all(temperature == temperature[0]):
            return no_numbers(self.rows, float(density(temperature[:1])[0]) / 1000.0)
        return np.asarray(density(temperature), dtype=np.float64) / 1000.0

    def _outside(self, typed: Floats, value: Floats, heading: Heading) -> Booleans:
        """Rows with a value that the quantity cannot have, told."""
        column = self.column
        with np.errstate(invalid="ignore"):
            outside: Booleans = (value <= column.above) | (value < column.lowest) | (value > column.highest)
        for position in np.flatnonzero(outside).tolist():
            expected, remedy = _allowed(column, heading.text)
            self.problems.add(
                self.raw.file, int(self.raw.row[position]), heading.text, number(typed[position]), expected, remedy,
                "out of range",
            )  # fmt: skip
        return outside

    def _uncertainty(self, value: Floats, default: Default | None) -> Floats:
        """Standard uncertainty, row by row: u, U/k or tol/√3 of the row, else the default of campaign.toml."""
        u = no_numbers(self.rows)
        stated: list[tuple[Heading, Booleans]] = []
        for function in ("u", "U", "tol"):
            heading = self.headings.find(self.column.name, function)
            if heading is None:
                continue
            cells = self._numbers(heading)
            self._refuse_negative(cells.value, heading)
            divisor = self._coverage(cells.value) if function == "U" else DIVISORS[function]
            scaled = self._scaled(cells.value, heading.scale, value=False)
            if heading.scale.relative:
                scaled = scaled * np.abs(value)
            given = ~np.isnan(cells.value)
            self._refuse_second(given, heading, stated)
            stated.append((heading, given | cells.bad))
            u = np.where(given, scaled / divisor if np.any(np.not_equal(divisor, 1.0)) else scaled, u)
        if default is not None:
            usual = self._scaled(no_numbers(self.rows, default.u), default.scale, value=False)
            if default.scale.relative:
                usual = usual * np.abs(value)
            u = np.where(np.isnan(u), usual, u)
        return u if not stated and default is None else np.where(np.isnan(value), np.nan, u)

    def _coverage(self, expanded: Floats) -> Floats:
        """Coverage factor of each row, 2 where none is given."""
        heading = self.headings.find(self.column.name, "k")
        if heading is None:
            return no_numbers(self.rows, USUAL_COVERAGE)
        cells = self._numbers(heading)
        with np.errstate(invalid="ignore"):
            wrong = np.flatnonzero(cells.value <= 0)
        for position in wrong.tolist():
            self.problems.add(
                self.raw.file, int(self.raw.row[position]), heading.text, number(cells.value[position]),
                "a coverage factor of more than 0", "Write the factor by which u was expanded, such as 2.",
                "uncertainty",
            )  # fmt: skip
        good = ~np.isnan(cells.value) & (cells.value > 0)
        return np.where(good, cells.value, USUAL_COVERAGE)

    def _refuse_negative(self, typed: Floats, heading: Heading) -> None:
        with np.errstate(invalid="ignore"):
            negative = np.flatnonzero(typed < 0)
        for position in negative.tolist():
            self.problems.add(
                self.raw.file, int(self.raw.row[position]), heading.text, number(typed[position]),
                "an uncertainty of 0 or more", f"Write {number(-typed[position])} if that is its size.", "uncertainty",
            )  # fmt: skip

    def _refuse_second(self, given: Booleans, heading: Heading, stated: list[tuple[Heading, Booleans]]) -> None:
        """One uncertainty a quantity and row."""
        for other, before in stated:
            for position in np.flatnonzero(given & before).tolist():
                self.problems.add(
                    self.raw.file, int(self.raw.row[position]), heading.text,
                    f"there is a value here and in `{other.text}`", "one uncertainty for each quantity and row",
                    "Empty one of the two cells.", "two uncertainties",
                )  # fmt: skip


def _allowed(column: Column, heading: str) -> tuple[str, str]:
    """What values a quantity may have, and how to mend one that it may not."""
    unit = "" if column.unit == "1" else f" {column.unit}"
    if column.highest < math.inf:
        from_ = f"more than {number(column.above)}" if column.above > -math.inf else f"from {number(column.lowest)}"
        expected = f"{from_}{unit} to {number(column.highest)}{unit}"
        if column.unit == "K":
            remedy = "Write `temperature / °C` in the heading if these are degrees Celsius." if "K" in heading else ""
        else:
            remedy = f"Write `{column.name} / %` in the heading if these are percentages." if "%" not in heading else ""
        return expected, remedy or "Correct the value."
    if column.lowest > -math.inf:
        return f"{number(column.lowest)}{unit} or more", "Correct the value, or leave out the row."
    return f"more than {number(column.above)}{unit}", "Correct the value, or leave out the row."
