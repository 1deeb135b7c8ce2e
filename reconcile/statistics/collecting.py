"""Collecting the sources that runs share, group by group, into loadings."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.statistics.ledger import Sources

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]


class Collector:
    """Sources of several groups (lots, calorimeters, elements …); a run has at most one source of each group.

    Parameters
    ----------
    rows : int
        Runs.
    ledgers : int
        How many ledgers of the same runs depend on the sources (enthalpy and molality: 2).
    """

    def __init__(self, rows: int, ledgers: int = 1) -> None:
        self._rows = rows
        self._at: list[tuple[Integers, Integers, tuple[Floats, ...]]] = []
        self._ledgers = ledgers
        self._names: list[str] = []
        self._lines: list[str] = []
        self._kinds: list[str] = []

    def group(
        self, code: Integers, u: Floats, names: Sequence[str], line: str, *sensitivity: Floats, kind: str = "stated"
    ) -> None:
        """Add one source for each member that has an uncertainty and a run.

        Parameters
        ----------
        code : int array (n,)
            Member of each run, −1 for none.
        u : array (members,)
            Standard uncertainty of each member; 0 makes no source.
        names : sequence of str (members,)
        line : str
            Budget line.
        *sensitivity : arrays (n,), one for each ledger
            Change of the run's value per unit of the member.
        """
        members = len(u)
        used = np.flatnonzero((u > 0) & (np.bincount(code[code >= 0], minlength=members)[:members] > 0))
        if not used.size:
            return
        column = np.full(members + 1, -1)  # the last place answers for code −1
        column[used] = len(self._names) + np.arange(used.size)
        rows = np.flatnonzero(column[code] >= 0)
        size = u[code[rows]]
        self._at.append((rows, column[code[rows]], tuple(s[rows] * size for s in sensitivity)))
        self._names += [names[i] for i in used.tolist()]
        self._lines += [line] * used.size
        self._kinds += [kind] * used.size

    def finish(self) -> tuple[Sources, list[sparse.csr_array]]:
        """The sources, and each ledger's loadings on them, (n, K)."""
        sources = Sources(tuple(self._names), tuple(self._kinds), tuple(self._lines))
        shape = (self._rows, len(sources))
        if not self._at:
            return sources, [sparse.csr_array(shape) for _ in range(self._ledgers)]
        rows = np.concatenate([r for r, _, _ in self._at])
        columns = np.concatenate([c for _, c, _ in self._at])
        values = [np.concatenate([v[i] for _, _, v in self._at]) for i in range(self._ledgers)]
        return sources, [sparse.csr_array((v, (rows, columns)), shape=shape) for v in values]


def by_member(effect: Floats, code: NDArray[np.int64], members: int) -> sparse.csr_array:
    """Each run's effect in the column of its calorimeter, lot …; sparse (n, members).

    Examples
    --------
    >>> by_member(np.array([1.0, 2.0, 3.0]), np.array([0, -1, 1]), 2).toarray()
    array([[1., 0.],
           [0., 0.],
           [0., 3.]])
    """
    named = np.flatnonzero(code >= 0)
    return sparse.csr_array((effect[named], (named, code[named])), shape=(len(effect), members))
