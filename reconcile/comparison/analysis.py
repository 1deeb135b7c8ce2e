"""Everything that was found in a campaign, as tidy tables named as in results.json."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
import pandas as pd

from reconcile.bias import Suspicions
from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.comparison.told import assumptions_table, sources_table
from reconcile.cycles import Adjustment
from reconcile.dilution import Dilution
from reconcile.dilution.diagnostics import Diagnostics, diagnose
from reconcile.dilution.tables import (
    SharedCovariance,
    budget_table,
    covariance_of,
    curves_table,
    parameters_of,
    random_and_shared,
    runs_table,
    smoothed_of,
)

VERDICTS = {"satisfactory": "agrees", "questionable": "questionable", "unsatisfactory": "disagrees"}


@dataclass(frozen=True, eq=False)
class Analysis:
    """A campaign and all that was found in it. Tables are made when first asked for."""

    campaign: Campaign
    reduced: ReducedRuns
    dilution: Dilution
    adjusted: Adjustment
    suspicions: Suspicions
    comparison: pd.DataFrame
    published: pd.DataFrame  # enthalpies of solution, a row a salt of the fit
    parameters_used: pd.DataFrame  # published dilution parameters, index electrolyte
    heat_capacities: pd.DataFrame  # ΔsolC_p°, a row a salt
    saturation: np.ndarray[Any, np.dtype[np.float64]]  # mol/kg, of the salts of the fit; NaN where none is held

    def __repr__(self) -> str:
        """One line for a notebook or a terminal."""
        n, s = int(self.dilution.layout.included.sum()), len(self.dilution.layout.crystal)
        return f"<Analysis of {self.campaign.title!r}: {s} salts from {n} of {len(self.campaign.runs)} runs>"

    @cached_property
    def salts(self) -> pd.DataFrame:
        """One row a salt, in the campaign's order."""
        return _salts(self)

    @cached_property
    def diagnostics(self) -> Diagnostics:
        """What to mind of each extrapolation; enters no value."""
        return diagnose(self.campaign, self.reduced, self.dilution, self.saturation)

    @cached_property
    def runs(self) -> pd.DataFrame:
        """One row a run."""
        table = runs_table(self.campaign, self.reduced, self.dilution)
        return table.assign(**{"influence / (kJ/mol)": self.diagnostics.influence})

    @cached_property
    def covariance(self) -> SharedCovariance:
        """Of the standard enthalpies, before the cycles."""
        return covariance_of(self.campaign, self.dilution)

    @property
    def adjustment(self) -> dict[str, float | int | None]:
        """χ² of the adjustment of all salts with the references."""
        a = self.adjusted
        return {"chi_square": a.chi_square, "degrees_of_freedom": a.degrees_of_freedom, "p_value": a.p_value}

    @property
    def bias(self) -> pd.DataFrame:
        """One row a hypothesis, most significant first."""
        return self.suspicions.hypotheses

    @property
    def reconciled(self) -> pd.DataFrame:
        """One row a salt in the adjustment."""
        return self.adjusted.reconciled

    @property
    def references(self) -> pd.DataFrame:
        """One row a reference value in the adjustment."""
        return self.adjusted.references

    @property
    def cycles(self) -> pd.DataFrame:
        """One row a cycle."""
        return self.adjusted.cycles

    @cached_property
    def budget(self) -> pd.DataFrame:
        """Uncertainty budgets, at most twelve lines a salt and the rest."""
        return budget_table(self.campaign, self.dilution)

    @cached_property
    def assumptions(self) -> pd.DataFrame:
        """What had to be assumed, and what it contributes."""
        return assumptions_table(self.campaign, self.reduced, self.dilution, self.adjusted)

    @cached_property
    def sources(self) -> pd.DataFrame:
        """Every reference value used, with its status."""
        return sources_table(self.campaign, self.dilution, self.adjusted, self.parameters_used, self.heat_capacities)

    @cached_property
    def curves(self) -> pd.DataFrame:
        """Curves for the figures."""
        return curves_table(self.campaign, self.reduced, self.dilution)


def _to_mind(analysis: Analysis) -> list[tuple[str, ...]]:
    """The diagnostics of each salt of the fit, and what the significant suspects would do to it."""
    change, u = analysis.suspicions.change, analysis.dilution.extrapolation.crystals.u
    told = []
    for flags, moved, of in zip(analysis.diagnostics.flags, change.tolist(), u.tolist(), strict=True):
        suspect = (
            f"the suspects, if they are real, have moved it by {-moved:+.2g} kJ/mol; its interval does not hold them"
        )
        told.append((suspect, *flags) if abs(moved) > of else flags)
    return told


def _salts(analysis: Analysis) -> pd.DataFrame:
    campaign, dilution, limits = analysis.campaign, analysis.dilution, analysis.dilution.extrapolation
    count = len(campaign.salts)
    at = dilution.layout.crystal
    block = limits.problem.block_of_crystal
    random, shared = random_and_shared(dilution)
    diagnostics = analysis.diagnostics

    def spread(values: np.ndarray, empty: float = np.nan) -> np.ndarray:
        out = np.full(count, empty)
        out[at] = values
        return out

    def spread_objects(values: list[Any], empty: object) -> np.ndarray:
        out = np.empty(count, dtype=object)
        out[:] = [empty] * count
        for i, value in zip(at.tolist(), values, strict=True):
            out[i] = value
        return out

    included = dilution.layout.included
    runs = np.bincount(campaign.salt[included], minlength=count)
    low, high = np.full(count, np.inf), np.full(count, -np.inf)
    np.minimum.at(low, campaign.salt[included], analysis.reduced.molality.value[included])
    np.maximum.at(high, campaign.salt[included], analysis.reduced.molality.value[included])
    between = np.full(len(at), np.nan)
    for component, size in zip(limits.problem.components, limits.sizes, strict=True):
        if component.group is not None:
            own = limits.problem.salt >= 0
            total = np.bincount(limits.problem.salt[own], component.scale[own], minlength=len(at))
            scale = total / np.bincount(limits.problem.salt[own], minlength=len(at))
            between = size * scale
    by_salt = dict(zip(analysis.comparison["salt"], analysis.comparison["verdict"], strict=True))
    formulas = [s.formula for s in campaign.salts]
    verdict = [VERDICTS[by_salt[f]] if f in by_salt else "no reference" for f in formulas]
    verdict = ["no limit" if i in dilution.layout.no_limit else v for i, v in enumerate(verdict)]
    model = np.where(limits.problem.prior.published[block], "published parameters", "population").tolist()
    value, u = spread(limits.crystals.value), spread(limits.crystals.u)
    return pd.DataFrame(
        {
            "salt": formulas,
            "molar_mass": [s.molar_mass for s in campaign.salts],
            "temperature": campaign.reference_temperature,
            "standard_enthalpy": value,
            "u": u,
            "degrees_of_freedom": spread(limits.degrees_of_freedom),
            "coverage_factor": spread(limits.coverage_factor),
            "interval_low": spread(limits.interval[:, 0]),
            "interval_high": spread(limits.interval[:, 1]),
            "u_random": spread(random),
            "u_shared": spread(shared),
            "runs": runs,
            "molality_min": np.where(runs > 0, low, np.nan),
            "molality_max": np.where(runs > 0, high, np.nan),
            "dilution_model": spread_objects(model, "limiting law only"),
            "prior_share": spread(limits.prior_share),
            "prior_conflict_p": spread(limits.prior_conflict_p[block]),
            "parameters": spread_objects(parameters_of(dilution), {}),
            "slope": dilution.slope,
            "free_slope": spread(diagnostics.free_slope),
            "u_free_slope": spread(diagnostics.u_free_slope),
            "line_m": spread(diagnostics.line_m),
            "line_root": spread(diagnostics.line_root),
            "heat_capacity_change": spread(diagnostics.heat_capacity_change),
            "u_heat_capacity_change": spread(diagnostics.u_heat_capacity_change),
            "between_batch_sd": spread(between),
            "verdict": verdict,
            "remarks": spread_objects(_to_mind(analysis), ()),
            "reason": [dilution.layout.no_limit.get(i, "") for i in range(count)],
            "smoothed": spread_objects(smoothed_of(campaign, analysis.reduced, dilution), []),
            "standard_enthalpy_without_suspects": spread(limits.crystals.value + analysis.suspicions.change),
            "u_without_suspects": spread(np.sqrt(limits.crystals.u**2 + analysis.suspicions.variance_of_change)),
            "recommended_value": value,
            "recommended_u": u,
            "recommended_from": np.where(np.isfinite(value), "measured", "none"),
        }
    )
