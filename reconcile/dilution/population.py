"""The population of published parameter sets, robustly and by charge type: the prior of a salt that has no set."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

FREEDOM = 4.0  # of the multivariate t that the sets are taken to follow
BORROWED_SCATTER = 6.0  # so many sets' worth of scatter does a charge type borrow from the 1–1 salts
BORROWED_MEAN = 1.0  # and so many of their mean
SWEEPS = 60


@dataclass(frozen=True, slots=True, eq=False)
class Population:
    """Centre and scatter of the scaled parameters of one charge type."""

    mean: Floats  # (4,)
    scatter: Floats  # (4, 4)
    mean_covariance: Floats  # (4, 4): how badly the mean itself is known
    sets: int


def robust_population(sets: Floats, prior: Population | None = None) -> Population:
    """Multivariate t (four degrees of freedom) of parameter sets, with missing entries, shrunk to a prior population.

    Parameters
    ----------
    sets : array (n, 3)
        Scaled β⁽⁰⁾, β⁽¹⁾, C^φ parameters; NaN where a set does not determine one.
    prior : Population, optional
        What scatter and mean are borrowed from where sets are few.

    Returns
    -------
    Population; fourth parameter left at mean 0 with scatter 1.

    References
    ----------
    EM for the multivariate t with missing values: K. L. Lange, R. J. A. Little, J. M. G. Taylor,
    J. Am. Stat. Assoc. 84 (1989) 881 (from memory). The borrowed sets act as an inverse-Wishart prior.
    """
    known = np.isfinite(sets)
    count, size = sets.shape
    mean = np.array([np.median(sets[known[:, j], j]) if known[:, j].any() else 0.0 for j in range(size)])
    borrowed = prior.scatter[:3, :3] if prior is not None else np.eye(size)
    pull, hold = (BORROWED_MEAN, BORROWED_SCATTER) if prior is not None else (0.0, 0.0)
    scatter = borrowed.copy() if prior is not None else np.diag(np.nanvar(sets, axis=0))
    patterns = [(np.flatnonzero(o), (known == o).all(axis=1)) for o in np.unique(known, axis=0)] if count else []
    for _ in range(SWEEPS):
        weights, filled, left = np.zeros(count), np.zeros((count, size)), np.zeros((size, size))
        for o, mine in patterns:
            away = sets[np.ix_(mine, o)] - mean[o]
            solved = np.linalg.solve(scatter[np.ix_(o, o)], away.T)
            weights[mine] = (FREEDOM + len(o)) / (FREEDOM + np.einsum("io,oi->i", away, solved))
            filled[mine] = mean + (scatter[:, o] @ solved).T
            left += mine.sum() * (scatter - scatter[:, o] @ np.linalg.solve(scatter[np.ix_(o, o)], scatter[o, :]))
        centre = prior.mean[:3] if prior is not None else mean
        total = weights.sum() + pull
        mean = (weights @ filled + pull * centre) / total if total else mean
        away = filled - mean
        scatter = (hold * borrowed + (away.T * weights) @ away + left) / (hold + count)
    out = Population(np.zeros(4), np.eye(4), np.zeros((4, 4)), count)
    out.mean[:3], out.scatter[:3, :3] = mean, scatter
    out.mean_covariance[:3, :3] = scatter / max(weights.sum() + pull, 1.0) if count else scatter
    return out


def populations(sets: Floats, charge_types: NDArray[np.str_]) -> dict[str, Population]:
    """Population of every charge type that has sets, and of "other" for those that have none.

    Parameters
    ----------
    sets : array (n, 4)
        Scaled parameters in the order of `models.TERMS`, NaN where not determined.
    charge_types : array (n,) of str

    Returns
    -------
    dict: charge type ─► Population. 1–1 salts stand for themselves; the others borrow from them.
    """
    base = robust_population(sets[charge_types == "1-1", :3])
    out = {"1-1": base}
    for kind in sorted(set(charge_types.tolist()) - {"1-1"}):
        mine = charge_types == kind
        population = robust_population(sets[mine, :3], base)
        fourth = sets[mine, 3]
        fourth = fourth[np.isfinite(fourth)]
        if fourth.size > 1:
            population.mean[3] = fourth.mean()
            population.scatter[3, 3] = fourth.var(ddof=1) * (1 + 1 / fourth.size)
        out[kind] = population
    others = sets[charge_types != "1-1", :3]
    pooled = robust_population(others, base) if len(others) else base
    out["other"] = Population(pooled.mean, 2 * pooled.scatter, pooled.mean_covariance, len(sets))
    return out
