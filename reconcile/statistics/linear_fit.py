"""Least squares with named sources: a bordered block-diagonal system, solved without any N × N matrix."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import linalg, sparse

from reconcile.statistics.ledger import Ledger
from reconcile.statistics.matrices import SMALL, as_dense, beside, factored, scaled_rows

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

NARROW = 16  # a source that touches at most this many rows is solved for sparsely where there are no blocks
CHUNK = 4_000  # rows or right-hand sides held densely at once


@dataclass(frozen=True, slots=True, eq=False)
class Blocks:
    """Which observations and which unknowns belong together: one block is one electrolyte."""

    of_row: Integers  # (n,)
    of_unknown: Integers  # (p,)
    border: int = 0  # so many of the last sources count as wide, even where they touch one block only


@dataclass(frozen=True, slots=True, eq=False)
class Response:
    """How a fit would take up hypotheses, columns of loadings on its observations, each of unit size."""

    score: Floats  # (h,)
    information: Floats  # (h, h), or (h,) where only the diagonal was asked for
    shift: Floats  # (p, h): what one unit does to the estimates if it is left in the data


class LinearFit:
    """A solved least-squares problem y = X θ + F ε + e; see `least_squares`.

    With D the private variances and A = XᵀD⁻¹X (narrow sources taken in with X, a 1 on their diagonal), B = XᵀD⁻¹F and
    S = 1 + FᵀD⁻¹F − BᵀA⁻¹B, all that is asked of the fit comes from A (sparse, factored once) and S (small, dense).
    """

    def __init__(self, observations: Ledger, design: sparse.csr_array, blocks: Blocks | None) -> None:
        self.observations = observations
        self.blocks = blocks
        self.unknowns = design.shape[1]
        self._design = design
        variance = observations.private_variance
        if not (variance > 0).all():
            worst = int(np.flatnonzero(~(variance > 0))[0])
            raise ValueError(f"observation {worst} has no private variance; expected more than 0")
        self.weight = 1 / variance
        self.narrow, self.wide = _narrow_and_wide(observations, blocks)
        loading = sparse.csc_array(observations.loading)
        narrow, outer = sparse.csr_array(loading[:, self.narrow]), sparse.csr_array(loading[:, self.wide])
        dense = len(observations) * (self.unknowns + loading.shape[1]) <= SMALL
        self.inner = beside(design, narrow, dense)
        self._outer = outer.toarray() if dense else outer
        prior = np.concatenate([np.zeros(self.unknowns), np.ones(len(self.narrow))])
        self._factor = factored(self.inner.T @ scaled_rows(self.inner, self.weight), prior)
        outer_weighted = scaled_rows(self._outer, self.weight)
        border = as_dense(self.inner.T @ outer_weighted)
        self._border_solved = self._factor.solve(border) if border.shape[1] else border
        corner = as_dense(self._outer.T @ outer_weighted) + np.eye(len(self.wide)) - border.T @ self._border_solved
        self._corner = linalg.cho_factor((corner + corner.T) / 2)
        inner, outer = self._solve(self._project(observations.value))
        self.value: Floats = inner[: self.unknowns]
        self._source_inner, self._source_outer = inner[self.unknowns :], outer
        #: y − Xθ̂ − Fε̂, what neither unknowns nor sources explain, (n,)
        self.residual: Floats = observations.value - self.inner @ inner - self._outer @ outer

    def _project(self, columns: Floats | sparse.csr_array) -> tuple[Floats, Floats]:
        if isinstance(columns, np.ndarray):
            weighted = columns * (self.weight if columns.ndim == 1 else self.weight[:, None])
            return np.asarray(self.inner.T @ weighted), np.asarray(self._outer.T @ weighted)
        scaled = scaled_rows(columns, self.weight)
        return as_dense(self.inner.T @ scaled), as_dense(self._outer.T @ scaled)

    def _solve(self, right: tuple[Floats, Floats]) -> tuple[Floats, Floats]:
        inner, outer = right
        if not len(self.wide):
            return self._factor.solve(inner), outer
        outer = linalg.cho_solve(self._corner, outer - self._border_solved.T @ inner)
        return self._factor.solve(inner) - self._border_solved @ outer, outer

    @cached_property
    def chi_square(self) -> float:
        """(y − Xθ̂)ᵀV⁻¹(y − Xθ̂): misfit left, with what the sources had to take up."""
        sources = self._source_inner @ self._source_inner + self._source_outer @ self._source_outer
        return float(self.weight @ self.residual**2 + sources)

    @property
    def degrees_of_freedom(self) -> int:
        """Observations less unknowns."""
        return int(len(self.observations) - self.unknowns)

    @cached_property
    def log_restricted_likelihood(self) -> float:
        """REML log-likelihood of the variances used, without its constant (Patterson & Thompson 1971, from memory)."""
        log_a = self._factor.log_determinant
        log_s = 2 * float(np.log(np.diag(self._corner[0])).sum())
        return -0.5 * (log_a + log_s - float(np.log(self.weight).sum()) + self.chi_square)

    def narrow_sources(self, names: Sequence[str]) -> tuple[Floats, Floats]:
        """Predicted values and variances of sources solved for inside their block; 0 and 1 for all others.

        The wide sources are held.
        """
        place = {self.observations.sources.name[k]: self.unknowns + j for j, k in enumerate(self.narrow.tolist())}
        column = np.array([place.get(name, -1) for name in names], dtype=np.int64)
        value, variance = np.zeros(len(names)), np.ones(len(names))
        here = np.flatnonzero(column >= 0)
        if here.size:
            value[here] = self._source_inner[column[here] - self.unknowns]
            variance[here] = np.clip(self.block_covariance(column[here], column[here][:, None])[:, 0], 0, 1)
        return value, variance

    def source_values(self) -> Floats:
        """Predicted values of all sources, (K,), in standard deviations."""
        out = np.zeros(len(self.observations.sources))
        out[self.narrow], out[self.wide] = self._source_inner, self._source_outer
        return out

    def respond(self, loadings: sparse.csr_array, diagonal: bool = False) -> Response:
        """Score, information and shift of hypotheses that would add loadings @ size to the observations.

        Parameters
        ----------
        loadings : sparse (n, h)
            One column a hypothesis, in the observations' unit per unit of its size.
        diagonal : bool
            Only the diagonal of the information, for many hypotheses at once.

        Returns
        -------
        Response; size = score / information with u = information^−½, statistic score / √information (a score test).
        """
        inner_right, outer_right = self._project(loadings)
        inner, outer = self._solve((inner_right, outer_right))
        weighted = scaled_rows(loadings, self.weight)
        score = np.asarray(weighted.T @ self.residual)
        if diagonal:
            information = (
                np.asarray(loadings.multiply(weighted).sum(axis=0)).ravel()
                - np.einsum("qh,qh->h", inner_right, inner)
                - np.einsum("kh,kh->h", outer_right, outer)
            )
        else:
            information = (weighted.T @ loadings).toarray() - inner_right.T @ inner - outer_right.T @ outer
        return Response(score, information, inner[: self.unknowns])

    def respond_by_block(self, loading: Floats) -> tuple[Floats, Floats]:
        """Score and information of one hypothesis a block, (blocks,) each: what `respond` gives for the loading cut up.

        Parameters
        ----------
        loading : array (n,)
            Each block's own hypothesis, in the observations' unit per unit of its size.
        """
        assert self.blocks is not None
        count = int(self.blocks.of_unknown.max()) + 1
        weighted = loading * self.weight
        solved = self._factor.solve(self.inner.T @ weighted)  # A is block-diagonal: the blocks do not mix
        inside = weighted * (loading - self.inner @ solved)
        score = np.zeros(count)
        information = np.zeros(count)
        np.add.at(score, self.blocks.of_row, weighted * self.residual)
        np.add.at(information, self.blocks.of_row, inside)
        if len(self.wide):
            border = np.zeros((count, len(self.wide)))
            for at in self._chunks():
                np.add.at(border, self.blocks.of_row[at], self._beyond_inner(at) * weighted[at, None])
            information -= np.einsum("bk,kb->b", border, linalg.cho_solve(self._corner, border.T))
        return score, np.maximum(information, 0.0)

    def unexplained(self, loadings: sparse.csr_array) -> Floats:
        """P L, (n, h): weighted loadings less what unknowns and sources would take up of them; few columns only."""
        inner, outer = self._solve(self._project(loadings))
        left = as_dense(loadings) - self.inner @ inner - self._outer @ outer
        return np.asarray(left * self.weight[:, None])

    def single_observations(self) -> tuple[Floats, Floats]:
        """Score and information of an error in each observation alone, (n,) each: the diagonal of `respond`."""
        return self._single_observations

    @cached_property
    def _single_observations(self) -> tuple[Floats, Floats]:
        information = self.weight - self.weight**2 * self._leverage
        return self.weight * self.residual, np.maximum(information, 0.0)

    @cached_property
    def _leverage(self) -> Floats:
        """Diagonal of [X F] C [X F]ᵀ, (n,), with C the inverse of the whole system."""
        leverage = self._inner_leverage.copy()
        if len(self.wide):
            root = linalg.solve_triangular(self._corner[0], np.eye(len(self.wide)), trans="T", lower=self._corner[1])
            for at in self._chunks():
                leverage[at] += ((self._beyond_inner(at) @ root.T) ** 2).sum(axis=1)
        return leverage

    def _chunks(self) -> list[slice]:
        return [slice(start, start + CHUNK) for start in range(0, len(self.observations), CHUNK)]

    def _beyond_inner(self, at: slice) -> Floats:
        """Loadings on the wide sources less what the inner system takes of them, F − X A⁻¹B, of some rows."""
        return np.asarray(as_dense(self._outer[at]) - self.inner[at] @ self._border_solved)

    @cached_property
    def _inner_leverage(self) -> Floats:
        """x_rᵀA⁻¹x_r of every row; block by block where there are blocks."""
        rows = len(self.observations)
        leverage = np.zeros(rows)
        if self.blocks is None:
            for at in self._chunks():
                some = as_dense(self.inner[at])
                leverage[at] = np.einsum("rq,qr->r", some, self._factor.solve(some.T))
            return leverage
        for chosen, solved in self.coloured(np.arange(self.inner.shape[1])):
            picked = np.zeros(self.inner.shape[1])
            picked[chosen] = 1.0
            leverage += (self.inner @ picked) * (self.inner @ solved)
        return leverage

    @cached_property
    def block_of_column(self) -> Integers:
        """Block of every unknown and narrow source, (q,)."""
        assert self.blocks is not None
        first = _first_row(sparse.csc_array(self.observations.loading)[:, self.narrow])
        return np.concatenate([self.blocks.of_unknown, self.blocks.of_row[first]])

    def coloured(self, columns: Integers) -> list[tuple[Integers, Floats]]:
        """Columns of A⁻¹, one of each block at a time: A is block-diagonal, so they do not disturb each other."""
        block = self.block_of_column[columns]
        order = np.argsort(block, kind="stable")
        starts = np.r_[0, np.flatnonzero(np.diff(block[order])) + 1]
        rank = np.arange(len(order)) - np.repeat(starts, np.diff(np.r_[starts, len(order)]))
        out = []
        for colour in range(int(rank.max()) + 1 if len(rank) else 0):
            chosen = columns[order[rank == colour]]
            unit = np.zeros(self.inner.shape[1])
            unit[chosen] = 1.0
            out.append((chosen, self._factor.solve(unit)))
        return out

    def block_covariance(self, rows: Integers, columns: Integers) -> Floats:
        """Covariance *within its block* of unknowns, pair by pair, the wide sources held: A⁻¹[rows, columns].

        Parameters
        ----------
        rows, columns : int arrays (s,), (s, t)
            For each of s unknowns, t unknowns of the same block (−1: none).

        Returns
        -------
        array (s, t), 0 where the column is −1.
        """
        out = np.zeros(columns.shape)
        for chosen, solved in self.coloured(np.unique(rows)):
            mine = np.isin(rows, chosen)
            out[mine] = np.where(columns[mine] >= 0, solved[np.maximum(columns[mine], 0)], 0.0)
        return out

    def shared_variance(self, unknowns: Integers) -> Floats:
        """What the wide sources, as adjusted, add to the variance of single estimates: diag(A⁻¹B S⁻¹BᵀA⁻¹), (s,)."""
        half = self._border_solved[unknowns]
        return np.einsum("sk,ks->s", half, linalg.cho_solve(self._corner, half.T)) if half.size else np.zeros(len(half))

    def variance(self, combinations: sparse.sparray) -> Floats:
        """Variance of linear combinations of the estimates, all sources included: diag(L Cov Lᵀ) of L (s, p)."""
        wanted = sparse.csr_array(combinations)
        out = np.zeros(wanted.shape[0])
        for start in range(0, len(out), CHUNK):
            some = wanted[start : start + CHUNK].toarray().T
            right = np.zeros((self.inner.shape[1], some.shape[1]))
            right[: self.unknowns] = some
            inner, _ = self._solve((right, np.zeros((len(self.wide), some.shape[1]))))
            out[start : start + CHUNK] = np.einsum("ps,ps->s", some, inner[: self.unknowns])
        return out

    def redundancy(self) -> Floats:
        """Redundancy number of each observation, diag(V P), (n,): what of its own error stays in its residual.

        The sum is the degrees of freedom.
        """
        narrow_loading = sparse.csr_array(sparse.csc_array(self.observations.loading)[:, self.narrow])
        unit = np.zeros((self.inner.shape[1], len(self.narrow)))
        unit[self.unknowns + np.arange(len(self.narrow)), np.arange(len(self.narrow))] = 1.0
        of_narrow = self._factor.solve(unit) if len(self.narrow) else unit
        through = np.zeros(len(self.observations))  # e_iᵀ F Fᵀ P e_i over the weight: what the sources take of an error
        for at in self._chunks():
            outer = linalg.cho_solve(self._corner, self._beyond_inner(at).T) if len(self.wide) else np.zeros((0, 1))
            if len(self.wide):
                through[at] += np.einsum("rk,kr->r", as_dense(self._outer[at]), outer)
            if len(self.narrow):
                taken = self.inner[at] @ of_narrow
                if len(self.wide):
                    taken = taken - (self._border_solved[self.unknowns :] @ outer).T
                through[at] += np.einsum("rk,rk->r", narrow_loading[at].toarray(), taken)
        return 1 - self.weight * (self._leverage - through)

    def fitted_variance(self) -> Floats:
        """Variance of the observations' fitted values Xθ̂, all sources included, (n,)."""
        if len(self.narrow):
            return self.variance(self._design)
        out = self._inner_leverage.copy()  # without narrow sources the inner system is the design's own
        if len(self.wide):
            for at in self._chunks():
                half = self.inner[at] @ self._border_solved
                out[at] += np.einsum("rk,kr->r", half, linalg.cho_solve(self._corner, half.T))
        return out

    def wide_loadings(self, unknowns: Integers) -> tuple[Floats, Floats]:
        """How chosen estimates depend on the wide sources.

        Returns
        -------
        named : array (s, wide)
            A⁻¹B S⁻¹, the loadings on the wide sources themselves.
        adjusted : array (s, directions)
            A⁻¹B (S⁻¹ − S⁻²)^½, what their adjustment carries over from all observations.
        """
        half = self._border_solved[unknowns]
        if not len(self.wide):
            return half, half
        return linalg.cho_solve(self._corner, half.T).T, half @ self._adjusted_root()

    def wide_share(self, unknown: Integers, rows: int) -> Floats:
        """Part of (C [X F]ᵀ)_{u, r} that runs through the wide sources, for one unknown u of each row r."""
        out = np.zeros(rows)
        if len(self.wide):
            for at in self._chunks():
                if at.start < rows:
                    outer = linalg.cho_solve(self._corner, self._beyond_inner(at).T).T
                    some = slice(at.start, min(at.stop, rows))
                    out[some] = np.einsum(
                        "rk,rk->r", outer[: some.stop - some.start], self._border_solved[unknown[some]]
                    )
        return out

    def _adjusted_root(self) -> Floats:
        """(S⁻¹ − S⁻²)^½ as columns, those of no size left out."""
        inverse = linalg.cho_solve(self._corner, np.eye(len(self.wide)))
        size, direction = np.linalg.eigh((inverse + inverse.T) / 2)
        left = np.clip(size - size**2, 0.0, None)
        keep = left > 1e-12
        return np.asarray(direction[:, keep] * np.sqrt(left[keep]))


def least_squares(observations: Ledger, design: sparse.csr_array, blocks: Blocks | None = None) -> LinearFit:
    """Generalised least squares of observations with covariance D + F Fᵀ on a sparse design.

    Parameters
    ----------
    observations : Ledger of n values
        Prior observations of unknowns are observations like any other.
    design : sparse (n, p)
        Of full column rank.
    blocks : Blocks, optional
        Where the unknowns fall into blocks that no observation joins. A source of one block alone is solved for
        inside it; without blocks a source of a few rows is.

    Returns
    -------
    LinearFit

    Raises
    ------
    ValueError
        If an observation has no private variance, or an unknown is seen by no observation.

    References
    ----------
    Henderson's mixed-model equations, C. R. Henderson, Biometrics 31 (1975) 423 (from memory); equal to GLS with
    V = D + F Fᵀ.
    """
    seen = np.diff(sparse.csc_array(design).indptr)
    if (seen == 0).any():
        raise ValueError(f"unknown {int(np.flatnonzero(seen == 0)[0])} is in no observation")
    return LinearFit(observations, sparse.csr_array(design), blocks)


def _first_row(matrix: sparse.csc_array) -> Integers:
    """First row that each column touches; 0 for an empty column."""
    start = np.minimum(matrix.indptr[:-1], max(matrix.nnz - 1, 0))
    return matrix.indices[start].astype(np.int64) if matrix.nnz else np.zeros(matrix.shape[1], np.int64)


def _narrow_and_wide(observations: Ledger, blocks: Blocks | None) -> tuple[Integers, Integers]:
    """Positions of the sources that are solved for sparsely, and of those in the dense corner."""
    loading = sparse.csc_array(observations.loading)
    loading.eliminate_zeros()
    touched = np.diff(loading.indptr)
    if blocks is None:
        narrow = touched <= NARROW
    else:
        owner = blocks.of_row[loading.indices]
        edge = loading.indptr[:-1][touched > 0]
        narrow = np.zeros(len(touched), bool)
        if edge.size:
            narrow[touched > 0] = np.minimum.reduceat(owner, edge) == np.maximum.reduceat(owner, edge)
        narrow[len(touched) - blocks.border :] = False
    narrow &= touched > 0
    return np.flatnonzero(narrow), np.flatnonzero(~narrow & (touched > 0))
