"""A campaign's reduced runs laid out as one dilution problem."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.chemistry import water
from reconcile.dilution.electrolytes import Electrolytes, electrolytes, why_no_limit
from reconcile.dilution.further_terms import LINES, terms_needed
from reconcile.dilution.observing import basis_of, observed_part
from reconcile.dilution.priors import PublishedSets, prior_of
from reconcile.dilution.problem import Problem
from reconcile.dilution.scatter import components_of
from reconcile.dilution.temperature import HEAT_CAPACITY, LINE, U_CURVATURE, HeatCapacityChange
from reconcile.statistics import Collector, Ledger, by_member

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]


class NothingToFit(ValueError):
    """No run of the campaign is left for the fit; the message says why and what to do."""


@dataclass(frozen=True, slots=True, eq=False)
class Layout:
    """The problem, and which run, salt and electrolyte of the campaign each of its parts is."""

    problem: Problem
    electrolytes: Electrolytes  # of all salts of the campaign
    block: Integers  # (B of the problem,) position in electrolytes
    crystal: Integers  # (C,) position in the campaign's salts
    row: Integers  # (rows of the problem,) position in the campaign's runs
    included: Booleans  # (n,)
    reason: NDArray[np.object_]  # (n,) why a run is not in the problem
    no_limit: dict[int, str]  # salt ─► why it has no standard enthalpy
    observed: Ledger  # (n,) all runs, those left out too
    basis: Floats  # (n, k)
    block_of_run: Integers  # (n,) of the problem; 0 where its salt is not in it
    terms: Booleans  # (8,) further terms in use


def lay_out(campaign: Campaign, runs: ReducedRuns, sets: PublishedSets, heat_capacity: HeatCapacityChange) -> Layout:
    """Sort runs into crystals and electrolytes, and put together what is known of each before the fit.

    Raises
    ------
    NothingToFit
        If no dissolution is left.
    """
    what = electrolytes(campaign.salts)
    no_limit = {i: text for i, salt in enumerate(campaign.salts) if (text := why_no_limit(salt))}
    included, reason = _included(campaign, runs, no_limit)
    for i in _without_scatter(campaign, runs, included):
        no_limit[i] = "one run a salt and no uncertainty stated: nothing tells how far it may be wrong"
    included, reason = _included(campaign, runs, no_limit)
    dissolved = set(campaign.salt[included & runs.dissolves].tolist())
    diluted = set(campaign.salt[included].tolist()) - dissolved
    for i in set(range(len(campaign.salts))) - dissolved - set(no_limit):
        no_limit[i] = "only heats of dilution are included" if i in diluted else "none of its runs is included"
    row = np.flatnonzero(included)
    if not dissolved:
        why = "; ".join(sorted({str(r) for r in reason if r})) or "there are only heats of dilution"
        raise NothingToFit(
            f"No dissolution is left to fit: {why}. Expected at least one. Add one, or take one back in."
        )
    crystal = np.unique(campaign.salt[included & runs.dissolves])
    salt = np.where(runs.dissolves[row], np.searchsorted(crystal, campaign.salt[row]), -1)
    block_of_salt = what.of_salt[campaign.salt]
    used = np.unique(block_of_salt[row])
    block_of_crystal = np.searchsorted(used, what.of_salt[crystal])
    here = Electrolytes(
        tuple(what.name[i] for i in used.tolist()), block_of_crystal, tuple(what.charge_type[i] for i in used.tolist()),
        what.composition.of(used),
    )  # fmt: skip
    position = np.zeros(len(what.name), dtype=np.int64)
    position[used] = np.arange(len(used))
    block_of_run = position[block_of_salt]
    allowed = np.ones(len(used), bool)
    np.logical_and.at(allowed, block_of_run[row], campaign.published_dilution[campaign.salt[row]])
    prior = prior_of(here, sets, allowed)

    observed = observed_part(
        runs, here, block_of_run, prior.mean, water.debye_hueckel_slope(runs.temperature),
        water.slope_relative_u(runs.temperature), heat_capacity.value[campaign.salt], campaign.reference_temperature,
    )  # fmt: skip
    factor = here.composition.charge_factor[block_of_run]
    observed = _to_reference_temperature(observed, campaign, runs, factor, heat_capacity)
    highest = np.maximum(runs.molality.value, runs.initial_molality)
    needed = terms_needed(runs.temperature[row], highest[row], here, block_of_run[row])
    terms: Booleans = np.asarray(needed.any(axis=0))
    basis = basis_of(runs, here, block_of_run, terms)
    fitted = observed if included.all() else observed.take(row)
    components = components_of(
        runs.enthalpy.value[row], runs.amount[row], np.sqrt(fitted.private_variance), runs.unstated[row], salt,
        campaign.batch.code[row], campaign.between_batches[campaign.salt][row],
    )  # fmt: skip
    problem = Problem(
        fitted, salt, block_of_run[row], len(crystal), block_of_crystal, basis if included.all() else basis[row], prior,
        components, sparse.csr_array((len(row), 0)), here.composition.alpha2 > 0, needed[:, terms],
        tuple(line for line, there in zip(LINES, terms, strict=True) if there),
    )  # fmt: skip
    return Layout(problem, what, used, crystal, row, included, reason, no_limit, observed, basis, block_of_run, terms)


def screened_for(campaign: Campaign, runs: ReducedRuns) -> sparse.csr_array:
    """What the screen looks for beside single runs: a gain of each calorimeter and a wrong composition of each lot.

    Returns
    -------
    sparse (n, calorimeters + lots): the run's enthalpy in the columns of its calorimeter and of its lot
    """
    parts = []
    for code, members in ((campaign.calorimeter, len(campaign.calorimeters)), (campaign.sample, len(campaign.samples))):
        parts.append(by_member(runs.enthalpy.value, code, members))
    return sparse.csr_array(sparse.hstack(parts, format="csr"))


def _without_scatter(campaign: Campaign, runs: ReducedRuns, included: Booleans) -> list[int]:
    """Salts of runs without any stated uncertainty in a campaign where no two such runs can be compared."""
    silent = campaign.salt[included & runs.unstated & runs.dissolves]
    salts = np.unique(silent)
    return salts.tolist() if len(silent) == len(salts) else []


def _included(campaign: Campaign, runs: ReducedRuns, no_limit: dict[int, str]) -> tuple[Booleans, NDArray[np.object_]]:
    reason = np.array(campaign.reason, dtype=object)
    included = campaign.included.copy()
    above = included & (runs.molality.value > campaign.max_molality[campaign.salt])
    reason[above] = "above max_molality"
    unlimited = included & ~above & np.isin(campaign.salt, sorted(no_limit))
    why = np.array([no_limit.get(i, "") for i in range(len(campaign.salts))], dtype=object)
    reason[unlimited] = "no limit: " + why[campaign.salt[unlimited]]
    return included & ~above & ~unlimited, reason


def _to_reference_temperature(
    observed: Ledger, campaign: Campaign, runs: ReducedRuns, charge_factor: Floats, change: HeatCapacityChange
) -> Ledger:
    """Add the sources of the way to the reference temperature at infinite dilution."""
    collected = Collector(len(observed))
    away = runs.temperature - campaign.reference_temperature
    away = np.where((np.abs(away) > 1e-9) & runs.dissolves, away, 0.0)
    names = [s.formula for s in campaign.salts]
    if away.any():
        salt = np.where(away != 0, campaign.salt, -1)
        collected.group(salt, change.u, [f"{HEAT_CAPACITY} of {s}" for s in names], LINE, -away / 1000)
        first = np.zeros(len(names))
        first[campaign.salt] = charge_factor
        curvature = [f"{HEAT_CAPACITY} of {s}: its change with temperature" for s in names]
        collected.group(salt, U_CURVATURE * first, curvature, LINE, -(away**2) / 2000)
    sources, (loading,) = collected.finish()
    return observed.with_sources(loading, sources) if len(sources) else observed
