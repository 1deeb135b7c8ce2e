"""The numbers that the method text names, taken from where they are used."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray


def numbers() -> Mapping[str, Any]:
    """Name in the template ─► number or text; loads the rooms of the numerics."""
    from reconcile.bias import search
    from reconcile.comparison import scores
    from reconcile.cycles import adjustment
    from reconcile.dilution import extrapolation, further_terms, models, population, priors, screen, temperature

    return {
        "b": f"{models.B:g}",
        "scales": _listed(priors.SCALES),
        "weights": _listed(priors.POPULATION_WEIGHTS),
        "published_weights": _listed(priors.PUBLISHED_WEIGHTS),
        "u_published": f"{priors.U_PUBLISHED:g}",
        "u_least": f"{priors.U_LEAST:g}",
        "freedom": f"{population.FREEDOM:g}",
        "borrowed_scatter": f"{population.BORROWED_SCATTER:g}",
        "borrowed_mean": f"{population.BORROWED_MEAN:g}",
        "typical": f"{temperature.TYPICAL:g}".replace("-", "−"),
        "u_typical": f"{temperature.U_TYPICAL:g}",
        "u_curvature": f"{temperature.U_CURVATURE:g}",
        "drift": f"{further_terms.DRIFT:g}",
        "bend": f"{further_terms.BEND:g}",
        "equation": f"{further_terms.EQUATION:g}",
        "strong": f"{further_terms.STRONG:g}",
        "screen_level": f"{screen.LEVEL:g}",
        "many": f"{extrapolation.MANY:g}",
        "enough": f"{extrapolation.ENOUGH:,}".replace(",", " "),
        "closes": f"{adjustment.CLOSES:g}",
        "questionable": f"{adjustment.QUESTIONABLE:g}",
        "weak": f"{adjustment.WEAK:g}",
        "level": f"{search.LEVEL:g}",
        "satisfactory": f"{scores.SATISFACTORY:g}",
        "unsatisfactory": f"{scores.QUESTIONABLE:g}",
        "published_coverage": f"{scores.COVERAGE:g}",
    }


def _listed(values: NDArray[np.float64]) -> str:
    return ", ".join(f"{value:g}" for value in values)
