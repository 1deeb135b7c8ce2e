"""What runs and cycles together say of hypotheses: scores, information, and both given other hypotheses."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.cycles import Adjustment
from reconcile.dilution import Dilution

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

LEAST = 1e-7  # of the information that the loadings would have if nothing else were unknown


@dataclass(frozen=True, slots=True, eq=False)
class Evidence:
    """Score and information of hypotheses over two fits: that of the runs, and that of the cycles."""

    score: Floats  # (h,)
    information: Floats  # (h, h)
    within: Floats  # (h,) share of its information that the runs give without any reference
    shift: Floats  # (salts, h) what one unit does to the standard enthalpies while it is left in, kJ/mol
    testable: NDArray[np.bool_]  # (h,)


def evidence(
    dilution: Dilution, adjustment: Adjustment, on_runs: sparse.csr_array, on_references: sparse.csr_array
) -> Evidence:
    """Ask both fits of hypotheses.

    Parameters
    ----------
    dilution, adjustment
        The two fits. Given the salts' estimates and their covariance, the runs' residuals are independent of them,
        so scores and information add.
    on_runs : sparse (observations of the runs' fit, h)
    on_references : sparse (observations of the adjustment, h)
        Loadings on reference values; what the runs' fit passes on to the salts is added here.
    """
    touching = np.flatnonzero(np.diff(sparse.csc_array(on_runs).indptr))  # a wrong reference touches no run
    inside = dilution.extrapolation.fit.respond(sparse.csr_array(on_runs[:, touching]))
    salts, count = dilution.extrapolation.problem.crystals, on_runs.shape[1]
    shift, score, own = np.zeros((salts, count)), np.zeros(count), np.zeros((count, count))
    shift[:, touching], score[touching] = inside.shift[:salts], inside.score
    own[np.ix_(touching, touching)] = inside.information
    outside = adjustment.fit.respond(sparse.csr_array(adjustment.pad(shift) + on_references))
    information = own + outside.information
    whole = on_runs.power(2).T @ dilution.extrapolation.fit.weight + on_references.power(2).T @ adjustment.fit.weight
    diagonal = np.diag(information)
    testable = diagonal > LEAST * whole
    within = np.where(testable, np.diag(own) / np.where(testable, diagonal, 1.0), 0.0)
    return Evidence(score + outside.score, information, np.clip(within, 0, 1), shift, testable)


def partial(found: Evidence, given: list[int]) -> tuple[Floats, Floats]:
    """Score and information (h,) of each hypothesis with those of `given` (itself apart) sized beside it."""
    score, information = found.score.copy(), np.diag(found.information).copy()
    if not given:
        return score, information
    at = np.array(given)
    inverse = np.linalg.inv(found.information[np.ix_(at, at)])
    cross = found.information[:, at]
    score = score - cross @ (inverse @ found.score[at])
    information = information - np.einsum("hi,ij,hj->h", cross, inverse, cross)
    size = inverse @ found.score[at]
    information[at] = 1 / np.diag(inverse)
    score[at] = size * information[at]
    return score, np.maximum(information, 0.0)


def without(found: Evidence, given: list[int]) -> tuple[Floats, Floats]:
    """What becomes of the salts if the hypotheses of `given`, sized together, are taken out of the data.

    Returns
    -------
    change, variance : arrays (salts,)
        To be added to the standard enthalpies and to their variances: the uncertainty of the sizes.
    """
    if not given:
        return np.zeros(len(found.shift)), np.zeros(len(found.shift))
    at = np.array(given)
    covariance = np.linalg.inv(found.information[np.ix_(at, at)])
    moved = found.shift[:, at]
    return -moved @ (covariance @ found.score[at]), np.einsum("si,ij,sj->s", moved, covariance, moved)


def correlation(found: Evidence) -> Floats:
    """Correlation of the scores, (h, h)."""
    root = np.sqrt(np.where(found.testable, np.diag(found.information), 1.0))
    out = np.where(np.outer(found.testable, found.testable), found.information / np.outer(root, root), 0.0)
    np.fill_diagonal(out, 1.0)
    return np.clip(out, -1, 1)


def units(rows: Integers, count: int) -> sparse.csr_array:
    """Errors of single observations, sparse (count, rows)."""
    return sparse.csr_array((np.ones(len(rows)), (rows, np.arange(len(rows)))), shape=(count, len(rows)))
