"""Scores against published values: ζ and E_n."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

Floats = NDArray[np.float64]

SATISFACTORY, QUESTIONABLE = 2.0, 3.0  # |ζ|; ISO 13528:2015, 9.6 (from memory)
COVERAGE = 2.0  # of a published standard uncertainty, degrees of freedom unknown


def zeta_score(
    value: Floats, u: Floats, assigned: Floats, u_assigned: Floats, covariance: Floats | float = 0.0
) -> Floats:
    """ζ = (x − X)/√(u² + u_X² − 2 cov).

    References
    ----------
    ISO 13528:2015, 9.6 (from memory).

    Examples
    --------
    >>> zeta_score(np.array([17.6]), np.array([0.03]), np.array([17.5]), np.array([0.04])).round(6)
    array([2.])
    """
    return np.asarray((value - assigned) / np.sqrt(u**2 + u_assigned**2 - 2 * np.asarray(covariance)))


def e_n_score(value: Floats, expanded_u: Floats, assigned: Floats, expanded_u_assigned: Floats) -> Floats:
    """E_n = (x − X)/√(U² + U_X²), with expanded uncertainties (95 %).

    References
    ----------
    ISO 13528:2015, 9.7 (from memory).

    Examples
    --------
    >>> e_n_score(np.array([17.6]), np.array([0.06]), np.array([17.5]), np.array([0.08])).round(6)
    array([1.])
    """
    return (value - assigned) / np.hypot(expanded_u, expanded_u_assigned)


def verdict_of_zeta(zeta: Floats) -> NDArray[np.str_]:
    """Satisfactory up to 2, questionable between 2 and 3, unsatisfactory from 3 on."""
    size = np.abs(zeta)
    return np.select([size <= SATISFACTORY, size < QUESTIONABLE], ["satisfactory", "questionable"], "unsatisfactory")


def compare(
    salts: tuple[str, ...],
    value: Floats,
    u: Floats,
    expanded_u: Floats,
    published: pd.DataFrame,
    circular: NDArray[np.bool_],
) -> pd.DataFrame:
    """Scores of the salts that have a published enthalpy of solution, both at infinite dilution.

    Parameters
    ----------
    salts : formulas (S,)
    value, u, expanded_u : array (S,), kJ/mol
    published : DataFrame (S rows)
        value, u, source, status, independent; NaN where nothing is published.
    circular : array (S,) of bool
        The comparison and the formation cycle are one and the same test.

    Returns
    -------
    DataFrame with the columns of `comparison` in the results.
    """
    assigned, u_assigned = published["value"].to_numpy(float), published["u"].to_numpy(float)
    zeta = zeta_score(value, u, assigned, u_assigned)
    frame = pd.DataFrame(
        {
            "salt": list(salts),
            "molality": 0.0,
            "measured": value,
            "u_measured": u,
            "published": assigned,
            "u_published": u_assigned,
            "difference": value - assigned,
            "zeta": zeta,
            "e_n": e_n_score(value, expanded_u, assigned, COVERAGE * u_assigned),
            "verdict": verdict_of_zeta(zeta),
            "source": published["source"].to_numpy(object),
            "status": published["status"].to_numpy(object),
            "circular": circular,
        }
    )
    told: pd.DataFrame = frame[np.isfinite(assigned) & np.isfinite(value)].reset_index(drop=True)
    return told
