"""The heavy-tailed prior: weights of its components from the data, and the one prior that is equal to their average."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reconcile.dilution.priors import SCALES
from reconcile.dilution.problem import Problem
from reconcile.statistics import LinearFit

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Components:
    """Each electrolyte's parameters under each component of its prior, the shared sources held."""

    weight: Floats  # (B, 3)
    value: Floats  # (B, 3, 4), parameters less prior mean
    covariance: Floats  # (B, 3, 4, 4)
    precision: Floats  # (B, 4, 4): the single prior that gives the weighted map
    information: Floats  # (B, 4, 4): what the runs alone say of the parameters
    score: Floats  # (B, 4): information × their own estimate, from the shifted prior mean
    evidence: float  # log marginal likelihood of the mixture over that of its first component


def weigh(problem: Problem, fit: LinearFit, precision: Floats) -> Components:
    """Weights and maps of the prior's components, from a fit under some prior precision.

    With A what the runs say of the parameters (all else eliminated), g = A × their own estimate and P the prior
    precision
    at scale 1, component c has (A + P/c)⁻¹g and log marginal ½[log|P/c| − log|A + P/c| + gᵀ(A + P/c)⁻¹g]. The
    weighted map
    Σ w (A + P/c)⁻¹ is the map of one normal prior of precision (Σ w (A + P/c)⁻¹)⁻¹ − A: with it the fit stays linear.

    Parameters
    ----------
    problem : Problem
    fit : LinearFit
        Of this problem under `precision`.
    precision : array (B, 4, 4)
    """
    covariance, value = solution_estimate(problem, fit, 4)
    shift = problem.population_shift(fit)
    inverse = np.linalg.inv(covariance)
    here = problem.parameter_column >= 0  # of a term that a solution does not have the runs say nothing
    information = np.where(here[:, :, None] & here[:, None, :], _positive(inverse - precision), 0.0)
    score = np.einsum("bij,bj->bi", inverse, value) - np.einsum("bij,bj->bi", precision + information, shift)
    base = np.linalg.inv(problem.prior.covariance)
    scaled = base[:, None] / SCALES[:, None, None]
    total = information[:, None] + scaled
    maps = np.linalg.inv(total)
    moved = np.einsum("bcij,bj->bci", maps, score)
    log = 0.5 * (np.linalg.slogdet(scaled)[1] - np.linalg.slogdet(total)[1] + np.einsum("bci,bi->bc", moved, score))
    log = log - log[:, :1]
    weighted = np.log(problem.prior.weights) + log
    top = weighted.max(axis=1, keepdims=True)
    evidence = top[:, 0] + np.log(np.exp(weighted - top).sum(axis=1))
    weight = np.exp(weighted - evidence[:, None])
    average = np.einsum("bc,bcij->bij", weight, maps)
    effective = _positive(np.linalg.inv(average) - information, floor=base / (2 * SCALES[-1]))
    return Components(weight, moved + shift[:, None], maps, effective, information, score, float(evidence.sum()))


def solution_estimate(problem: Problem, fit: LinearFit, count: int | None = None) -> tuple[Floats, Floats]:
    """Covariance (B, k, k) of the first k (all) of each block's parameters and further terms, and their values (B, k).

    The wide sources are held. A term that a block does not have: value 0, variance 1, tied to nothing.
    """
    column = problem.solution_column[:, :count]
    blocks, count = column.shape
    exists = column >= 0
    rows = column[exists]
    others = np.repeat(column, exists.sum(axis=1), axis=0)
    covariance = np.zeros((blocks, count, count))
    covariance[exists] = fit.block_covariance(rows, others)
    covariance[:, range(count), range(count)] += np.where(exists, 0.0, 1.0)
    value = np.zeros((blocks, count))
    value[exists] = fit.value[rows]
    return covariance, value


def _positive(matrix: Floats, floor: Floats | None = None) -> Floats:
    """Symmetric with no negative eigenvalue (beyond the floor, if any): rounding taken off."""
    matrix = (matrix + matrix.transpose(0, 2, 1)) / 2
    if floor is not None:
        return floor + _positive(matrix - floor)
    size, direction = np.linalg.eigh(matrix)
    return np.asarray(np.einsum("bij,bj,bkj->bik", direction, np.maximum(size, 0), direction))
