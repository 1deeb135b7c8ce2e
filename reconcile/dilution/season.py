"""Every salt at infinite dilution, and every run corrected to it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.chemistry import water
from reconcile.dilution.extrapolation import Extrapolation, extrapolate
from reconcile.dilution.further_terms import further_terms
from reconcile.dilution.layout import Layout, lay_out, screened_for
from reconcile.dilution.models import empirical_terms, limiting_law
from reconcile.dilution.priors import PublishedSets
from reconcile.dilution.temperature import HEAT_CAPACITY, HeatCapacityChange

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]


@dataclass(frozen=True, slots=True, eq=False)
class Corrected:
    """Runs at infinite dilution and the reference temperature, kJ/mol; NaN where the salt has no limit."""

    correction: Floats  # (n,) standard enthalpy less enthalpy
    standard_enthalpy: Floats  # (n,)
    u: Floats  # (n,) run and correction taken as independent
    standardised_residual: Floats  # (n,) NaN outside the fit


@dataclass(frozen=True, eq=False)
class Dilution:
    """Every salt at infinite dilution."""

    layout: Layout
    extrapolation: Extrapolation
    heat_capacity: HeatCapacityChange  # (S,)
    slope: float  # A_H at the reference temperature, kJ kg^½ mol^−3/2

    def loadings(self, of_runs: sparse.csr_array) -> sparse.csr_array:
        """Loadings of hypotheses on the campaign's runs (n, h) as loadings on the fit's observations."""
        return self.extrapolation.pad(of_runs[self.layout.row])


def dilute(campaign: Campaign, runs: ReducedRuns, sets: PublishedSets, heat_capacity: HeatCapacityChange) -> Dilution:
    """Lay out, screen, fit: the runs of a campaign to infinite dilution.

    Parameters
    ----------
    campaign : Campaign
    runs : ReducedRuns
    sets : PublishedSets
    heat_capacity : HeatCapacityChange of the campaign's salts

    Returns
    -------
    Dilution

    Raises
    ------
    NothingToFit
        If no run is left.
    """
    layout = lay_out(campaign, runs, sets, heat_capacity)
    found = extrapolate(layout.problem, sparse.csr_array(screened_for(campaign, runs)[layout.row]))
    slope = float(water.debye_hueckel_slope(np.array([campaign.reference_temperature]))[0])
    return Dilution(layout, found, heat_capacity, slope)


def corrected_runs(campaign: Campaign, runs: ReducedRuns, dilution: Dilution) -> Corrected:
    """The runs, one by one, at infinite dilution and the reference temperature."""
    at, found = dilution.layout, dilution.extrapolation
    limit = np.isin(campaign.salt, at.crystal) & runs.dissolves
    standard = at.observed.value - np.einsum("nj,nj->n", at.basis, found.moved[at.block_of_run])
    variance = at.observed.private_variance + at.observed.shared_variance
    variance += np.einsum("ni,nij,nj->n", at.basis, found.solution_covariance[at.block_of_run], at.basis)
    names = at.observed.sources.name
    heat_capacity = np.array([name.startswith(HEAT_CAPACITY) for name in names], dtype=bool)
    moved, left = found.fit.narrow_sources(names)  # what runs at several temperatures say of ΔsolC_p°
    standard = standard - at.observed.loading @ np.where(heat_capacity, moved, 0.0)
    variance -= at.observed.loading.power(2) @ np.where(heat_capacity, 1 - left, 0.0)
    for component, size in zip(found.problem.components, found.sizes, strict=True):
        variance[at.row] += (size * component.scale) ** 2
    n = len(at.row)
    score, information = (part[:n] for part in found.fit.single_observations())
    visible = information > 1e-9 * found.fit.weight[:n]
    z = np.full(len(standard), np.nan)
    z[at.row[visible]] = score[visible] / np.sqrt(information[visible])
    return Corrected(
        np.where(limit, standard - runs.enthalpy.value, np.nan),
        np.where(limit, standard, np.nan),
        np.where(limit, np.sqrt(variance), np.nan),
        z,
    )


def model_values(
    dilution: Dilution, position: Integers, molality: Floats, reference_temperature: float
) -> tuple[Floats, Floats, Floats]:
    """ΔsolH(m) of crystals of the fit at the reference temperature, its u, and the limiting law alone; kJ/mol.

    Parameters
    ----------
    dilution : Dilution
    position : int array (k,)
        Of each point's crystal in the layout's crystals.
    molality : array (k,), mol/kg
    reference_temperature : float, K
    """
    found = dilution.extrapolation
    block = found.problem.block_of_crystal[position]
    what = dilution.layout.electrolytes.composition.of(dilution.layout.block[block])
    law = limiting_law(molality, what.charge_factor, dilution.slope)
    temperature = np.full(len(molality), reference_temperature)
    further = further_terms(molality, temperature, what.charge_factor)[:, dilution.layout.terms]
    basis = np.hstack([empirical_terms(molality, temperature, what), further])
    zero = found.crystals.value[position]
    value = zero + law + np.einsum("kj,kj->k", basis, found.solution[block])
    # ΔsolH° and the parameters err together: their covariance within the block counts
    both = np.einsum("kj,kj->k", basis, found.with_solution[position])
    variance = found.crystals.u[position] ** 2 + 2 * both
    variance += np.einsum("ki,kij,kj->k", basis, found.solution_covariance[block], basis)
    return value, np.sqrt(np.maximum(variance, 0.0)), zero + law
