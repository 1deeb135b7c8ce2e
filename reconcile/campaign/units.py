"""Units: a heading's unit turned, once, into a slope and an origin."""

from __future__ import annotations

import functools
import re
from dataclasses import dataclass
from typing import Any

from reconcile.campaign.columns import Column, heading

# Powers of powers make a units parser work for ever, and no unit needs them.
_UNREASONABLE = re.compile(r"[\d)⁰¹²³⁴⁵⁶⁷⁸⁹]\s*(\^|\*\*)|\d{3,}|[⁰¹²³⁴⁵⁶⁷⁸⁹]{2,}|.{61,}")
_NUMBER_AND_UNIT = re.compile(r"\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(.*?)\s*", re.ASCII)


@dataclass(frozen=True, slots=True)
class Scale:
    """From what stands in a cell to the glossary's unit: value = slope·x + origin, u = slope·u(x)."""

    slope: float = 1.0
    origin: float = 0.0
    volume: bool = False  # the result is a volume of water in mL, still to be made a mass
    relative: bool = False  # the result is a fraction of the row's own value


class UnitError(ValueError):
    """A unit that does not serve; keeps what was found, what was expected and the remedy."""

    def __init__(self, found: str, expected: str, remedy: str, code: str = "unit") -> None:
        self.found, self.expected, self.remedy, self.code = found, expected, remedy, code
        super().__init__(f"{found}. Expected {expected}. {remedy}")


def scale(unit: str | None, column: Column, *, uncertainty: bool = False) -> Scale:
    """What a unit in a heading, or behind a number, means for a column.

    Parameters
    ----------
    unit : str or None
        As written; None where there is none.
    column : Column
        For its dimension and its usual units.
    uncertainty : bool
        Of an uncertainty: an offset does not enter, and % is relative to the row's value.

    Raises
    ------
    UnitError
        If the unit is missing, unknown, of another dimension, or of a size that must be a slip.

    Examples
    --------
    >>> from reconcile.campaign.columns import columns_of
    >>> scale("mg", columns_of("runs")["mass"]).slope
    0.001
    """
    bare = unit.strip() if unit is not None else ""
    if bare.startswith("(") and bare.endswith(")") and bare.count("(") == 1:
        bare = bare[1:-1].strip()
    if bare == column.unit or (not bare and column.unit == "1"):
        return Scale()
    if not bare:
        remedy = f"Write `{heading(column.name, column.usual[0])}`."
        raise UnitError("it has no unit", f"a unit of {_what(column)}, such as {column.usual[0]}", remedy)
    slope, origin, dimension = _factor(bare, column)
    if dimension == "fraction":
        if uncertainty and column.ratio:
            return Scale(slope, relative=True)
        remedy = "Give it in a unit, as for a difference." if uncertainty else _instead(column)
        raise UnitError(f'unit "{bare}" has no dimension', f"a unit of {_what(column)}", remedy, "dimension")
    low, high = column.factors
    if not low * (1 - 1e-9) <= slope <= high * (1 + 1e-9):
        glossary = "mL" if dimension == "volume" else column.unit
        remedy = f"Did you mean {_nearest(bare, column) or column.usual[0]}?"
        found = f'unit "{bare}" is {slope:.4g} {"" if glossary == "1" else glossary}'.rstrip()
        raise UnitError(found, f"a unit of a laboratory's size, such as {' or '.join(column.usual[:2])}", remedy)
    if column.lowest > 200 and not uncertainty and slope < 0.5:  # a temperature in mK is a difference
        found = f'unit "{bare}" is a unit for temperature differences'
        raise UnitError(found, "K or °C", f"Write `{column.heading}`.")
    return Scale(slope, 0.0 if uncertainty else origin, volume=dimension == "volume")


def measured(text: str, column: Column, *, uncertainty: bool = False) -> tuple[float, Scale]:
    """A number with its unit, as campaign.toml has them: "0.01 g" → 0.01 and the scale of g.

    Raises
    ------
    UnitError
        If there is no number, or if the unit does not serve.
    """
    found = _NUMBER_AND_UNIT.fullmatch(text)
    example = f"{'0.01' if uncertainty else '1'} {column.usual[0]}" if column.unit != "1" else "0.01"
    if not found:
        raise UnitError(f'"{text}"', f'a number with a decimal point and a unit, as in "{example}"', "", "number")
    digits, unit = found.groups()
    if unit.startswith(","):
        remedy = f'Write "{text.replace(",", ".", 1)}".'
        raise UnitError(f'"{text}"', "a number with a decimal point", remedy, "decimal comma")
    try:
        return float(digits), scale(unit or None, column, uncertainty=uncertainty)
    except UnitError as fault:
        remedy = fault.remedy if "`" not in fault.remedy else f'Write "{digits} {column.usual[0]}".'
        raise UnitError(f'"{text}": {fault.found}', fault.expected, remedy, fault.code) from None


@functools.cache
def _registry() -> Any:
    import pint  # 0.2 s, and not needed where every heading is in the glossary's unit

    return pint.UnitRegistry()


@functools.lru_cache(maxsize=512)
def _factor(unit: str, column: Column) -> tuple[float, float, str]:
    """Slope, origin and kind (own, volume or fraction) of a unit, by the units library."""
    try:
        if _UNREASONABLE.search(unit):
            raise ValueError(unit)
        registry = _registry()
        one, none = registry.Quantity(1.0, unit), registry.Quantity(0.0, unit)
        for target, kind in ((column.unit, "own"), ("mL", "volume"), ("1", "fraction")):
            if (kind == "volume" and not column.volume) or not one.is_compatible_with(target):
                continue
            origin = float(none.to(target).magnitude)
            slope = float(one.to(target).magnitude) - origin
            return float(f"{slope:.15g}"), origin, "own" if column.unit == "1" else kind
        dimension = _in_words(one)
    except Exception:  # the library fails in many ways on a bad unit, AssertionError among them
        nearest = _nearest(unit, column)
        remedy = f"Did you mean {nearest}?" if nearest else _instead(column)
        raise UnitError(f'unit "{unit}" is not known', f"a unit of {_what(column)}", remedy) from None
    nearest = _nearest(unit, column)
    remedy = f"Did you mean {nearest}?" if nearest else _instead(column)
    raise UnitError(f'unit "{unit}" is {dimension}', f"a unit of {_what(column)}", remedy, "dimension")


def _in_words(one: Any) -> str:
    """What a unit is a unit of, for the message."""
    names = {
        "kg": "a unit of mass", "m": "a unit of length", "mL": "a unit of volume", "s": "a unit of time",
        "K": "a unit of temperature", "J": "a unit of energy", "mol": "a unit of amount", "J/mol": "a molar energy",
        "mol/kg": "a molality", "mol/L": "an amount concentration", "J/K": "a heat capacity",
        "J/g": "a specific energy", "J/(g K)": "a specific heat capacity", "C": "an electric charge",
        "V": "a voltage", "mol/m": "an amount per length", "J K": "an energy times a temperature",
        "g/mL": "a density", "1": "a pure number",
    }  # fmt: skip
    for unit, words in names.items():
        if one.is_compatible_with(unit):
            return words
    return f"of dimension {one.dimensionality}"


def _what(column: Column) -> str:
    return re.sub(r"\ban? ", "", column.dimension)


def _instead(column: Column) -> str:
    return f"Write `{heading(column.name, column.usual[0])}`."


def _nearest(unit: str, column: Column) -> str | None:
    """The usual unit that differs only in case, blanks or a denominator's brackets."""

    def plain(text: str) -> str:
        return re.sub(r"[\s()·.*^]", "", text).casefold()

    for usual in column.usual:
        if plain(usual) == plain(unit) and usual != unit:
            return usual
    return None
