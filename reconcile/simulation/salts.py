"""Many salts out of the list of ions, for studies and benchmarks."""

from __future__ import annotations

from collections.abc import Collection
from itertools import product
from math import lcm

from reconcile.chemistry import FormulaError, read_salt
from reconcile.chemistry.ions import IONS
from reconcile.dilution.electrolytes import why_no_limit


def many_salts(count: int, charge_types: Collection[str] | None = None) -> tuple[str, ...]:
    """Formulae of distinct electrolytes with a limit at infinite dilution; whether such a salt exists is not asked.

    Parameters
    ----------
    count : int
        At most so many.
    charge_types : collection of str, optional
        Only these, as "2-1".

    Examples
    --------
    >>> len(many_salts(40, {"2-1"}))
    40
    """
    cations = [ion for ion in IONS.values() if ion.charge > 0]
    anions = [ion for ion in IONS.values() if ion.charge < 0]
    found: list[str] = []
    seen: set[str] = set()
    for cation, anion in product(cations, anions):
        common = lcm(cation.charge, -anion.charge)
        parts = []
        for ion, number in ((cation, common // cation.charge), (anion, common // -anion.charge)):
            bare = ion.name.rstrip("0123456789").rstrip("+-")
            parts.append(bare if number == 1 else f"({bare}){number}")
        try:
            salt = read_salt("".join(parts))
        except FormulaError:  # two readings, or an acid
            continue
        wanted = charge_types is None or salt.charge_type in charge_types
        if wanted and salt.electrolyte not in seen and not why_no_limit(salt):
            seen.add(salt.electrolyte)
            found.append(salt.formula)
            if len(found) == count:
                break
    return tuple(found)
