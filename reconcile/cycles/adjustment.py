"""One adjustment of all salts with the reference values: what fits, what does not, what could not have been seen."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy import sparse
from scipy.special import chdtrc

from reconcile.cycles.network import Network
from reconcile.statistics import LinearFit, least_squares

Floats = NDArray[np.float64]

# δ₀ for level 0.001 and power 0.8: W. Baarda, A testing procedure for use in geodetic networks (1968), from memory
BAARDA = 4.132
CLOSES, QUESTIONABLE = 2.0, 3.0  # |misclosure|/u, the limits of ζ in ISO 13528
WEAK = 10.0  # times the laboratory's own u: a reference side worse than that tests nothing


@dataclass(frozen=True, slots=True, eq=False)
class Adjustment:
    """The reconciled network."""

    network: Network
    fit: LinearFit
    chi_square: float
    degrees_of_freedom: int
    p_value: float | None  # None where nothing is redundant
    reconciled: pd.DataFrame
    references: pd.DataFrame
    cycles: pd.DataFrame

    def pad(self, shifts: Floats) -> sparse.csr_array:
        """Loadings on the salts (S, h) as loadings on all observations: references are not touched."""
        below = sparse.csr_array((len(self.network.references), shifts.shape[1]))
        return sparse.csr_array(sparse.vstack([sparse.csr_array(shifts), below], format="csr"))


def adjust(salts: tuple[str, ...], net: Network) -> Adjustment:
    """Least-squares adjustment of the network, with the tests of each observation.

    Parameters
    ----------
    salts : formulas of the laboratory's S salts, in the network's order
    net : Network

    Returns
    -------
    Adjustment. For observation e: w = eᵀPv/√(eᵀPe), redundancy (V P)_ee, smallest detectable error δ₀/√(eᵀPe), with
    P the
    projector of the correlated observations (Baarda 1968; the short forms v/σ_v hold for uncorrelated ones only).
    """
    fit = least_squares(net.observed, net.design)
    score, information = fit.single_observations()
    seen = information > 1e-9 * fit.weight
    root = np.sqrt(np.where(seen, information, 1.0))
    w = np.where(seen, score / root, np.nan)
    detectable = np.where(seen, BAARDA / root, np.nan)
    redundancy = np.clip(fit.redundancy(), 0, 1)
    value = net.design @ fit.value
    u = np.sqrt(np.maximum(fit.fitted_variance(), 0))
    count = len(salts)
    measured, u_measured = net.observed.value, net.observed.u
    reconciled = pd.DataFrame(
        {
            "salt": list(salts),
            "measured": measured[:count],
            "u_measured": u_measured[:count],
            "reconciled": value[:count],
            "u": u[:count],
            "change": value[:count] - measured[:count],
            "standardised_change": -w[:count],
            "redundancy": redundancy[:count],
            "smallest_detectable_error": detectable[:count],
        }
    )
    references = pd.DataFrame(
        {
            "quantity": net.references["quantity"],
            "species": net.references["species"],
            "published": measured[count:],
            "u_published": u_measured[count:],
            "reconciled": value[count:],
            "u": u[count:],
            "standardised_change": -w[count:],
            "redundancy": redundancy[count:],
            "smallest_detectable_error": detectable[count:],
            "source": net.references["source"],
            "status": net.references["status"],
        }
    )
    freedom = fit.degrees_of_freedom
    return Adjustment(
        net,
        fit,
        fit.chi_square,
        freedom,
        float(chdtrc(freedom, fit.chi_square)) if freedom > 0 else None,
        reconciled,
        references,
        _cycles(salts, net),
    )


def _cycles(salts: tuple[str, ...], net: Network) -> pd.DataFrame:
    """Misclosure of each formation cycle that the references reach: measured less what they say."""
    count = len(salts)
    misclosure = net.observed.value[:count] - net.reference_side
    u = np.hypot(net.observed.u[:count], net.u_reference_side)
    ratio = np.abs(misclosure) / u
    weak = (net.u_reference_side > WEAK * net.observed.u[:count]) & (ratio <= CLOSES)
    verdict = np.select(
        [weak, ratio <= CLOSES, ratio <= QUESTIONABLE], ["too weak", "closes", "questionable"], "does not close"
    )
    frame = pd.DataFrame(
        {
            "salt": list(salts),
            "kind": "formation",
            "misclosure": misclosure,
            "u": u,
            "identity": False,
            "circular": net.circular,
            "smallest_detectable_error": BAARDA * u,
            "verdict": verdict,
        }
    )
    return frame[np.isfinite(misclosure)].reset_index(drop=True)
