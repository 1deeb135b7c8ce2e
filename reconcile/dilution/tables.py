"""Tidy tables of what the dilution room found: runs, budgets, covariance, curves."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.dilution.models import TERMS, scale_of_parameters
from reconcile.dilution.season import Dilution, corrected_runs, model_values

Floats = NDArray[np.float64]

NOTHING = 1e-9  # of u: a line of rounding errors
MOST_LINES = 12  # of a budget; the rest as "other"
RANDOM_LINES = frozenset(
    (
        "heat", "weighing of the salt", "weighing of the water", "enthalpy as given", "molality as given",
        "temperature of the run", "repeatability", "scatter beyond the statement", "between batches",
    )
)  # fmt: skip
POINTS = 80  # of a curve
ONE_TEMPERATURE = 0.5  # K: straight lines are drawn through runs at one temperature only
ROUND = np.array([0.0, 0.001, 0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0])  # mol/kg


@dataclass(frozen=True, slots=True, eq=False)
class SharedCovariance:
    """Covariance of the standard enthalpies before the cycles, D + F Fᵀ, non-zero entries only."""

    salts: tuple[str, ...]
    private_variance: Floats  # (S,)
    shared: tuple[tuple[str, tuple[int, ...], tuple[float, ...]], ...]  # source, positions of salts, loadings


def covariance_of(campaign: Campaign, dilution: Dilution) -> SharedCovariance:
    """The ledger of the crystals as results carry it."""
    ledger = dilution.extrapolation.crystals
    loading = ledger.loading.tocsc()
    loading.eliminate_zeros()
    loading.sort_indices()
    shared = []
    for k in np.flatnonzero(np.diff(loading.indptr)).tolist():
        at = slice(loading.indptr[k], loading.indptr[k + 1])
        shared.append((ledger.sources.name[k], tuple(loading.indices[at].tolist()), tuple(loading.data[at].tolist())))
    names = tuple(campaign.salts[i].formula for i in dilution.layout.crystal.tolist())
    return SharedCovariance(names, ledger.private_variance, tuple(shared))


def budget_table(campaign: Campaign, dilution: Dilution) -> pd.DataFrame:
    """Uncertainty budget of each salt, largest first, at most twelve lines and the rest as "other"."""
    contribution, lines = dilution.extrapolation.crystals.budgets()
    order = np.argsort(-contribution, axis=1, kind="stable")
    ranked = np.take_along_axis(contribution, order, axis=1)
    rest = np.sqrt((ranked[:, MOST_LINES:] ** 2).sum(axis=1))
    ranked, order = ranked[:, :MOST_LINES], order[:, :MOST_LINES]
    salts = np.array([campaign.salts[i].formula for i in dilution.layout.crystal.tolist()], dtype=object)
    names = np.append(np.array(lines, dtype=object), "other")
    ranked = np.column_stack([ranked, rest])
    order = np.column_stack([order, np.full(len(rest), len(lines))])
    frame = pd.DataFrame(
        {
            "salt": np.repeat(salts, ranked.shape[1]),
            "source": names[order.ravel()],
            "contribution": ranked.ravel(),
        }
    )
    u = np.repeat(dilution.extrapolation.crystals.u, ranked.shape[1])
    return frame[frame["contribution"] > NOTHING * u].reset_index(drop=True)


def random_and_shared(dilution: Dilution) -> tuple[Floats, Floats]:
    """u of each crystal in two parts: what more runs of the same kind would shrink, and the rest."""
    contribution, lines = dilution.extrapolation.crystals.budgets()
    random = np.array([line in RANDOM_LINES for line in lines], dtype=bool)
    square = contribution**2
    return np.sqrt(square[:, random].sum(axis=1)), np.sqrt(square[:, ~random].sum(axis=1))


def parameters_of(dilution: Dilution) -> list[dict[str, tuple[float, float]]]:
    """∂β/∂T of each crystal's electrolyte with u, kg/(mol K), Cφ kg²/(mol² K); scaled where ions are more than two."""
    found = dilution.extrapolation
    what = dilution.layout.electrolytes.composition.of(dilution.layout.block)
    factor = scale_of_parameters(what)
    factor = np.where(np.isfinite(factor), factor, 1.0)
    value = found.solution[:, :4] / factor
    u = np.sqrt(found.solution_covariance[:, range(4), range(4)]) / np.abs(factor)
    exists = found.problem.parameter_column >= 0
    by_block = [
        {name: (float(value[b, j]), float(u[b, j])) for j, name in enumerate(TERMS) if exists[b, j]}
        for b in range(len(value))
    ]
    return [by_block[b] for b in found.problem.block_of_crystal.tolist()]


def runs_table(campaign: Campaign, runs: ReducedRuns, dilution: Dilution) -> pd.DataFrame:
    """One row a run, in the campaign's order (design, 6: tables/runs.csv)."""
    keys = campaign.runs.keys

    def text(code: NDArray[np.int64], labels: tuple[str, ...]) -> NDArray[np.object_]:
        return np.array([*labels, ""], dtype=object)[code]

    formulas = tuple(s.formula for s in campaign.salts)
    corrected = corrected_runs(campaign, runs, dilution)
    return pd.DataFrame(
        {
            "run": text(keys["run"].code, keys["run"].labels),
            "salt": text(campaign.salt, formulas),
            "sample": text(campaign.sample, campaign.samples.keys["sample"].labels),
            "calorimeter": text(campaign.calorimeter, campaign.calorimeters.keys["calorimeter"].labels),
            "batch": text(campaign.batch.code, campaign.batch.labels),
            "included": dilution.layout.included,
            "reason": dilution.layout.reason,
            "molality / (mol/kg)": runs.molality.value,
            "enthalpy / (kJ/mol)": runs.enthalpy.value,
            "u(enthalpy) / (kJ/mol)": runs.enthalpy.u,
            "dilution_correction / (kJ/mol)": corrected.correction,
            "standard_enthalpy / (kJ/mol)": corrected.standard_enthalpy,
            "u(standard_enthalpy) / (kJ/mol)": corrected.u,
            "standardised_residual": corrected.standardised_residual,
        }
    )


def curves_table(campaign: Campaign, runs: ReducedRuns, dilution: Dilution) -> pd.DataFrame:
    """Curves for the figures, 80 points a salt: model with u, limiting law, and the straight lines in m and in √m."""
    pieces = []
    weight_of_run = np.ones(len(campaign.runs))
    weight_of_run[dilution.layout.row] = dilution.extrapolation.fit.weight[: len(dilution.layout.row)]
    salt_of_row = campaign.salt[dilution.layout.row]
    for position, salt in enumerate(dilution.layout.crystal.tolist()):
        rows = dilution.layout.row[(salt_of_row == salt) & (dilution.extrapolation.problem.salt >= 0)]
        m = runs.molality.value[rows]
        plain = rows[runs.initial_molality[rows] == 0]
        x, y = runs.molality.value[plain], runs.enthalpy.value[plain]
        weight = weight_of_run[plain]
        at = np.linspace(0, 1.04 * np.sqrt(m.max()), POINTS) ** 2
        value, u, law = model_values(dilution, np.full(POINTS, position), at, campaign.reference_temperature)
        lines = {}
        for name, shape in (("line_m", lambda x: x), ("line_root", np.sqrt)):
            drawable = len(x) > 2 and np.ptp(x) > 0 and np.ptp(runs.temperature[plain]) < ONE_TEMPERATURE
            fitted = np.polyfit(shape(x), y, 1, w=np.sqrt(weight)) if drawable else np.full(2, np.nan)
            lines[name] = np.polyval(fitted, shape(at))
        piece = {
            "salt": campaign.salts[salt].formula,
            "molality": at,
            "enthalpy": value,
            "u": u,
            "limiting_law": law,
            **lines,
        }
        pieces.append(pd.DataFrame(piece))
    columns = ["salt", "molality", "enthalpy", "u", "limiting_law", "line_m", "line_root"]
    return pd.concat(pieces, ignore_index=True) if pieces else pd.DataFrame(columns=columns)


def smoothed_of(campaign: Campaign, runs: ReducedRuns, dilution: Dilution) -> list[list[dict[str, float]]]:
    """ΔsolH at round molalities within each salt's range, and at infinite dilution."""
    crystals = len(dilution.layout.crystal)
    dissolving = dilution.extrapolation.problem.salt >= 0
    salt, m = dilution.extrapolation.problem.salt[dissolving], runs.molality.value[dilution.layout.row][dissolving]
    low, high = np.full(crystals, np.inf), np.zeros(crystals)
    np.minimum.at(low, salt, m)
    np.maximum.at(high, salt, m)
    within = (0.9 * low[:, None] <= ROUND) & (1.1 * high[:, None] >= ROUND)
    position, column = np.nonzero(within | (ROUND == 0))
    at = ROUND[column]
    value, u, _ = model_values(dilution, position, at, campaign.reference_temperature)
    out: list[list[dict[str, float]]] = [[] for _ in range(crystals)]
    for p, a, v, w in zip(position.tolist(), at.tolist(), value.tolist(), u.tolist(), strict=True):
        out[p].append({"molality": a, "enthalpy": v, "u": w})
    return out
