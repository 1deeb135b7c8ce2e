"""The runs of a campaign as one linear problem: crystals and parameters, block by block of an electrolyte."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.dilution.further_terms import AWAY_LINE, STRONG_LINE
from reconcile.dilution.priors import Prior
from reconcile.dilution.scatter import Component
from reconcile.statistics import Blocks, Ledger, LinearFit, Sources, least_squares, sources_of_one_line

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

PRIOR_LINES = ("published dilution parameters", "population of dilution parameters", AWAY_LINE, STRONG_LINE)


@dataclass(frozen=True, eq=False)
class Problem:
    """y = ΔsolH° + basis·(parameters − prior mean) + sources, one row a run; the prior joins as further rows."""

    observed: Ledger  # (n,) enthalpy less limiting law, heat-capacity term and terms at the prior mean
    salt: Integers  # (n,) crystal of each row, −1: a heat of dilution
    block: Integers  # (n,) electrolyte of each row
    crystals: int
    block_of_crystal: Integers
    basis: Floats  # (n, k): the four terms of the parameters, then the further terms that are needed
    prior: Prior
    components: tuple[Component, ...]
    nuisance: sparse.csr_array  # (n, h) what the screen found, in the model while components are estimated
    has_fourth: NDArray[np.bool_]  # (B,) β⁽²⁾ is a parameter there
    has_term: NDArray[np.bool_]  # (B, k − 4) further terms
    term_lines: tuple[str, ...]  # (k − 4,) their budget lines

    @cached_property
    def solution_column(self) -> Integers:
        """Unknown's position of each block's parameters and further terms, (B, k), −1 where there is none."""
        parameters = np.ones((len(self.has_fourth), 4), bool)
        parameters[:, 3] = self.has_fourth
        exists = np.hstack([parameters, self.has_term])
        column = np.full(exists.shape, -1, dtype=np.int64)
        column[exists] = self.crystals + np.arange(int(exists.sum()))
        return column

    @cached_property
    def parameter_column(self) -> Integers:
        """The first four of them, (B, 4)."""
        return self.solution_column[:, :4]

    def take_blocks(self, chosen: NDArray[np.bool_]) -> Problem:
        """The same problem with the rows of some electrolytes only, renumbered."""
        rows = np.flatnonzero(chosen[self.block])
        new_block = np.cumsum(chosen) - 1
        kept_crystal = chosen[self.block_of_crystal]
        new_crystal = np.cumsum(kept_crystal) - 1
        p = self.prior
        prior = Prior(
            p.mean[chosen],
            p.covariance[chosen],
            p.weights[chosen],
            p.published[chosen],
            p.group[chosen],
            p.group_names,
            p.group_root,
        )
        return Problem(
            self.observed.take(rows),
            np.where(self.salt[rows] >= 0, new_crystal[self.salt[rows]], -1),
            new_block[self.block[rows]],
            int(kept_crystal.sum()),
            new_block[self.block_of_crystal[kept_crystal]],
            self.basis[rows],
            prior,
            tuple(c.take(rows) for c in self.components),
            sparse.csr_array(self.nuisance[rows]),
            self.has_fourth[chosen],
            self.has_term[chosen],
            self.term_lines,
        )

    def fit(self, sizes: Floats, precision: Floats, with_nuisance: bool = False) -> LinearFit:
        """Solve for given sizes of the variance components and a prior precision (B, 4, 4) of each block."""
        runs = self._runs(sizes, with_nuisance)
        rows, block, column = self._prior_places
        count = self.solution_column.shape[1]
        wide = np.tile(np.eye(count), (len(precision), 1, 1))  # the further terms: mean 0, sd 1, independent
        wide[:, :4, :4] = precision
        root = np.asarray(np.linalg.cholesky(wide).transpose(0, 2, 1))  # upper: precision = rootᵀ root
        entries = root[block, column]  # (rows, k)
        to = self.solution_column[block]
        exists = (to >= 0) & (entries != 0)
        prior_design = sparse.csr_array(
            (entries[exists], (np.repeat(np.arange(len(rows)), exists.sum(axis=1)), to[exists])),
            shape=(len(rows), self.unknowns),
        )
        design = sparse.csr_array(sparse.vstack([self._run_design, prior_design], format="csr"))
        observations = self._with_prior(runs, root, rows, block, column)
        means = len(observations.sources) - len(runs.sources)  # of the populations: held, as `weigh` takes them
        blocks = Blocks(np.concatenate([self.block, block]), self._block_of_unknown, means)
        return least_squares(observations, design, blocks)

    @cached_property
    def unknowns(self) -> int:
        """Crystals, parameters and further terms."""
        return self.crystals + int((self.solution_column >= 0).sum())

    @cached_property
    def _block_of_unknown(self) -> Integers:
        column = self.solution_column
        out = np.empty(self.unknowns, dtype=np.int64)
        out[: self.crystals] = self.block_of_crystal
        block = np.repeat(np.arange(len(column)), column.shape[1]).reshape(column.shape)
        out[column[column >= 0]] = block[column >= 0]
        return out

    @cached_property
    def _prior_places(self) -> tuple[Integers, Integers, Integers]:
        block, column = np.nonzero(self.solution_column >= 0)
        return np.arange(len(block)), block, column

    @cached_property
    def _run_design(self) -> sparse.csr_array:
        n = len(self.salt)
        to = self.solution_column[self.block]
        exists = to >= 0
        dissolving = np.flatnonzero(self.salt >= 0)
        rows = np.concatenate([dissolving, np.repeat(np.arange(n), exists.sum(axis=1))])
        columns = np.concatenate([self.salt[dissolving], to[exists]])
        values = np.concatenate([np.ones(len(dissolving)), self.basis[exists]])
        return sparse.csr_array((values, (rows, columns)), shape=(n, self.unknowns))

    def _runs(self, sizes: Floats, with_nuisance: bool) -> Ledger:
        runs = self.observed
        for component, size in zip(self.components, sizes, strict=True):
            if component.group is None:
                runs = runs.with_private((size * component.scale)[:, None], [component.line])
            elif size > 0:
                runs = runs.with_sources(component.loading(float(size)), component.sources)
        if with_nuisance and self.nuisance.shape[1]:
            names = tuple(f"found by the screen {i + 1}" for i in range(self.nuisance.shape[1]))
            runs = runs.with_sources(
                self.nuisance, Sources(names, ("suspected",) * len(names), ("screen",) * len(names))
            )
        return runs

    def _with_prior(self, runs: Ledger, root: Floats, rows: Integers, block: Integers, column: Integers) -> Ledger:
        """Prior rows under the runs: value 0 (mean taken off), unit variance, error of the population's mean shared."""
        count = len(rows)
        of_column = [0, 0, 0, 0] + [2 + (line == STRONG_LINE) for line in self.term_lines]
        lines = runs.lines + PRIOR_LINES
        private = np.zeros((len(runs) + count, len(lines)))
        private[: len(runs), : len(runs.lines)] = runs.private
        line = np.where(column < 4, np.where(self.prior.published[block], 0, 1), np.array(of_column)[column])
        private[len(runs) + rows, len(runs.lines) + line] = 1.0
        groups = [i for i in range(len(self.prior.group_names)) if (self.prior.group == i).any()]
        names = [
            f"mean of the {self.prior.group_names[g]} population, direction {k + 1}" for g in groups for k in range(3)
        ]
        loading = np.zeros((count, len(names)))
        for j, g in enumerate(groups):
            mine = (self.prior.group[block] == g) & (column < 4)
            loading[mine, 3 * j : 3 * j + 3] = -np.einsum(
                "rj,jk->rk", root[block[mine], column[mine], :4], self.prior.group_root[g]
            )
        below = sparse.csr_array(loading)
        both = sparse.block_diag([runs.loading, below], format="csr")
        sources = runs.sources.followed_by(sources_of_one_line(names, "mean of the population", "estimated"))
        return Ledger(np.concatenate([runs.value, np.zeros(count)]), private, lines, sparse.csr_array(both), sources)

    def population_shift(self, fit: LinearFit) -> Floats:
        """What the fit makes of the error of the populations' means, (B, 4)."""
        out = np.zeros((len(self.has_fourth), 4))
        place = {name: i for i, name in enumerate(fit.observations.sources.name)}
        value = fit.source_values()
        for g, kind in enumerate(self.prior.group_names):
            mine = self.prior.group == g
            if mine.any():
                found = np.array([value[place[f"mean of the {kind} population, direction {k + 1}"]] for k in range(3)])
                out[mine] = self.prior.group_root[g] @ found
        return out
