"""A campaign's reduced runs laid out as one dilution problem, and solved."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.chemistry import water
from reconcile.dilution.electrolytes import Electrolytes, electrolytes, why_no_limit
from reconcile.dilution.extrapolation import Extrapolation, extrapolate
from reconcile.dilution.further_terms import further_terms, terms_needed
from reconcile.dilution.models import empirical_terms, limiting_law
from reconcile.dilution.priors import PublishedSets, prior_of
from reconcile.dilution.problem import Problem, observed_part
from reconcile.dilution.scatter import components_of
from reconcile.dilution.temperature import U_CURVATURE, HeatCapacityChange
from reconcile.statistics import Collector, Ledger

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class Dilution:
    """Every salt at infinite dilution, every run corrected to it."""

    extrapolation: Extrapolation
    electrolytes: Electrolytes  # of all salts of the campaign
    block: Integers  # (B of the fit,) position in electrolytes
    crystal: Integers  # (C,) position in the campaign's salts
    row: Integers  # (rows of the fit,) position in the campaign's runs
    included: Booleans  # (n,)
    reason: NDArray[np.object_]  # (n,) why a run is not in the fit
    no_limit: dict[int, str]  # salt ─► why it has no standard enthalpy
    correction: Floats  # (n,) kJ/mol: standard enthalpy of a run less its enthalpy
    standard: Ledger  # (n,) kJ/mol: each run at infinite dilution and the reference temperature
    standardised_residual: Floats  # (n,) NaN outside the fit
    heat_capacity: HeatCapacityChange  # (S,)
    slope: float  # A_H at the reference temperature, kJ kg^½ mol^−3/2

    def loadings(self, of_runs: sparse.csr_array) -> sparse.csr_array:
        """Loadings of hypotheses on the campaign's runs (n, h) as loadings on the fit's observations."""
        return self.extrapolation.pad(of_runs[self.row])


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
    """
    what = electrolytes(campaign.salts)
    no_limit = {i: text for i, salt in enumerate(campaign.salts) if (text := why_no_limit(salt))}
    included, reason = _included(campaign, runs, no_limit)
    for i in set(range(len(campaign.salts))) - set(campaign.salt[included].tolist()) - set(no_limit):
        no_limit[i] = "none of its runs is included"
    row = np.flatnonzero(included)
    crystal, salt = np.unique(campaign.salt[row], return_inverse=True)
    used, block_of_crystal = np.unique(what.of_salt[crystal], return_inverse=True)
    block = block_of_crystal[salt]
    here = Electrolytes(
        tuple(what.name[i] for i in used.tolist()), block_of_crystal, tuple(what.charge_type[i] for i in used.tolist()),
        what.composition.of(used),
    )  # fmt: skip
    allowed = np.ones(len(used), bool)
    np.logical_and.at(allowed, block_of_crystal, campaign.published_dilution[crystal])
    prior = prior_of(here, sets, allowed)

    temperature = runs.temperature
    slope, relative_u = water.debye_hueckel_slope(temperature), water.slope_relative_u(temperature)
    all_blocks = np.full(len(what.name), 0)
    all_blocks[used] = np.arange(len(used))
    block_of_run = all_blocks[what.of_salt[campaign.salt]]
    observed, basis = observed_part(
        runs.enthalpy, runs.molality, temperature, runs.u_temperature, here, block_of_run, prior.mean, slope, relative_u,
        heat_capacity.value[campaign.salt], campaign.reference_temperature,
    )  # fmt: skip
    observed = _to_reference_temperature(
        observed, campaign, runs, here.composition.charge_factor[block_of_run], heat_capacity
    )
    stated = np.sqrt(observed.private_variance)
    between = campaign.between_batches[campaign.salt]
    components = components_of(
        runs.enthalpy.value[row], runs.amount[row], stated[row], runs.unstated[row], salt,
        campaign.batch.code[row], between[row],
    )  # fmt: skip
    extra = further_terms(runs.molality.value, temperature, here.composition.charge_factor[block_of_run])
    basis = np.hstack([basis, extra])
    problem = Problem(
        observed.take(row), salt, block, len(crystal), block_of_crystal, basis[row], prior, components,
        sparse.csr_array((len(row), 0)), here.composition.alpha2 > 0, terms_needed(extra[row], runs.molality.value[row], here, block),
    )  # fmt: skip
    found = extrapolate(problem, sparse.csr_array(screened_for(campaign, runs)[row]))

    moved = np.einsum("nj,nj->n", basis, found.moved[block_of_run])
    correction = observed.value - moved - runs.enthalpy.value
    by_terms = np.sqrt(np.einsum("ni,nij,nj->n", basis, found.solution_covariance[block_of_run], basis))
    standard = Ledger(observed.value - moved, observed.private, observed.lines, observed.loading, observed.sources)
    standard = standard.with_private(by_terms[:, None], ["dilution of the run"])
    for component, size in zip(components, found.sizes, strict=True):
        scale = np.zeros(len(included))
        scale[row] = size * component.scale
        standard = standard.with_private(scale[:, None], [component.line])
    score, information = found.fit.single_observations()
    z = np.full(len(included), np.nan)
    n = len(row)
    visible = information[:n] > 1e-9 * found.fit.weight[:n]
    z[row[visible]] = score[:n][visible] / np.sqrt(information[:n][visible])
    limit = np.isin(campaign.salt, crystal)
    return Dilution(
        found, what, used, crystal, row, included, reason, no_limit,
        np.where(limit, correction, np.nan),
        Ledger(np.where(limit, standard.value, np.nan), standard.private, standard.lines, standard.loading, standard.sources),
        z, heat_capacity, float(water.debye_hueckel_slope(np.array([campaign.reference_temperature]))[0]),
    )  # fmt: skip


def screened_for(campaign: Campaign, runs: ReducedRuns) -> sparse.csr_array:
    """What the screen looks for beside single runs: a gain of each calorimeter and a wrong composition of each lot.

    Returns
    -------
    sparse (n, calorimeters + lots): the run's enthalpy in the columns of its calorimeter and of its lot
    """
    parts = []
    for code, members in ((campaign.calorimeter, len(campaign.calorimeters)), (campaign.sample, len(campaign.samples))):
        named = np.flatnonzero(code >= 0)
        shape = (len(campaign.runs), members)
        parts.append(sparse.csr_array((runs.enthalpy.value[named], (named, code[named])), shape=shape))
    return sparse.csr_array(sparse.hstack(parts, format="csr"))


def _included(campaign: Campaign, runs: ReducedRuns, no_limit: dict[int, str]) -> tuple[Booleans, NDArray[np.object_]]:
    reason = np.array(campaign.reason, dtype=object)
    included = campaign.included.copy()
    above = included & (runs.molality.value > campaign.max_molality[campaign.salt])
    reason[above] = "above max_molality"
    unlimited = included & ~above & np.isin(campaign.salt, sorted(no_limit))
    reason[unlimited] = "its salt has no limit at infinite dilution"
    return included & ~above & ~unlimited, reason


def _to_reference_temperature(
    observed: Ledger, campaign: Campaign, runs: ReducedRuns, charge_factor: Floats, change: HeatCapacityChange
) -> Ledger:
    """Add the sources of the way to the reference temperature at infinite dilution."""
    collected = Collector(len(observed))
    away = runs.temperature - campaign.reference_temperature
    away = np.where(np.abs(away) > 1e-9, away, 0.0)
    names = [s.formula for s in campaign.salts]
    if away.any():
        salt = np.where(away != 0, campaign.salt, -1)
        line = "heat capacity of dissolution"
        collected.group(salt, change.u, [f"ΔsolCp° of {s}" for s in names], line, -away / 1000)
        first = np.zeros(len(names))
        first[campaign.salt] = charge_factor
        curvature = [f"ΔsolCp° of {s}: its change with temperature" for s in names]
        collected.group(salt, U_CURVATURE * first, curvature, line, -(away**2) / 2000)
    sources, (loading,) = collected.finish()
    return observed.with_sources(loading, sources) if len(sources) else observed


def model_values(
    dilution: Dilution, position: Integers, molality: Floats, reference_temperature: float
) -> tuple[Floats, Floats, Floats]:
    """ΔsolH(m) of crystals of the fit at the reference temperature, its u, and the limiting law alone; kJ/mol.

    Parameters
    ----------
    dilution : Dilution
    position : int array (k,)
        Of each point's crystal in dilution.crystal.
    molality : array (k,), mol/kg
    reference_temperature : float, K
    """
    found = dilution.extrapolation
    block = found.problem.block_of_crystal[position]
    what = dilution.electrolytes.composition.of(dilution.block[block])
    law = limiting_law(molality, what.charge_factor, dilution.slope)
    temperature = np.full(len(molality), reference_temperature)
    basis = np.hstack(
        [empirical_terms(molality, temperature, what), further_terms(molality, temperature, what.charge_factor)]
    )
    zero = found.crystals.value[position]
    value = zero + law + np.einsum("kj,kj->k", basis, found.solution[block])
    # ΔsolH° and the parameters err together: their covariance within the block counts
    both = np.einsum("kj,kj->k", basis, found.with_solution[position])
    variance = found.crystals.u[position] ** 2 + 2 * both
    variance += np.einsum("ki,kij,kj->k", basis, found.solution_covariance[block], basis)
    return value, np.sqrt(np.maximum(variance, 0.0)), zero + law
