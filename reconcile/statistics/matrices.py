"""One set of matrix operations for small dense and large sparse problems."""

from __future__ import annotations

from typing import Any, Protocol, TypeAlias

import numpy as np
from numpy.typing import NDArray
from scipy import linalg, sparse
from scipy.sparse.linalg import splu

Floats = NDArray[np.float64]
Matrix: TypeAlias = Any  # an array or a csr_array: both know @, .T, rows by slices

SMALL = 400_000  # entries up to which dense arrays are quicker than sparse ones


class Factor(Protocol):
    """A factored symmetric positive definite matrix."""

    log_determinant: float

    def solve(self, right: Floats) -> Floats:
        """The matrix's inverse times `right`."""


class _Dense:
    def __init__(self, matrix: Floats) -> None:
        self._factor = linalg.cho_factor(matrix, check_finite=False)
        self.log_determinant = 2 * float(np.log(np.diag(self._factor[0])).sum())

    def solve(self, right: Floats) -> Floats:
        return np.asarray(linalg.cho_solve(self._factor, right, check_finite=False))


class _Sparse:
    """Symmetric sparse factors; scipy's default ordering is a hundred times slower on such networks."""

    def __init__(self, matrix: sparse.csc_array) -> None:
        options = {"SymmetricMode": True}
        self._factor = splu(matrix, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options=options)
        self.log_determinant = float(np.log(np.abs(self._factor.U.diagonal())).sum())

    def solve(self, right: Floats) -> Floats:
        return np.asarray(self._factor.solve(right))


def beside(left: sparse.csr_array, right: sparse.csr_array, dense: bool) -> Matrix:
    """Two matrices side by side, dense or sparse."""
    if dense:
        return np.hstack([left.toarray(), right.toarray()])
    return sparse.csr_array(sparse.hstack([left, right], format="csr"))


def scaled_rows(matrix: Matrix, factor: Floats) -> Matrix:
    """diag(factor) @ matrix."""
    if isinstance(matrix, np.ndarray):
        return matrix * factor[:, None]
    scaled = matrix.copy()
    scaled.data = matrix.data * np.repeat(factor, np.diff(matrix.indptr))
    return scaled


def as_dense(matrix: Matrix) -> Floats:
    """The matrix as an array."""
    return matrix if isinstance(matrix, np.ndarray) else np.asarray(matrix.toarray())


def factored(matrix: Matrix, diagonal: Floats) -> Factor:
    """Factor matrix + diag(diagonal)."""
    if isinstance(matrix, np.ndarray):
        return _Dense(matrix + np.diag(diagonal))
    return _Sparse(sparse.csc_array(matrix + sparse.diags_array(diagonal)))
