"""The largest of many correlated statistics: p values that account for how many were asked."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

DRAWS = 20_000
SEED = 20_261_201  # fixed: the same input gives the same p
FEWEST = 50  # draws beyond the statistic below which the bound p × number is better


def adjusted_p(p_value: Floats, statistic: Floats, correlation: Floats, others: int) -> Floats:
    """Probability that the largest of all statistics would reach this one by chance.

    Parameters
    ----------
    p_value, statistic : array (h,)
        Of each hypothesis on its own; |statistic| standard normal under no effect.
    correlation : array (h, h)
        Of the statistics.
    others : int
        Further tests, taken as independent of these and of one another (the single runs).

    Returns
    -------
    array (h,), not below p_value and never above 1.
    """
    count = len(p_value)
    if not count:
        return p_value
    size, direction = np.linalg.eigh(correlation)
    root = direction * np.sqrt(np.clip(size, 0, None))
    largest = np.zeros(DRAWS)
    rng = np.random.default_rng(SEED)
    for start in range(0, DRAWS, 2_000):
        largest[start : start + 2_000] = np.abs(rng.standard_normal((2_000, count)) @ root.T).max(axis=1)
    ordered = np.sort(largest)
    beyond = DRAWS - np.searchsorted(ordered, np.abs(statistic), side="left")
    bound = np.minimum(p_value * count, 1.0)
    here = np.where(beyond >= FEWEST, np.minimum(beyond / DRAWS, bound), bound)
    here = np.maximum(here, p_value)
    neither = np.log1p(-np.minimum(here, 1 - 1e-16)) + others * np.log1p(-np.minimum(p_value, 1 - 1e-16))
    return np.asarray(np.clip(-np.expm1(neither), p_value, 1.0))  # exact for the smallest p too
