"""Quantiles of mixtures of normal distributions, and what coverage factor an interval amounts to."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr, stdtrit

Floats = NDArray[np.float64]

HALVINGS = 50
_FREEDOM = np.geomspace(1, 1e5, 600)


def mixture_quantile(weight: Floats, mean: Floats, sd: Floats, probability: float) -> Floats:
    """Quantile of each row's mixture, by bisection of its distribution function.

    Parameters
    ----------
    weight, mean, sd : arrays (n, k)
        Of the normal components; weights of a row sum to 1.
    probability : float
        Between 0 and 1.

    Returns
    -------
    array (n,)

    Examples
    --------
    >>> one = np.ones((1, 1))
    >>> mixture_quantile(one, 0 * one, one, 0.975).round(6)
    array([1.959964])
    """
    low = (mean - 12 * sd).min(axis=1)
    high = (mean + 12 * sd).max(axis=1)
    for _ in range(HALVINGS):
        middle = (low + high) / 2
        below = (weight * ndtr((middle[:, None] - mean) / sd)).sum(axis=1) < probability
        low, high = np.where(below, middle, low), np.where(below, high, middle)
    return np.asarray((low + high) / 2)


def freedom_of_factor(factor: Floats, level: float = 0.95) -> Floats:
    """Degrees of freedom for which Student's t has this coverage factor; infinite from the normal's factor down.

    Examples
    --------
    >>> freedom_of_factor(np.array([2.571, 1.9])).round(1)
    array([ 5., inf])
    """
    table = stdtrit(_FREEDOM, (1 + level) / 2)
    freedom = np.exp(np.interp(-np.asarray(factor), -table, np.log(_FREEDOM)))
    return np.where(np.asarray(factor) > table[-1], freedom, np.inf)
