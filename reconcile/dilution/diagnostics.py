"""Diagnostics of the extrapolation: a free slope, straight lines, what each run is worth, what the runs cannot tell."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.chemistry import water
from reconcile.dilution.models import limiting_law
from reconcile.dilution.observing import along
from reconcile.dilution.season import Dilution
from reconcile.dilution.tables import ONE_TEMPERATURE
from reconcile.dilution.temperature import HEAT_CAPACITY

Floats = NDArray[np.float64]

DILUTE, CONCENTRATED = 0.1, 1.0  # mol/kg of ionic strength: no run below, or all runs above, is told
NARROW = 2.0  # ratio of the largest to the smallest molality below which the range is called narrow
CONFLICT = 0.01  # p below which runs and prior are said to contradict each other
MOVES = 1.0  # times u: a run that moves its salt by more is told


@dataclass(frozen=True, slots=True, eq=False)
class Diagnostics:
    """Of the crystals of the fit; nothing here enters any value."""

    free_slope: Floats  # (C,) A_H that the runs and the parameters' prior would choose, kJ kg^½ mol^−3/2
    u_free_slope: Floats  # (C,)
    line_m: Floats  # (C,) what a straight line in m would have given at infinite dilution, kJ/mol; NaN below three runs
    line_root: Floats  # (C,) the same for a line in √m
    heat_capacity_change: Floats  # (C,) ΔsolC_p° after the fit, J/(K mol)
    u_heat_capacity_change: Floats  # (C,)
    influence: Floats  # (n,) standard enthalpy with less that without the run, kJ/mol; NaN outside the fit
    flags: tuple[tuple[str, ...], ...]  # (C,) what to mind; empty: nothing speaks against the extrapolation


def diagnose(campaign: Campaign, runs: ReducedRuns, dilution: Dilution, saturation: Floats) -> Diagnostics:
    """All diagnostics of a solved campaign.

    Parameters
    ----------
    campaign, runs, dilution
    saturation : array (C,)
        Molality of the saturated solution of each crystal's electrolyte, mol/kg, NaN where none is held.
    """
    slope, u_slope = _free_slope(runs, dilution)
    block = dilution.extrapolation.problem.block_of_crystal
    lines = _straight_lines(runs, dilution)
    change, u_change = _heat_capacity(campaign, dilution)
    influence = _influence(dilution, len(campaign.runs))
    flags = _flags(runs, dilution, saturation, influence)
    return Diagnostics(slope[block], u_slope[block], lines[0], lines[1], change, u_change, influence, flags)


def _free_slope(runs: ReducedRuns, dilution: Dilution) -> tuple[Floats, Floats]:
    """Slope of each electrolyte at the reference temperature, freed from theory beside everything else."""
    at, fit = dilution.layout, dilution.extrapolation.fit
    factor = at.electrolytes.composition.charge_factor[at.block][at.block_of_run]
    relative = water.debye_hueckel_slope(runs.temperature) / dilution.slope  # theory keeps the temperature's share
    per_slope = along(runs, lambda m: limiting_law(m, factor, relative))[at.row]
    loading = np.concatenate([per_slope, np.zeros(len(fit.weight) - len(per_slope))])
    score, information = fit.respond_by_block(loading)
    able = information > 1e-9
    size = np.where(able, score / np.where(able, information, 1.0), np.nan)
    return dilution.slope + size, np.where(able, 1 / np.sqrt(np.where(able, information, 1.0)), np.nan)


def _straight_lines(runs: ReducedRuns, dilution: Dilution) -> tuple[Floats, Floats]:
    """Weighted straight lines through each crystal's dissolutions in water, in m and in √m, at m = 0."""
    found, at = dilution.extrapolation, dilution.layout
    plain = (found.problem.salt >= 0) & (runs.initial_molality[at.row] == 0)
    code, rows = found.problem.salt[plain], at.row[plain]
    weight = found.fit.weight[: len(at.row)][plain]
    y, m = runs.enthalpy.value[rows], runs.molality.value[rows]
    crystals = len(at.crystal)
    low, high = np.full(crystals, np.inf), np.full(crystals, -np.inf)
    np.minimum.at(low, code, runs.temperature[rows])
    np.maximum.at(high, code, runs.temperature[rows])

    def total(values: Floats) -> Floats:
        return np.asarray(np.bincount(code, weight * values, minlength=crystals), dtype=np.float64)

    out = []
    for x in (m, np.sqrt(m)):
        w, wx, wxx, wy, wxy = total(np.ones_like(x)), total(x), total(x * x), total(y), total(x * y)
        determinant = w * wxx - wx**2
        able = (np.bincount(code, minlength=crystals) > 2) & (high - low < ONE_TEMPERATURE)
        able &= determinant > 1e-9 * np.maximum(w * wxx, 1e-300)
        out.append(np.where(able, (wxx * wy - wx * wxy) / np.where(able, determinant, 1.0), np.nan))
    return out[0], out[1]


def _heat_capacity(campaign: Campaign, dilution: Dilution) -> tuple[Floats, Floats]:
    """ΔsolC_p° of each crystal: as held, moved by what runs at several temperatures say."""
    salts = dilution.layout.crystal
    value, u = dilution.heat_capacity.value[salts], dilution.heat_capacity.u[salts]
    names = [f"{HEAT_CAPACITY} of {campaign.salts[i].formula}" for i in salts.tolist()]
    moved, variance = dilution.extrapolation.fit.narrow_sources(names)
    return value + u * moved, u * np.sqrt(variance)


def _influence(dilution: Dilution, count: int) -> Floats:
    """What each run does to the limit of its own crystal: estimate with it less estimate without it."""
    found, at = dilution.extrapolation, dilution.layout
    fit, crystal = found.fit, found.problem.salt
    n = len(at.row)
    gain = np.zeros(n)
    for chosen, solved in fit.coloured(np.arange(found.problem.crystals)):
        mine = np.isin(crystal, chosen)
        gain[mine] = (fit.inner[:n] @ solved)[mine]
    gain -= fit.wide_share(np.maximum(crystal, 0), n)
    score, information = (part[:n] for part in fit.single_observations())
    able = (information > 1e-6 * fit.weight[:n]) & (crystal >= 0)
    moved = np.full(n, np.nan)
    moved[able] = gain[able] * fit.weight[:n][able] * score[able] / information[able]
    out = np.full(count, np.nan)
    out[at.row] = moved
    return out


def _flags(runs: ReducedRuns, dilution: Dilution, saturation: Floats, influence: Floats) -> tuple[tuple[str, ...], ...]:
    """What to mind of each crystal, in words."""
    found, at = dilution.extrapolation, dilution.layout
    crystals = len(at.crystal)
    dissolving = found.problem.salt >= 0
    code, rows = found.problem.salt[dissolving], at.row[dissolving]
    m = runs.molality.value[rows]
    low, high = np.full(crystals, np.inf), np.zeros(crystals)
    np.minimum.at(low, code, m)
    np.maximum.at(high, code, m)
    factor = at.electrolytes.composition.charge_factor[at.block][found.problem.block_of_crystal]
    above = np.bincount(code, m > saturation[code], minlength=crystals)
    strong = np.bincount(code, np.abs(influence[rows]) > MOVES * found.crystals.u[code], minlength=crystals)
    number = np.bincount(code, minlength=crystals)
    conflict = found.prior_conflict_p[found.problem.block_of_crystal] < CONFLICT
    out = []
    for c in range(crystals):  # salts
        told = []
        if number[c] == 1:
            told.append("a single run")
        elif high[c] < NARROW * low[c]:
            told.append(f"a narrow range of molality, {low[c]:.2g} to {high[c]:.2g} mol/kg")
        if low[c] * factor[c] > CONCENTRATED:
            told.append(f"all runs above an ionic strength of {CONCENTRATED:g} mol/kg")
        elif low[c] * factor[c] > DILUTE:
            told.append(f"no run below an ionic strength of {DILUTE:g} mol/kg: the last stretch rests on the prior")
        if above[c]:
            told.append(
                f"{int(above[c])} of {number[c]} runs above saturation, {saturation[c]:.2g} mol/kg: not a solution"
            )
        if conflict[c]:
            told.append("the runs contradict the prior of the dilution parameters")
        if strong[c]:
            told.append(f"{int(strong[c])} of {number[c]} runs move the limit by more than its u")
        out.append(tuple(told))
    return tuple(out)
