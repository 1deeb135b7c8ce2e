"""Values with their named error sources: the Ledger."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

KINDS = ("stated", "estimated", "suspected", "adjusted")


@dataclass(frozen=True, slots=True, eq=False)
class Sources:
    """Named, independent error sources, each with mean 0 and standard deviation 1.

    The size of a source stands in the loadings of the ledgers that carry it.
    """

    name: tuple[str, ...] = ()  # (K,), unique: two ledgers share a source by its name
    kind: tuple[str, ...] = ()  # (K,), one of KINDS
    budget_line: tuple[str, ...] = ()  # (K,), the line under which a budget prints it
    degrees_of_freedom: Floats | None = None  # (K,), of the stated size; None: all infinite

    def __post_init__(self) -> None:
        """Fill in infinite degrees of freedom; refuse columns of unequal length."""
        count = len(self.name)
        if self.degrees_of_freedom is None:
            object.__setattr__(self, "degrees_of_freedom", np.full(count, np.inf))
        if not len(self.kind) == len(self.budget_line) == len(self.degrees_of_freedom) == count:  # type: ignore[arg-type]
            raise ValueError(f"{count} names, {len(self.kind)} kinds, {len(self.budget_line)} budget lines")

    def __len__(self) -> int:
        """Sources."""
        return len(self.name)

    def take(self, positions: Iterable[int]) -> Sources:
        """The sources at these positions, in this order."""
        at = [int(i) for i in positions]
        assert self.degrees_of_freedom is not None
        return Sources(
            tuple(self.name[i] for i in at),
            tuple(self.kind[i] for i in at),
            tuple(self.budget_line[i] for i in at),
            self.degrees_of_freedom[at],
        )

    def followed_by(self, other: Sources) -> Sources:
        """These sources, then the others (names are not compared)."""
        assert self.degrees_of_freedom is not None
        assert other.degrees_of_freedom is not None
        return Sources(
            self.name + other.name,
            self.kind + other.kind,
            self.budget_line + other.budget_line,
            np.concatenate([self.degrees_of_freedom, other.degrees_of_freedom]),
        )


def sources_of_one_line(names: Sequence[str], line: str, kind: str = "stated") -> Sources:
    """Sources that a budget adds up under one line, such as the lots' water."""
    return Sources(tuple(names), (kind,) * len(names), (line,) * len(names))


@dataclass(frozen=True, slots=True, eq=False)
class Ledger:
    """Values and how each depends on independent errors: covariance = D + F Fᵀ.

    value_i = estimate_i + Σ_l private_il ε_il + Σ_k loading_ik ε_k, with every ε independent, mean 0, sd 1. The private
    errors belong to one entry and one line only. Their signs matter where two ledgers describe the same runs (enthalpy
    and molality share the error of a weighing), nowhere else.
    """

    value: Floats  # (n,)
    private: Floats  # (n, L)
    lines: tuple[str, ...]  # (L,), budget lines of the private errors
    loading: sparse.csr_array  # (n, K)
    sources: Sources

    def __post_init__(self) -> None:
        """Refuse shapes that do not fit together."""
        rows = len(self.value)
        if self.private.shape != (rows, len(self.lines)) or self.loading.shape != (rows, len(self.sources)):
            raise ValueError(
                f"{rows} values, private {self.private.shape} for {len(self.lines)} lines, "
                f"loading {self.loading.shape} for {len(self.sources)} sources"
            )

    def __len__(self) -> int:
        """Entries."""
        return len(self.value)

    @property
    def private_variance(self) -> Floats:
        """D: the variance that belongs to each entry alone, (n,)."""
        return np.asarray(np.einsum("il,il->i", self.private, self.private))

    @property
    def shared_variance(self) -> Floats:
        """The diagonal of F Fᵀ, (n,)."""
        return np.asarray(self.loading.power(2).sum(axis=1)).ravel()

    @property
    def u(self) -> Floats:
        """Standard uncertainty of each entry, (n,)."""
        return np.asarray(np.sqrt(self.private_variance + self.shared_variance))

    def covariance(self, rows: Integers | None = None) -> Floats:
        """Dense covariance of a few entries (all, where none are named)."""
        at = np.arange(len(self)) if rows is None else np.asarray(rows)
        shared = self.loading[at]
        return np.asarray((shared @ shared.T).todense()) + np.diag(self.private_variance[at])

    def take(self, rows: Integers) -> Ledger:
        """Some of the entries, with the sources that they know."""
        return Ledger(
            self.value[rows], self.private[rows], self.lines, sparse.csr_array(self.loading[rows]), self.sources
        )

    def map(self, matrix: sparse.sparray) -> Ledger:
        """The ledger of matrix @ value, exact: a private error that reaches several results becomes a shared source.

        Parameters
        ----------
        matrix : sparse (m, n)
            The linear map.

        Returns
        -------
        Ledger of m entries. Private lines add in quadrature; a source made of a private error is called by its line and
        its entry's position.
        """
        a = sparse.csc_array(matrix)
        reach = np.diff(a.indptr)
        alone = np.flatnonzero(reach == 1)
        several = np.flatnonzero(reach > 1)
        squares = sparse.csr_array(a[:, alone]).power(2)
        private = np.sqrt(np.asarray(squares @ self.private[alone] ** 2))
        columns, names, lines = [sparse.csr_array(a @ self.loading)], [], []
        for position, line in enumerate(self.lines):
            size = self.private[several, position]
            used = several[size != 0]
            if used.size:
                columns.append(sparse.csr_array(a[:, used] @ sparse.diags_array(self.private[used, position])))
                names += [f"{line}, entry {i}" for i in used.tolist()]
                lines += [line] * used.size
        extra = Sources(tuple(names), ("stated",) * len(names), tuple(lines))
        loading = sparse.csr_array(sparse.hstack(columns, format="csr"))
        return Ledger(np.asarray(a @ self.value), private, self.lines, loading, self.sources.followed_by(extra))

    def with_sources(self, loading: sparse.sparray, sources: Sources) -> Ledger:
        """The same entries that also depend on further sources, (n, K′) loadings."""
        both = sparse.csr_array(sparse.hstack([self.loading, loading], format="csr"))
        return Ledger(self.value, self.private, self.lines, both, self.sources.followed_by(sources))

    def with_private(self, columns: Floats, lines: Sequence[str]) -> Ledger:
        """The same entries with further private errors, (n, L′)."""
        both = np.column_stack([self.private, columns]) if len(lines) else self.private
        return Ledger(self.value, both, self.lines + tuple(lines), self.loading, self.sources)

    def budgets(self) -> tuple[Floats, tuple[str, ...]]:
        """Every entry's uncertainty by budget line.

        Returns
        -------
        contribution : array (n, lines)
            In the unit of the values; the root-sum-square of a row is that entry's u.
        lines : tuple of str
            In order of first appearance: private lines, then those of the shared sources.
        """
        names = tuple(dict.fromkeys(self.lines + self.sources.budget_line))
        place = {name: i for i, name in enumerate(names)}
        square = np.zeros((len(self), len(names)))
        np.add.at(square.T, [place[line] for line in self.lines], (self.private**2).T)
        to_line = sparse.csr_array(
            (np.ones(len(self.sources)), (np.arange(len(self.sources)), [place[b] for b in self.sources.budget_line])),
            shape=(len(self.sources), len(names)),
        )
        square += (self.loading.power(2) @ to_line).toarray()
        return np.sqrt(square), names

    def budget(self, entry: int) -> dict[str, float]:
        """One entry's uncertainty by budget line, largest first."""
        contribution, names = self.take(np.array([entry])).budgets()
        order = np.argsort(-contribution[0], kind="stable")
        return {names[i]: float(contribution[0, i]) for i in order if contribution[0, i] > 0}


def stated(value: Floats, u: Floats, line: str) -> Ledger:
    """A ledger of values that have nothing in common: each with its own u under one budget line."""
    nothing = sparse.csr_array((len(value), 0))
    return Ledger(np.asarray(value, float), np.asarray(u, float)[:, None], (line,), nothing, Sources())


def stack(ledgers: Sequence[Ledger]) -> Ledger:
    """Several ledgers under one another; sources of the same name are the same source."""
    position: dict[str, int] = {}
    merged: list[tuple[Sources, int]] = []
    for ledger in ledgers:
        for i, name in enumerate(ledger.sources.name):
            if name not in position:
                position[name] = len(position)
                merged.append((ledger.sources, i))
    sources = Sources(
        tuple(s.name[i] for s, i in merged),
        tuple(s.kind[i] for s, i in merged),
        tuple(s.budget_line[i] for s, i in merged),
        np.array([s.degrees_of_freedom[i] for s, i in merged], dtype=np.float64),  # type: ignore[index]
    )
    lines = tuple(dict.fromkeys(line for ledger in ledgers for line in ledger.lines))
    blocks, privates = [], []
    for ledger in ledgers:
        to = [position[name] for name in ledger.sources.name]
        spread = sparse.csr_array((np.ones(len(to)), (np.arange(len(to)), to)), shape=(len(to), len(sources)))
        blocks.append(ledger.loading @ spread)
        private = np.zeros((len(ledger), len(lines)))
        for column, line in enumerate(ledger.lines):
            private[:, lines.index(line)] = np.hypot(private[:, lines.index(line)], ledger.private[:, column])
        privates.append(private)
    return Ledger(
        np.concatenate([ledger.value for ledger in ledgers]),
        np.vstack(privates),
        lines,
        sparse.csr_array(sparse.vstack(blocks, format="csr")),
        sources,
    )
