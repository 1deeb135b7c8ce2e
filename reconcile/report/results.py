"""What the chain hands over to the report."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any, Protocol

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from numpy.typing import NDArray

    from reconcile.campaign import Campaign


class Covariance(Protocol):
    """Covariance of the standard enthalpies before the cycles: D + F Fᵀ, kJ²/mol²."""

    @property
    def salts(self) -> Sequence[str]:
        """Formulae, in order of the other members."""

    @property
    def private_variance(self) -> NDArray[np.float64]:
        """(salts,) diagonal of D."""

    @property
    def shared(self) -> Sequence[tuple[str, Sequence[int], Sequence[float]]]:
        """Columns of F: source, positions of the salts, loadings in kJ/mol."""


class Results(Protocol):
    """What the chain hands over; every table has the columns of `reconcile.report.columns` (more are written too).

    `runs` and `curves` may be large and made only when asked for: a format touches them only where it prints them.
    """

    @property
    def campaign(self) -> Campaign:
        """The checked campaign."""

    @property
    def salts(self) -> pd.DataFrame:
        """One row a salt."""

    @property
    def runs(self) -> pd.DataFrame:
        """One row a run, headings as in tables/runs.csv."""

    @property
    def covariance(self) -> Covariance:
        """Of the standard enthalpies."""

    @property
    def adjustment(self) -> Mapping[str, float | int | None]:
        """chi_square, degrees_of_freedom, p_value; None where nothing could be tested."""

    @property
    def reconciled(self) -> pd.DataFrame:
        """One row a salt that took part in the adjustment."""

    @property
    def references(self) -> pd.DataFrame:
        """One row a reference value in the adjustment."""

    @property
    def cycles(self) -> pd.DataFrame:
        """One row a cycle."""

    @property
    def bias(self) -> pd.DataFrame:
        """One row a hypothesis, most significant first."""

    @property
    def comparison(self) -> pd.DataFrame:
        """One row a published value compared."""

    @property
    def budget(self) -> pd.DataFrame:
        """At most twelve rows a salt and one for the rest."""

    @property
    def assumptions(self) -> pd.DataFrame:
        """One row an assumption."""

    @property
    def sources(self) -> pd.DataFrame:
        """One row a reference value used."""

    @property
    def curves(self) -> pd.DataFrame:
        """Model and naive lines against molality, long, for the figures."""


def whole_test(results: Results) -> dict[str, float]:
    """χ² of the adjustment, its degrees of freedom and p; NaN where nothing could be tested."""
    keys = ("chi_square", "degrees_of_freedom", "p_value")
    found = {key: results.adjustment[key] for key in keys}
    return {key: math.nan if value is None else float(value) for key, value in found.items()}


def rows(table: pd.DataFrame) -> list[dict[str, Any]]:
    """The rows of a table as dictionaries of Python values."""
    columns = [str(column) for column in table.columns]
    return [
        dict(zip(columns, row, strict=True)) for row in zip(*(table[c].tolist() for c in table.columns), strict=True)
    ]
