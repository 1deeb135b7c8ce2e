"""A species as asked for: read in any usual spelling, or told the nearest that are known."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from difflib import get_close_matches
from functools import lru_cache

from reconcile.chemistry import FormulaError, Ion, Salt, read_ion, read_salt
from reconcile.reference.tables import rows

SUBSTANCES = ("H2O", "CO(NH2)2", "C12H22O11")  # held, and neither salt nor ion


class UnknownSpeciesError(LookupError):
    """Nothing is known by this name; `nearest` holds the names most like it."""

    def __init__(self, found: str, reason: str, nearest: tuple[str, ...]) -> None:
        self.found, self.nearest = found, nearest
        self.expected = "a salt or an ion, as NaCl, CaCl2·6H2O, Na+, SO4-2"
        self.remedy = f"Did you mean {' or '.join(nearest)}?" if nearest else reason
        super().__init__(f"“{found}” is not known. Expected {self.expected}. {self.remedy}")


@dataclass(frozen=True, slots=True)
class Species:
    """What was asked for, as read: one of the two is None, or both for a substance that is neither."""

    name: str
    salt: Salt | None = None
    ion: Ion | None = None


def read_species(typed: str) -> Species:
    """A salt, an ion, or a substance that the tables know by name (water, urea).

    Raises
    ------
    UnknownSpeciesError
        If it is none of these.
    """
    text = "".join(str(typed).split())
    if text in SUBSTANCES:
        return Species(text)
    try:
        salt = read_salt(text)
        return Species(salt.formula, salt=salt)
    except FormulaError as error:
        salt_error = error
    try:
        ion = read_ion(text)
        return Species(ion.name, ion=ion)
    except FormulaError as error:
        ionic = any(sign in text for sign in "+-⁺⁻")
        reason = error if ionic else salt_error
    raise UnknownSpeciesError(typed, reason.remedy, nearest_held(text)) from reason


@lru_cache(maxsize=1)
def known_salts() -> tuple[str, ...]:
    """Crystals for which a formation or a solution enthalpy is held, in alphabetical order."""
    names = {row["species"] for row in rows("formation_enthalpy") if row["phase"] == "cr"}
    return tuple(sorted(names | {row["salt"] for row in rows("solution_enthalpy") if row["phase"] == "cr"}))


def solution_of(name: str) -> str:
    """The electrolyte of a salt; "" for what is none."""
    try:
        return read_salt(name).electrolyte
    except FormulaError:
        return ""


def nearest_held(text: str) -> tuple[str, ...]:
    """Up to three names held that are spelled most like this: ions for an ion, else crystals."""
    names: Iterable[str] = known_salts()
    if any(sign in text for sign in "+-⁺⁻"):
        names = sorted({row["species"] for row in rows("formation_enthalpy") if row["phase"] == "aq"})
    folded: dict[str, str] = {}
    for name in names:
        folded.setdefault(name.replace("·", ".").lower(), name)
    near = get_close_matches(text.replace("·", ".").lower(), folded, n=3, cutoff=0.5)
    return tuple(folded[name] for name in near)
