"""The electrolytes of a campaign: which crystals give the same solution."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reconcile.chemistry import Salt
from reconcile.dilution.models import Composition, composition

Integers = NDArray[np.int64]

# ions whose reaction with water leaves no limit at infinite dilution (design, 5.3; the list is from memory)
NO_LIMIT = ("CO3-2", "S-2", "PO4-3", "CN-", "Al+3", "Fe+3", "Cr+3")


@dataclass(frozen=True, slots=True, eq=False)
class Electrolytes:
    """Blocks of the fit: a block is one electrolyte with all its crystals."""

    name: tuple[str, ...]  # (B,)
    of_salt: Integers  # (S,) block of each salt
    charge_type: tuple[str, ...]  # (B,)
    composition: Composition  # (B,)


def electrolytes(salts: Sequence[Salt]) -> Electrolytes:
    """Group the salts of a campaign by the solution that they give."""
    position: dict[str, int] = {}
    first: list[Salt] = []
    of_salt = []
    for salt in salts:
        if salt.electrolyte not in position:
            position[salt.electrolyte] = len(position)
            first.append(salt)
        of_salt.append(position[salt.electrolyte])
    return Electrolytes(
        tuple(position),
        np.array(of_salt, dtype=np.int64),
        tuple(s.charge_type for s in first),
        composition([s.ions for s in first], [s.charges for s in first]),
    )


def why_no_limit(salt: Salt) -> str:
    """Why a salt's enthalpy of solution has no limit that belongs to its own ions; "" where it has."""
    reacting = [ion for ion, _ in salt.ions if ion in NO_LIMIT]
    if not reacting:
        return ""
    return (
        f"{', '.join(reacting)} reacts with water the more the more dilute the solution: what is measured tends to the "
        "enthalpy of the products, not of the ions"
    )
