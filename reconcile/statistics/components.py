"""Variance components: their restricted maximum and an average over their likelihood."""

from __future__ import annotations

from collections.abc import Callable
from itertools import product

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import minimize

Floats = NDArray[np.float64]
Likelihood = Callable[[Floats], float]

FLOOR = 1e-4  # of its starting size: below that a component is called 0
DROP = 6.0  # in log-likelihood: where the grid ends
NODES = {1: 25, 2: 8, 3: 5, 4: 4}  # a component, by how many there are


def restricted_maximum(log_likelihood: Likelihood, start: Floats, step: float = 1.5) -> Floats:
    """Sizes (standard deviations, at least 0) of largest restricted likelihood.

    Parameters
    ----------
    log_likelihood : function of sizes (d,)
        −inf where the sizes leave an observation without any variance.
    start : array (d,)
        Sizes of the right order, more than 0.
    step : float
        First step of the search, in the logarithm.

    Returns
    -------
    array (d,); a component that adds nothing is exactly 0.
    """
    if not len(start):
        return start

    def loss(logarithm: Floats) -> float:
        return -log_likelihood(start * np.exp(np.clip(logarithm, np.log(FLOOR), 12)))

    count = len(start)
    corners = np.vstack([np.full(count, -step / 3), np.eye(count) * step - step / 3])
    found = minimize(
        loss,
        corners[0],
        method="Nelder-Mead",
        options={"xatol": 0.03, "fatol": 0.01, "maxfev": 60 * count, "initial_simplex": corners},
    )
    best = start * np.exp(np.clip(found.x, np.log(FLOOR), 12))
    value = -float(found.fun)
    for i in range(len(start)):
        without = best.copy()
        without[i] = 0.0
        at_zero = log_likelihood(without)
        if np.isfinite(at_zero) and at_zero >= value - 0.01:
            best, value = without, at_zero
    return np.asarray(best)


def likelihood_grid(log_likelihood: Likelihood, best: Floats, start: Floats) -> tuple[Floats, Floats]:
    """Points and weights that average over a density of the standard deviations, of which the logarithm is given.

    Parameters
    ----------
    log_likelihood : function of sizes (d,)
    best : array (d,)
        The restricted maximum.
    start : array (d,)
        Sizes of the right order, for components whose maximum is 0.

    Returns
    -------
    points : array (g, d)
    weights : array (g,), sum 1

    References
    ----------
    A uniform density of the standard deviation: A. Gelman, Bayesian Analysis 1 (2006) 515 (from memory).
    """
    if not len(best):
        return best[None, :], np.ones(1)
    top = log_likelihood(best)
    axes, steps = [], []
    for i in range(len(best)):
        nodes = _axis(log_likelihood, best, i, start[i], top, NODES.get(len(best), 3))
        axes.append(nodes)
        steps.append(np.gradient(nodes) if len(nodes) > 1 else np.ones(1))
    points = np.array(list(product(*axes)))
    cell = np.array([float(np.prod(s)) for s in product(*steps)])
    value = np.array([log_likelihood(p) for p in points])
    weights = np.where(np.isfinite(value), cell * np.exp(np.clip(value - np.nanmax(value), -700, 0)), 0.0)
    keep = weights > 1e-7 * weights.max()
    return points[keep], weights[keep] / weights[keep].sum()


def _axis(log_likelihood: Likelihood, best: Floats, i: int, start: float, top: float, count: int) -> Floats:
    """Nodes along one component, from where the likelihood has dropped below to where it has above."""

    def drop(size: float) -> float:
        at = best.copy()
        at[i] = size
        value = log_likelihood(at)
        return top - value if np.isfinite(value) else np.inf

    scale = best[i] if best[i] > 0 else 0.1 * start
    high = scale
    while drop(high) < DROP and high < 1e3 * max(start, scale):
        high *= 1.5
    low = best[i]
    while low > 1e-3 * scale and drop(low) < DROP:
        low /= 1.5
    low = 0.0 if low <= 1e-3 * scale else low
    if low == 0.0:
        return (
            np.linspace(0, high, count) if high < 20 * scale else np.r_[0.0, np.geomspace(scale / 10, high, count - 1)]
        )
    return np.geomspace(low, high, count)
