"""What scatters: repeatability, scatter beyond the statement, batches: the variance components of a campaign."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.statistics import Sources

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]

DISTINCT = 3.0  # so far must the two parts of a repeatability spread before both are asked for


@dataclass(frozen=True, slots=True, eq=False)
class Component:
    """A variance component: size × scale_i for each run alone, or for each group of runs together."""

    name: str
    line: str
    unit: str
    scale: Floats  # (n,), 0 where a run has none of it
    group: Integers | None = None  # (n,), −1 where a run is in no group

    def take(self, rows: Integers) -> Component:
        """The component of some of the runs."""
        return Component(
            self.name, self.line, self.unit, self.scale[rows], None if self.group is None else self.group[rows]
        )

    @property
    def _members(self) -> tuple[Integers, Integers, Integers]:
        assert self.group is not None
        rows = np.flatnonzero((self.group >= 0) & (self.scale > 0))
        labels, code = np.unique(self.group[rows], return_inverse=True)
        return rows, labels, code

    def loading(self, size: float) -> sparse.csr_array:
        """Loadings of the runs on their groups' sources."""
        rows, labels, code = self._members
        return sparse.csr_array((size * self.scale[rows], (rows, code)), shape=(len(self.scale), len(labels)))

    @property
    def sources(self) -> Sources:
        """One source a group."""
        labels = self._members[1]
        return Sources(
            tuple(f"{self.name} {i}" for i in labels.tolist()), ("estimated",) * len(labels), (self.line,) * len(labels)
        )


def components_of(
    enthalpy: Floats,
    amount: Floats,
    stated: Floats,
    unstated: Booleans,
    salt: Integers,
    batch: Integers,
    between: Booleans,
) -> tuple[Component, ...]:
    """The components that a campaign's runs ask for.

    Parameters
    ----------
    enthalpy : array (n,), kJ/mol
    amount : array (n,), mol; NaN where a row has no mass
    stated : array (n,), kJ/mol
        Stated private standard uncertainty of each run.
    unstated : array (n,) of bool
        Nothing is stated of the run's heat or enthalpy.
    salt, batch : int arrays (n,)
        Codes; a batch of −1 is none.
    between : array (n,) of bool
        Whether scatter between batches is asked for.

    Returns
    -------
    tuple of Component. Runs with nothing stated: a constant part (J where amounts are known, else kJ/mol) and, where
    the
    runs can tell it from that, a part proportional to the enthalpy. Runs with a statement: scatter beyond it, as a
    multiple of it. Between batches: one effect a batch and salt, on the scale of the runs' own scatter.
    """
    with_amount = unstated & np.isfinite(amount)
    per_joule = np.where(with_amount, 1e-3 / np.where(np.isfinite(amount), amount, 1.0), 0.0)
    plain = np.where(unstated & ~with_amount, 1.0, 0.0)
    line = "repeatability"
    out = []
    if with_amount.any():
        out.append(Component("repeatability, constant heat", line, "J", per_joule))
    if plain.any():
        out.append(Component("repeatability, constant", line, "kJ/mol", plain))
    if unstated.any():
        constant = (per_joule + plain)[unstated]
        if _apart(np.abs(enthalpy[unstated]) / constant):
            out.append(Component("repeatability, proportional", line, "1", np.where(unstated, np.abs(enthalpy), 0.0)))
    if (~unstated).any():
        line = "scatter beyond the statement"
        beyond = np.where(unstated, 0.0, stated)
        out.append(Component("scatter beyond the statement", line, "1", beyond))
        constant = np.where(
            unstated, 0.0, np.where(np.isfinite(amount), 1e-3 / np.where(np.isfinite(amount), amount, 1.0), 1.0)
        )
        joule = np.isfinite(amount) | unstated
        if joule.all() and _apart(stated[~unstated] / constant[~unstated]):
            out.append(Component("scatter beyond the statement, constant heat", line, "J", constant))
    group = _groups(salt, np.where(between, batch, -1))
    if group is not None:
        scale = np.where(unstated, per_joule + plain, stated)
        out.append(Component("between batches", "between batches", "of the runs' own scale", scale, group))
    return tuple(out)


def _apart(ratio: Floats) -> bool:
    """Whether two parts of a scatter differ enough over the runs to be told apart."""
    return len(ratio) > 5 and bool(np.quantile(ratio, 0.9) > DISTINCT * max(float(np.quantile(ratio, 0.1)), 1e-300))


def _groups(salt: Integers, batch: Integers) -> Integers | None:
    """Code of (salt, batch); None unless some batch holds several runs of a salt and that salt has several batches."""
    rows = np.flatnonzero(batch >= 0)
    if not rows.size:
        return None
    pair, code = np.unique(np.column_stack([salt[rows], batch[rows]]), axis=0, return_inverse=True)
    code = code.ravel()
    runs = np.bincount(code)
    batches = np.bincount(pair[:, 0])
    if not ((runs > 1) & (batches[pair[:, 0]] > 1)).any():
        return None
    out = np.full(len(salt), -1, dtype=np.int64)
    out[rows] = code
    return out
