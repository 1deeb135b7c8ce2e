"""What the report must tell: everything assumed, and every reference value used."""

from __future__ import annotations

import numpy as np
import pandas as pd

from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.cycles import Adjustment
from reconcile.dilution import Dilution

SOURCE_COLUMNS = ["quantity", "species", "value", "u", "unit", "source", "year", "status", "used_for"]
FEW = 6  # names printed before "and n more"


def assumptions_table(campaign: Campaign, runs: ReducedRuns, dilution: Dilution, adjusted: Adjustment) -> pd.DataFrame:
    """One row an assumption: text, whom it affects, its part of u (root mean square over those salts, kJ/mol)."""
    limits = dilution.extrapolation
    contribution, lines = limits.crystals.budgets()
    formulas = np.array([campaign.salts[i].formula for i in dilution.layout.crystal.tolist()], dtype=object)
    rows: list[tuple[str, str, float]] = [(r.text, r.affects, np.nan) for r in campaign.remarks]

    def cost(line: str, of: np.ndarray | None = None) -> float:
        if line not in lines:
            return 0.0
        column = contribution[:, lines.index(line)] if of is None else contribution[of, lines.index(line)]
        return float(np.sqrt(np.mean(column**2))) if len(column) else 0.0

    for component, size in zip(limits.problem.components, limits.sizes, strict=True):
        if component.line == "repeatability":
            text = f"{component.name}: nothing is stated, estimated from the runs as {size:.3g} {component.unit}"
        elif component.line == "between batches":
            text = f"scatter between batches, one effect a batch and salt: estimated as {size:.3g} {component.unit}"
        else:
            unit = "J" if component.unit == "J" else "times what was stated"
            text = f"{component.name}: estimated as {size:.3g} {unit}"
        of_crystal = limits.problem.salt[component.scale > 0]
        rows.append((text, _some(formulas[np.unique(of_crystal[of_crystal >= 0])]), cost(component.line)))
    block = limits.problem.block_of_crystal
    by_population = ~limits.problem.prior.published[block]
    if by_population.any():
        text = (
            "no published dilution parameters used: the prior is the population of published sets of the charge type, "
            "with heavy tails"
        )
        total = np.hypot(
            np.hypot(
                cost("population of dilution parameters", by_population), cost("mean of the population", by_population)
            ),
            cost("width of the population", by_population),
        )
        rows.append((text, _some(formulas[by_population]), float(total)))
    if (~by_population).any():
        text = (
            "published dilution parameters hold within 0.1 kJ/mol at 1 mol/kg per unit of ½Σνz², where their source "
            "states nothing"
        )
        rows.append((text, _some(formulas[~by_population]), cost("published dilution parameters", ~by_population)))
    rows.append(
        (
            "Debye–Hückel slope computed from density and permittivity of water; published evaluations differ by 0.7 %",
            "all salts",
            cost("Debye–Hückel slope"),
        )
    )
    away = np.abs(runs.temperature - campaign.reference_temperature) > 1e-9
    if (away & dilution.layout.included).any():
        salts = np.unique(campaign.salt[away & dilution.layout.included])
        for held, text in (
            (
                True,
                "corrected to the reference temperature with tabulated ΔsolCp°, its slope with temperature taken as 0",
            ),
            (False, "no ΔsolCp° is held: typical values, −130 ± 60 J/(K mol) per unit of ½Σνz² and 35 ± 15 a water"),
        ):
            mine = [i for i in salts.tolist() if bool(dilution.heat_capacity.held[i]) is held]
            if mine:
                names = np.array([campaign.salts[i].formula for i in mine], dtype=object)
                rows.append((text, _some(names), cost("heat capacity of dissolution")))
    if cost("dilution away from 298.15 K") > 0:
        text = "the dilution parameters' own change with temperature is unknown, 0 ± 0.04 kJ/(K mol) per unit of ½Σνz²"
        warm = contribution[:, lines.index("dilution away from 298.15 K")] > 0
        rows.append((text, _some(formulas[warm]), cost("dilution away from 298.15 K", warm)))
    if cost("equation at high ionic strength") > 0:
        text = (
            "where a solution reaches an ionic strength above 1 mol/kg the equation is taken to fail by "
            "0.1·½Σνz²·(I^1.5, I^2.5/10) kJ/mol"
        )
        high = contribution[:, lines.index("equation at high ionic strength")] > 0
        rows.append((text, _some(formulas[high]), cost("equation at high ionic strength", high)))
    if limits.alone:
        labels = campaign.runs.keys["run"]
        names = np.array([labels.labels[labels.code[dilution.layout.row[i]]] for i in limits.alone], dtype=object)
        text = "left out while the scatter was estimated, because they stand alone in their solution (nowhere else)"
        rows.append((text, f"runs {_some(names)}", np.nan))
    estimated = adjusted.network.references["status"].isin(["recalled"]).sum()
    if estimated:
        rows.append(
            (
                f"{estimated} of the reference values used are recalled from memory, not read",
                "cycles and scores",
                np.nan,
            )
        )
    return pd.DataFrame(rows, columns=["text", "affects", "u_contribution"])


def _some(names: np.ndarray) -> str:
    every = [str(n) for n in names]
    return ", ".join(every[:FEW]) + (f" and {len(every) - FEW} more" if len(every) > FEW else "")


def sources_table(
    campaign: Campaign,
    dilution: Dilution,
    adjusted: Adjustment,
    parameters: pd.DataFrame,
    heat_capacities: pd.DataFrame,
) -> pd.DataFrame:
    """Every reference value used: what it is, where it comes from, its status, what it served."""
    references = adjusted.network.references.assign(unit="kJ/mol")
    references["used_for"] = np.where(references["quantity"] == "enthalpy of solution", "cycles and scores", "cycles")
    tables = [references]
    here = dilution.layout.block
    used = [
        dilution.layout.electrolytes.name[here[b]]
        for b in np.flatnonzero(dilution.extrapolation.problem.prior.published).tolist()
    ]
    if used:
        frame = parameters.loc[used]
        unit = {"beta0": "kg/(mol K)", "beta1": "kg/(mol K)", "beta2": "kg/(mol K)", "c_phi": "kg²/(mol² K)"}
        for name, of in unit.items():
            values = frame[name].to_numpy(float)
            table = pd.DataFrame({"quantity": f"∂{name}/∂T", "species": used, "value": values, "u": np.nan, "unit": of})
            for column in ("source", "year", "status"):
                table[column] = frame[column].to_numpy(object)
            tables.append(table[np.isfinite(values)].assign(used_for="dilution (prior)"))
    away = np.abs(campaign.runs.quantities["temperature"].value - campaign.reference_temperature) > 1e-9
    salts = np.unique(campaign.salt[away & dilution.layout.included])
    salts = salts[dilution.heat_capacity.held[salts]]
    if salts.size:
        frame = heat_capacities.iloc[salts]
        table = pd.DataFrame(
            {
                "quantity": "heat capacity of dissolution",
                "species": [campaign.salts[i].formula for i in salts.tolist()],
                "value": frame["value"].to_numpy(float),
                "u": frame["u"].to_numpy(float),
                "unit": "J/(K mol)",
                "source": frame["source"].to_numpy(object),
                "year": frame["year"].to_numpy(object),
                "status": frame["status"].to_numpy(object),
                "used_for": "temperature",
            }
        )
        tables.append(table)
    tables.append(
        pd.DataFrame(
            {
                "quantity": ["Debye–Hückel slope A_H"],
                "species": ["H2O"],
                "value": [dilution.slope],
                "u": [0.007 * dilution.slope],
                "unit": ["kJ kg^½ mol^−3/2"],
                "source": ["density IAPWS-95 and permittivity IAPWS 1997, computed with the package chemicals"],
                "year": [1997],
                "status": ["derived"],
                "used_for": ["dilution"],
            }
        )
    )
    return pd.concat([t.reindex(columns=SOURCE_COLUMNS).astype(object) for t in tables], ignore_index=True)
