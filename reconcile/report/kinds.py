"""What kind of run each row is: a dissolution in water, a successive addition, or a heat of dilution."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from reconcile.report.words import counted, listed

if TYPE_CHECKING:
    from reconcile.campaign import Campaign

WORDS = (  # one, several
    ("dissolution in water", "dissolutions in water"),
    ("successive addition", "successive additions"),
    ("heat of dilution", "heats of dilution"),
)
ADDITION, DILUTION = 1, 2  # positions in WORDS


@dataclass(frozen=True, slots=True, eq=False)
class Kinds:
    """The runs of a campaign, in its order."""

    code: NDArray[np.int64]  # (n,) position in WORDS
    initial_molality: NDArray[np.float64]  # (n,) mol/kg, 0 for water

    @property
    def dilution(self) -> NDArray[np.bool_]:
        """Heats of dilution, (n,)."""
        return np.asarray(self.code == DILUTION)

    @property
    def addition(self) -> NDArray[np.bool_]:
        """Dissolutions in a solution of the same salt, (n,)."""
        return np.asarray(self.code == ADDITION)

    def counted(self, rows: NDArray[np.int64]) -> tuple[int, int, int]:
        """How many of some rows are dissolutions in water, successive additions, heats of dilution."""
        water, added, diluted = np.bincount(self.code[rows], minlength=len(WORDS)).tolist()
        return water, added, diluted

    def count(self, chosen: NDArray[np.bool_], member: NDArray[np.int64], members: int) -> NDArray[np.int64]:
        """The same for each member (its salt, say) of the chosen runs: (members, 3).

        Parameters
        ----------
        chosen : array (n,) of bool
        member : int array (n,)
        members : int
        """
        kinds = len(WORDS)
        both = kinds * member[chosen] + self.code[chosen]
        return np.bincount(both, minlength=kinds * members).reshape(members, kinds)


def kinds(campaign: Campaign) -> Kinds:
    """Sort the runs of a checked campaign; only a dilution has a final molality."""
    quantities = campaign.runs.quantities
    initial = np.nan_to_num(quantities["initial_molality"].value, nan=0.0)
    dilution = np.isfinite(quantities["final_molality"].value)
    code = np.where(dilution, DILUTION, np.where(initial > 0, ADDITION, 0))
    return Kinds(code.astype(np.int64), initial)


def counted_kinds(count: Iterable[int]) -> str:
    """The kinds that there are, with their numbers.

    Examples
    --------
    >>> counted_kinds((7, 0, 1))
    '7 dissolutions in water and 1 heat of dilution'
    >>> counted_kinds((0, 0, 0))
    'no runs'
    """
    found = [counted(n, *words) for n, words in zip(count, WORDS, strict=True) if n]
    return listed(found) if found else "no runs"
