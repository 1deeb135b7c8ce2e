"""A screen for runs that stand alone, gains and wrong lots, which else would pass for scatter."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray
from scipy import sparse
from scipy.special import stdtr

from reconcile.dilution.problem import Problem
from reconcile.statistics import LinearFit

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

LEVEL = 0.01  # adjusted p below which something is taken into the model while components are estimated
MOST = 12  # rounds
WHOLLY = 0.95  # share of the information above which a statistic is taken to have the runs' own scale
FEWEST = 4.0  # degrees of freedom behind the scatter: with fewer no run can be said to stand alone
SHARP = 0.75  # of ν: with parts of redundancies z² < ν holds only roughly, and beyond this says no more
WIDE = 1e3  # prior sd of what was found, in its own standard uncertainties: as good as free


def scatter_freedom(problem: Problem, sizes: Floats, fit: LinearFit) -> float:
    """Degrees of freedom behind the scatter that the campaign had to estimate; infinite where all was stated.

    Redundancy of the runs, weighed by how much of their variance is estimated (Welch & Satterthwaite's reasoning).
    """
    n = len(problem.salt)
    total = 1 / fit.weight[:n]
    estimated = np.zeros(n)
    for component, size in zip(problem.components, sizes, strict=True):
        if component.group is None:
            estimated += (size * component.scale) ** 2
    part = np.clip(estimated / total, 0, 1)
    if not (part > 1e-6).any():
        return np.inf
    redundancy = fit.single_observations()[1][:n] * total
    weight = np.maximum(part, 1e-12)
    square = float((weight * part**2).sum() / weight.sum())
    return max(float(redundancy @ part), 1e-9) / square


def tail(statistic: Floats, freedom: float, within: Floats | float = 1.0) -> Floats:
    """Two-sided p of standardised statistics whose scale was estimated, wholly or in part, from the same runs.

    Parameters
    ----------
    statistic : array (h,)
    freedom : float
        ν behind the estimated scatter; infinite where all was stated.
    within : array (h,) or float
        Share of a statistic's information that comes from the runs, whose scale it is; the rest has a stated one.

    Returns
    -------
    array (h,). Where all comes from the runs, z² cannot pass ν and t = z √((ν − 1)/(ν − z²)) follows Student's t with
    ν − 1 (a residual under its own scale: externally studentised). Else z itself is taken as Student's t with ν/within²
    degrees of freedom (Welch & Satterthwaite).
    """
    z, share = np.broadcast_arrays(np.abs(np.asarray(statistic, float)), np.asarray(within, float))
    if not np.isfinite(freedom):
        return np.asarray(2 * stdtr(1e9, -z))
    own = share > WHOLLY
    mixed = np.maximum(freedom / np.maximum(share, 1e-3) ** 2 - 1, 1e-3)
    if freedom <= 1.5:
        return np.asarray(np.where(own, 1.0, 2 * stdtr(mixed, -z)))
    t = z * np.sqrt((freedom - 1) / np.maximum(freedom - z**2, (1 - SHARP) * freedom))
    return np.asarray(np.where(own, 2 * stdtr(freedom - 1, -t), 2 * stdtr(mixed, -z)))


def screened(
    problem: Problem, estimate: Callable[[Problem, Floats | None], tuple[Floats, Floats]], gains: sparse.csr_array
) -> tuple[Problem, Floats, tuple[int, ...]]:
    """The problem with what the screen found as nuisance columns, and the components estimated beside them.

    Parameters
    ----------
    problem : Problem
    estimate : function
        Problem, sizes found before ─► sizes of its components (d,) and the prior precision used (B, 4, 4).
    gains : sparse (n, c)
        Loadings of each calorimeter's gain and each lot's composition on the runs, kJ/mol.

    Returns
    -------
    problem, sizes (d,), rows of the runs found alone
    """
    sizes, precision = estimate(problem, None)
    if not problem.components:
        return problem, sizes, ()
    alone: list[int] = []
    n = len(problem.salt)
    for _ in range(MOST):
        fit = problem.fit(sizes, precision, with_nuisance=True)
        freedom = scatter_freedom(problem, sizes, fit)
        if freedom < FEWEST:
            break
        score, information = (part[:n] for part in fit.single_observations())
        testable = information > 1e-3 * fit.weight[:n]
        z = np.where(testable, score / np.sqrt(np.where(testable, information, 1.0)), 0.0)
        z[alone] = 0.0
        p_run = -np.expm1(n * np.log1p(-np.minimum(tail(z, freedom), 1 - 1e-16)))
        worst = int(np.argmin(p_run))
        best_p = float(p_run[worst])
        column = np.zeros(n)
        column[worst] = WIDE / np.sqrt(max(float(information[worst]), 1e-300))
        found = worst
        if gains.shape[1]:
            below = sparse.csr_array((len(fit.weight) - n, gains.shape[1]))
            response = fit.respond(sparse.csr_array(sparse.vstack([gains, below], format="csr")), diagonal=True)
            seen = response.information > 1e-6 * np.asarray(gains.power(2).T @ fit.weight[:n])
            u = 1 / np.sqrt(np.where(seen, response.information, 1.0))
            p_gain = np.where(seen, tail(response.score * u, freedom), 1.0) * gains.shape[1]
            if p_gain.min() <= best_p:
                which = int(np.argmin(p_gain))
                best_p, found = float(p_gain[which]), -1
                column = gains[:, [which]].toarray()[:, 0] * WIDE * u[which]
        if best_p > LEVEL:
            break
        if found >= 0:
            alone.append(found)
        nuisance = sparse.csr_array(sparse.hstack([problem.nuisance, sparse.csr_array(column[:, None])], format="csr"))
        problem = replace(problem, nuisance=nuisance)
        sizes, precision = estimate(problem, sizes)
    return problem, sizes, tuple(alone)
