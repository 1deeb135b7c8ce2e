"""Runs to infinite dilution: all salts together, each with its interval."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.dilution.mixture import Components, solution_estimate, weigh
from reconcile.dilution.problem import Problem
from reconcile.dilution.screen import scatter_freedom, screened
from reconcile.statistics import Ledger, LinearFit, estimate
from reconcile.statistics.components import likelihood_grid, restricted_maximum
from reconcile.statistics.mixtures import freedom_of_factor, mixture_quantile

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

SWEEPS = 2  # of the prior's weights, then they are frozen (design, 3)
LEVEL = 0.95
MANY = 300.0  # redundant runs above which the components' own uncertainty does not matter
ENOUGH = 4_000  # runs, in whole electrolytes, from which components are estimated in a large campaign
WIDTH = "width of the population"
# What is known of a scatter before the runs, for the few that cannot say it themselves (our judgement; common practice)
TYPICAL = 0.005  # of the enthalpy: repeatability of a solution calorimeter, within a factor of e, one sd
BEYOND = 1.0  # of the stated uncertainty: scale of what lies beyond it, Student's t with 4 degrees of freedom
BETWEEN = 2.0  # of the typical repeatability: scale of the scatter between batches, the same


@dataclass(frozen=True, slots=True, eq=False)
class Extrapolation:
    """Crystals at infinite dilution, and the fit behind them."""

    problem: Problem
    fit: LinearFit  # observations: the runs, then the prior's rows
    parts: Components
    sizes: Floats  # of the variance components
    freedom: float  # behind the estimated scatter
    alone: tuple[int, ...]  # rows that the screen found to stand alone
    crystals: Ledger  # ΔsolH° of the crystals, kJ/mol
    interval: Floats  # (C, 2), kJ/mol
    coverage_factor: Floats  # (C,)
    degrees_of_freedom: Floats  # (C,)
    solution: Floats  # (B, k), scaled parameters and further terms
    moved: Floats  # (B, k), the same less the prior's mean
    solution_covariance: Floats  # (B, k, k)
    with_solution: Floats  # (C, k) covariance of each crystal with them, within the electrolyte
    prior_share: Floats  # (C,)
    prior_conflict_p: Floats  # (B,)

    @property
    def half_width(self) -> Floats:
        """Half of the 95 % interval, (C,): the expanded uncertainty."""
        return (self.interval[:, 1] - self.interval[:, 0]) / 2

    def pad(self, loadings: sparse.csr_array) -> sparse.csr_array:
        """Loadings on the runs as loadings on all observations of the fit: a hypothesis does not touch the prior."""
        below = sparse.csr_array((len(self.fit.weight) - loadings.shape[0], loadings.shape[1]))
        return sparse.csr_array(sparse.vstack([loadings, below], format="csr"))


def solve(
    problem: Problem, sizes: Floats, with_nuisance: bool = False, sweeps: int = SWEEPS
) -> tuple[LinearFit, Components]:
    """Fit with the mixture's weights swept and frozen."""
    precision = problem.prior.precision
    for sweep in range(sweeps + 1):
        fit = problem.fit(sizes, precision, with_nuisance)
        parts = weigh(problem, fit, precision)
        if sweep < sweeps:
            precision = parts.precision
    return fit, parts


def log_likelihood(problem: Problem, sizes: Floats) -> float:
    """Restricted log-likelihood of the components' sizes, heavy-tailed prior; −inf where a run has no variance."""
    variance = problem.observed.private_variance.copy()
    for component, size in zip(problem.components, sizes, strict=True):
        if component.group is None:
            variance += (size * component.scale) ** 2
    if not (variance > 0).all():
        return -np.inf
    precision = problem.prior.precision
    try:
        fit = problem.fit(sizes, precision, with_nuisance=True)
    except np.linalg.LinAlgError:  # so little variance beside the prior's that the runs seem exact
        return -np.inf
    return fit.log_restricted_likelihood + weigh(problem, fit, precision).evidence


def log_plausibility(problem: Problem, sizes: Floats) -> float:
    """Weak knowledge of the components' sizes, worth about half a degree of freedom.

    Without it one run with a declared uncertainty has an interval of ±700 u: the likelihood of a scatter that no run
    can tell is flat for ever.
    """
    level = _typical(problem)
    estimated, asked = np.zeros(len(level)), np.zeros(len(level), bool)
    out = 0.0
    for component, size in zip(problem.components, sizes, strict=True):
        used = component.scale > 0
        if component.line == "repeatability":
            estimated += (size * component.scale) ** 2
            asked |= used
            continue
        if component.group is None:
            usual = BEYOND * np.sqrt(problem.observed.private_variance)
        else:
            usual = BETWEEN * level
        out -= 2.5 * float(np.log1p((size / np.median(usual[used] / component.scale[used])) ** 2 / 4))
    if asked.any():
        with np.errstate(divide="ignore"):
            away = float(np.mean(np.log(estimated[asked]) / 2 - np.log(level[asked])))
        out -= 0.5 * away**2
    return out


def _typical(problem: Problem) -> Floats:
    """A usual repeatability of each run, kJ/mol."""
    return np.asarray(TYPICAL * np.maximum(np.abs(problem.observed.value), 1.0))


def posterior(problem: Problem, sizes: Floats) -> float:
    """Log-likelihood and weak knowledge of the sizes."""
    likelihood = log_likelihood(problem, sizes)
    return likelihood + log_plausibility(problem, sizes) if np.isfinite(likelihood) else likelihood


def starting_sizes(problem: Problem) -> Floats:
    """Sizes of the right order: half a per cent of the enthalpy, half of what was stated."""
    level = _typical(problem)
    out = []
    for component in problem.components:
        used = component.scale > 0
        if component.unit in ("J", "kJ/mol") or component.line == "between batches":
            out.append(float(np.median(level[used] / component.scale[used])))
        else:
            out.append(0.5 if component.line != "repeatability" else 0.005)
    return np.array(out)


def estimate_sizes(problem: Problem, start: Floats | None = None) -> tuple[Floats, Floats]:
    """REML sizes of the components, and the prior precision that goes with the mixture's weights.

    Parameters
    ----------
    problem : Problem
    start : array (d,), optional
        Sizes found before, of nearly the same problem.
    """
    first = starting_sizes(problem)
    if start is None:
        sizes = restricted_maximum(lambda s: posterior(problem, s), first)
    else:
        sizes = restricted_maximum(lambda s: posterior(problem, s), np.maximum(start, 0.02 * first), 0.6)
    return sizes, solve(problem, sizes, with_nuisance=True)[1].precision


def extrapolate(problem: Problem, gains: sparse.csr_array) -> Extrapolation:
    """All salts to infinite dilution.

    Parameters
    ----------
    problem : Problem
    gains : sparse (n, c)
        Loadings of the calorimeters' gains and the lots' compositions, for the screen.

    Returns
    -------
    Extrapolation. The variance components are estimated with what the screen found in the model, then frozen; the
    interval is averaged over their likelihood and over the prior's components.
    """
    sample = _enough(problem)
    whole = sample is problem
    found, sizes, alone = screened(sample, estimate_sizes, gains if whole else sparse.csr_array((len(sample.salt), 0)))
    fit, parts = solve(problem, sizes)
    sample_fit = fit if whole else sample.fit(sizes, sample.prior.precision)
    freedom = scatter_freedom(sample, sizes, sample_fit)
    scale = 1.0 if whole else len(problem.salt) / len(sample.salt)

    crystals = np.arange(problem.crystals)
    ledger = estimate(fit, crystals)
    mean, variance, weight = _crystal_mixture(problem, fit, parts)
    width = np.sqrt(np.maximum((weight * (mean - (weight * mean).sum(axis=1, keepdims=True)) ** 2).sum(axis=1), 0))
    ledger = ledger.with_private(width[:, None], [WIDTH])

    information = sample_fit.single_observations()[1]
    redundancy = float((information / sample_fit.weight)[: len(sample.salt)].sum())
    if redundancy < MANY and whole and len(sizes):
        points, chance = likelihood_grid(lambda s: posterior(found, s), sizes, starting_sizes(found))
        some = [_crystal_mixture(problem, *solve(problem, point, sweeps=1)) for point in points]
        mean = np.concatenate([m for m, _, _ in some], axis=1)
        variance = np.concatenate([v for _, v, _ in some], axis=1)
        weight = np.concatenate([w * c for (_, _, w), c in zip(some, chance, strict=True)], axis=1)
    sd = np.sqrt(variance)
    interval = np.column_stack([mixture_quantile(weight, mean, sd, p) for p in ((1 - LEVEL) / 2, (1 + LEVEL) / 2)])
    factor = (interval[:, 1] - interval[:, 0]) / 2 / ledger.u
    covariance, moved = solution_estimate(problem, fit)
    mean = np.hstack([problem.prior.mean, np.zeros_like(moved[:, 4:])])
    return Extrapolation(
        problem=problem,
        fit=fit,
        parts=parts,
        sizes=sizes,
        freedom=freedom * scale,
        alone=alone if whole else (),
        crystals=ledger,
        interval=interval,
        coverage_factor=factor,
        degrees_of_freedom=freedom_of_factor(factor, LEVEL),
        solution=mean + moved,
        moved=moved,
        solution_covariance=_with_width(covariance, parts),
        with_solution=_with_solution(problem, fit),
        prior_share=_prior_share(problem, fit, parts),
        prior_conflict_p=_conflict(parts, problem),
    )


def _enough(problem: Problem) -> Problem:
    """The problem, or whole electrolytes of it spread evenly through the campaign until there are enough runs."""
    runs = np.bincount(problem.block, minlength=len(problem.has_fourth))
    if runs.sum() <= 2 * ENOUGH:
        return problem
    blocks = len(runs)
    order = np.argsort((np.arange(blocks) * 0.6180339887498949) % 1.0, kind="stable")  # evenly, whatever their number
    chosen = np.zeros(blocks, bool)
    chosen[order[: max(int(np.searchsorted(np.cumsum(runs[order]), ENOUGH)) + 1, 1)]] = True
    return problem.take_blocks(chosen)


def _crystal_mixture(problem: Problem, fit: LinearFit, parts: Components) -> tuple[Floats, Floats, Floats]:
    """Mean, variance and weight of each crystal under each component of its electrolyte's prior, (C, 3) each."""
    crystals = np.arange(problem.crystals)
    block = problem.block_of_crystal
    covariance, value = solution_estimate(problem, fit, 4)
    sensitivity, own = _sensitivity(problem, fit, covariance)
    mean = fit.value[crystals, None] - np.einsum("cj,ckj->ck", sensitivity, parts.value[block] - value[block, None])
    change = parts.covariance[block] - covariance[block, None]
    variance = own[:, None] + np.einsum("ci,ckij,cj->ck", sensitivity, change, sensitivity)
    variance = np.maximum(variance, 1e-6 * own[:, None]) + fit.shared_variance(crystals)[:, None]
    return mean, variance, parts.weight[block]


def _with_solution(problem: Problem, fit: LinearFit) -> Floats:
    columns = problem.solution_column[problem.block_of_crystal]
    return fit.block_covariance(np.arange(problem.crystals), columns)


def _sensitivity(problem: Problem, fit: LinearFit, covariance: Floats) -> tuple[Floats, Floats]:
    """How a crystal's ΔsolH° falls with its electrolyte's parameters, (C, 4), and its own variance, (C,).

    `covariance` (B, 4, 4) is that of the parameters, the wide sources held.
    """
    crystals = np.arange(problem.crystals)
    block = problem.block_of_crystal
    columns = np.column_stack([crystals, problem.parameter_column[block]])
    both = fit.block_covariance(crystals, columns)
    return np.asarray(-np.linalg.solve(covariance[block], both[:, 1:, None])[:, :, 0]), both[:, 0]


def _prior_share(problem: Problem, fit: LinearFit, parts: Components) -> Floats:
    """Share of the information on a crystal's dilution correction that the prior supplied, (C,), 0 to 1."""
    covariance, _ = solution_estimate(problem, fit, 4)
    sensitivity, _ = _sensitivity(problem, fit, covariance)
    block = problem.block_of_crystal
    direction = np.einsum("cij,cj->ci", covariance[block], sensitivity)
    whole = np.einsum("ci,ci->c", direction, sensitivity)
    by_prior = np.einsum("ci,cij,cj->c", direction, parts.precision[block], direction)
    return np.asarray(np.clip(np.divide(by_prior, whole, out=np.ones_like(whole), where=whole > 0), 0, 1))


def _conflict(parts: Components, problem: Problem) -> Floats:
    """p of the runs' own parameters under the first component of the prior, (B,): small where data and prior disagree.

    Under the prior alone g has covariance A + AΣA; directions that the runs do not see are left out.
    """
    from scipy.special import chdtrc

    sigma = problem.prior.covariance
    root = np.linalg.cholesky(sigma)
    seen = np.einsum("bji,bjk,bkl->bil", root, parts.information, root)
    size, direction = np.linalg.eigh(seen)
    along = np.einsum("bji,bjk,bk->bi", direction, root.transpose(0, 2, 1), parts.score)
    used = size > 1e-3
    statistic = np.where(used, along**2 / np.where(used, size + size**2, 1.0), 0.0).sum(axis=1)
    count = used.sum(axis=1)
    return np.where(count > 0, chdtrc(np.maximum(count, 1), statistic), np.nan)


def _with_width(covariance: Floats, parts: Components) -> Floats:
    away = parts.value - np.einsum("bc,bci->bi", parts.weight, parts.value)[:, None]
    wide = covariance.copy()
    wide[:, :4, :4] += np.einsum("bc,bci,bcj->bij", parts.weight, away, away)
    return wide
