"""[[reference]]: values of the laboratory's own in place of tabulated ones, checked and told."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence
from difflib import get_close_matches
from typing import TYPE_CHECKING

from reconcile.campaign.columns import columns_of
from reconcile.campaign.places import signed
from reconcile.campaign.problems import number, quoted
from reconcile.campaign.settings import UNREADABLE
from reconcile.campaign.tables import ENTHALPY_OF_SOLUTION, FORMATION_ENTHALPY, LabReference, Remark
from reconcile.campaign.units import Scale, UnitError, measured
from reconcile.chemistry import IONS, FormulaError, Salt, read_ion, read_salt

if TYPE_CHECKING:
    from reconcile.campaign.keys import ReferenceKeys

QUANTITIES = (ENTHALPY_OF_SOLUTION, FORMATION_ENTHALPY)
LATER_QUANTITIES = ("lattice enthalpy", "hydration enthalpy")
WATER, PROTON = "H2O", "H+"

_MOLAR = columns_of("runs")["enthalpy"]
_CHARGED = re.compile(r"(.+?)(?:\^\{?\d*|[⁰¹²³⁴⁵⁶⁷⁸⁹]*)[+−–⁺⁻-]\d*\}?")  # SO4-2, SO4^{2-}, SO4²⁻; its body

Refuse = Callable[[tuple[str | int, ...], str, str, str, str], None]  # path, found, expected, remedy, code


def own_values(entries: Sequence[ReferenceKeys], refuse: Refuse) -> tuple[LabReference, ...]:
    """The entries of [[reference]] in the glossary's unit; what is wrong goes to ``refuse``."""
    found: list[LabReference] = []
    seen: dict[tuple[str, str], int] = {}
    for place, one in enumerate(entries):
        path = ("reference", place)
        quantity = _quantity(one.quantity, path, refuse)
        species = _species(one.species, quantity, path, refuse)
        value = _value(one.value, path, refuse)
        u = _uncertainty(one.u, value, path, refuse)
        if quantity is None or species is None:
            continue
        formula, phase, identity = species
        first = seen.setdefault((quantity, identity), place)
        if first != place:
            told = f"the {quantity} of {formula} stands in reference {first + 1} already"
            refuse(path, told, "one value for each quantity and species", "Delete one of the two.", "twice")
        elif value is not None and u is not None and one.source != UNREADABLE:
            found.append(LabReference(quantity, formula, phase, value, u, signed(one.source, one.by, one.date)))
    return tuple(found)


def _quantity(text: str, path: tuple[str | int, ...], refuse: Refuse) -> str | None:
    if text == UNREADABLE or text in QUANTITIES:
        return text if text in QUANTITIES else None
    expected = " or ".join(f'"{one}"' for one in QUANTITIES)
    if text in LATER_QUANTITIES:
        told = f"{quoted(text)} is in the design of the input but not yet served"
        refuse((*path, "quantity"), told, expected, "Delete this [[reference]] for now.", "not yet served")
        return None
    close = get_close_matches(text.casefold(), QUANTITIES, n=1, cutoff=0.5)
    remedy = f'Did you mean "{close[0]}"?' if close else "Write one of the two."
    refuse((*path, "quantity"), f"{quoted(text)} is unknown", expected, remedy, "unknown quantity")
    return None


def _species(
    text: str, quantity: str | None, path: tuple[str | int, ...], refuse: Refuse
) -> tuple[str, str, str] | None:
    """Formula or ion, phase, and what is the same for every spelling; a formula where the quantity is not known."""
    if text == UNREADABLE or (quantity is None and _CHARGED.fullmatch(text)):
        return None
    where = (*path, "species")
    try:
        if quantity == FORMATION_ENTHALPY and text == WATER:
            return WATER, "l", WATER
        if quantity == FORMATION_ENTHALPY and _CHARGED.fullmatch(text):
            ion = read_ion(text)
            if ion.name == PROTON:
                told = "the formation enthalpy of H+ in water is zero by convention"
                refuse(where, told, "another ion", "Delete this [[reference]].", "by convention")
                return None
            return ion.name, "aq", ion.name
        salt = read_salt(text)
    except FormulaError as fault:
        refuse(where, quoted(text), fault.expected, _remedy(text, quantity, fault.remedy), "formula")
        return None
    return salt.formula, "cr", salt.identity


def _remedy(text: str, quantity: str | None, of_the_fault: str) -> str:
    """How to mend a species: an ion of these atoms, what the formula's own fault says, or the nearest known."""
    if quantity == FORMATION_ENTHALPY:
        charged = _CHARGED.fullmatch(text)
        body = charged[1] if charged else text
        ions = [ion.name for ion in IONS.values() if ion.body == body and ion.name != PROTON]
        if ions and text not in ions:
            return f"Did you mean {' or '.join(ions)}?"
    if of_the_fault.startswith("Did you mean"):
        return of_the_fault
    from reconcile.reference import table  # loads the tables

    name, column = "solution_enthalpy", "salt"
    if quantity == FORMATION_ENTHALPY:
        name, column = "formation_enthalpy", "species"
    close = get_close_matches(text, list(dict.fromkeys(table(name)[column])), n=1, cutoff=0.75)
    return f"{of_the_fault.partition(' Did you mean')[0]} Did you mean {close[0]}?" if close else of_the_fault


def _value(text: str, path: tuple[str | int, ...], refuse: Refuse) -> float | None:
    """In kJ/mol."""
    found = _measured(text, (*path, "value"), refuse, uncertainty=False)
    if found is None:
        return None
    value = found[1].slope * found[0]
    if not math.isfinite(value):
        refuse((*path, "value"), quoted(text), "a finite number", "Correct the value.", "number")
        return None
    return value


def _uncertainty(text: str, value: float | None, path: tuple[str | int, ...], refuse: Refuse) -> float | None:
    """The standard uncertainty in kJ/mol; a percentage is one of the value."""
    found = _measured(text, (*path, "u"), refuse, uncertainty=True)
    if found is None:
        return None
    typed, scale = found
    share = abs(value) if scale.relative and value is not None else 1.0
    u = scale.slope * typed * share
    if not 0 < u < math.inf:
        expected = "a standard uncertainty of more than 0"
        refuse((*path, "u"), quoted(text), expected, "Estimate it; a value without one cannot be used.", "uncertainty")
        return None
    return u


def _measured(
    text: str, path: tuple[str | int, ...], refuse: Refuse, *, uncertainty: bool
) -> tuple[float, Scale] | None:
    """The number and the scale of its unit; None for what is told already."""
    if text == UNREADABLE:
        return None
    try:
        return measured(text, _MOLAR, uncertainty=uncertainty)
    except UnitError as fault:
        remedy = fault.remedy or f'Write {path[-1]} = "… kJ/mol".'
        refuse(path, fault.found, fault.expected, remedy, fault.code)
        return None


def remarks_of_own_values(
    references: Sequence[LabReference], salts: Sequence[Salt], formation_set: str
) -> tuple[Remark, ...]:
    """One remark a reference: what it replaces, and that it mixes sets; or that it serves nothing."""
    found = []
    for one in references:
        concerned = [salt.formula for salt in salts if _serves(one, salt)]
        phase = f"({one.phase})" if one.quantity == FORMATION_ENTHALPY else ""
        what = f"{one.quantity} of {one.species}{phase}"
        if not concerned:
            found.append(Remark(f"the laboratory's own value of the {what} serves nothing: no run has it", "no run"))
            continue
        held = _tabulated(one, formation_set)
        if held is None:
            instead = "stands alone: no tabulated one is held"
        else:
            instead = f"stands in place of the tabulated one, {number(held)} kJ/mol"
        text = (
            f"{what}: the laboratory's own value, {number(one.value)} kJ/mol with u = {number(one.u)} kJ/mol "
            f"({one.source}), {instead}; mixing sets can leave cycle errors that no calorimeter made"
        )
        found.append(Remark(text, f"salt {', '.join(concerned)}"))
    return tuple(found)


def _serves(one: LabReference, salt: Salt) -> bool:
    if one.phase == "aq":
        return any(ion == one.species for ion, _ in salt.ions)
    if one.phase == "l":
        return salt.water > 0
    return read_salt(one.species).identity == salt.identity


def _tabulated(one: LabReference, formation_set: str) -> float | None:
    """The value that the tables hold for it, kJ/mol."""
    from reconcile import reference  # loads the tables

    if one.quantity == ENTHALPY_OF_SOLUTION:
        values = reference.solution_enthalpies([one.species])["value"]
    else:
        frame = reference.formation_enthalpies(formation_set)
        identity = read_salt(one.species).identity if one.phase == "cr" else one.species
        values = frame.loc[frame["phase"].eq(one.phase) & frame["identity"].eq(identity), "value"]
    values = values.dropna()
    return float(values.iloc[0]) if len(values) else None
