"""Everything held about a salt or an ion, by quantity and source, and which value a report uses."""

from __future__ import annotations

from typing import Any

from reconcile.reference.entries import SOURCES
from reconcile.reference.species import Species, known_salts, nearest_held, read_species, solution_of

FORMATION_SET = "NBS-1982"


def lookup(species: str, formation_set: str = FORMATION_SET) -> dict[str, Any]:
    """All that is held about a salt, an ion or water.

    Parameters
    ----------
    species : str
        Any usual spelling: CaCl2·6H2O, CaCl2.6H2O, Ca(NO3)2, Na+, SO4-2, SO4^2-, H2O.
    formation_set : str
        The set of formation enthalpies that a report would use.

    Returns
    -------
    result : dict
        Plain types that json can write. species, kind (salt, ion, substance), nearest (names held that are like it,
        where nothing is held), and for a salt ions, electrolyte, molar_mass, crystals (others of the same solution);
        values: a list of {quantity, value, u, unit, conditions, u_basis, reference_set, source, read_in, year, status,
        note, used, why}. `used` marks the values that a report takes; `why` gives the reason for or against.

    Raises
    ------
    UnknownSpeciesError
        If the text is neither a formula nor an ion of the list; names the nearest.

    Examples
    --------
    >>> result = lookup("CaCl2.6H2O")
    >>> [row["value"] for row in result["values"] if row["used"] and row["quantity"] == "formation_enthalpy"]
    [-2607.9]
    """
    asked = read_species(species)
    values = [row for source in SOURCES for row in source(asked, formation_set)]
    result: dict[str, Any] = {"species": asked.name, "kind": _kind(asked)}
    if asked.salt is not None:
        salt = asked.salt
        result |= {
            "ions": dict(salt.ions),
            "electrolyte": salt.electrolyte,
            "charge_type": salt.charge_type,
            "molar_mass": salt.molar_mass,
            "crystals": [
                name for name in known_salts() if name != salt.formula and solution_of(name) == salt.electrolyte
            ],
        }
    result["nearest"] = [] if values else list(nearest_held(asked.name))
    result["values"] = values
    return result


def _kind(asked: Species) -> str:
    return "salt" if asked.salt is not None else "ion" if asked.ion is not None else "substance"
