"""One section a salt: its numbers, budget, dilution table and runs."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import pandas as pd
from markupsafe import Markup

from reconcile.report.cells import Line, View, freedom, p_value, pair, percent, span, text, two_places, view
from reconcile.report.markup import formula, minus
from reconcile.report.material import Material
from reconcile.report.palette import themed
from reconcile.report.results import rows
from reconcile.report.rounding import NOTHING, rounded, significant, value_and_u
from reconcile.report.svg import inlined

MOST_SECTIONS = 300  # salts with a section of their own
MOST_FIGURES = 60  # drawings put into the page
_SLOPE_UNIT = Markup("kJ kg<sup>½</sup> mol<sup>−3/2</sup>")
_SYMBOLS = {  # parameter ─► its symbol and unit
    "beta0": Markup("β<sup>(0)L</sup> / (kg/(mol K))"),
    "beta1": Markup("β<sup>(1)L</sup> / (kg/(mol K))"),
    "beta2": Markup("β<sup>(2)L</sup> / (kg/(mol K))"),
    "c_phi": Markup("C<sup>φL</sup> / (kg<sup>2</sup>/(mol<sup>2</sup> K))"),
}

_RUN_HEADS = (
    "Run",
    "Lot",
    "Calorimeter",
    "Batch",
    "Molality / (mol/kg)",
    "Enthalpy / (kJ/mol)",
    "Dilution / (kJ/mol)",
    "At infinite dilution / (kJ/mol)",
    "Standardised residual",
    "Remark",
)
_RUN_ALWAYS = (0, 4, 5, 6, 7, 8)
_RUN_NUMERIC = (4, 5, 6, 7, 8)


@dataclass(frozen=True, slots=True)
class Section:
    """A salt on the page."""

    anchor: str
    title: Markup
    lead: str  # its value in one line
    reason: str  # why there is no limit
    figure: Markup | None
    figure_file: str  # where the drawing stands if it is not in the page
    facts: list[tuple[str | Markup, str | Markup]]
    budget: View | None
    smoothed: View | None
    runs: View | None


def sections(material: Material) -> list[Section]:
    """The sections, in the campaign's order; of more than `MOST_SECTIONS` salts only the first.

    Parameters
    ----------
    material : Material
        Results with their drawings.

    Returns
    -------
    sections : list of Section
    """
    results = material.results
    chosen = rows(results.salts)[:MOST_SECTIONS]
    runs = dict(iter(results.runs.groupby("salt", sort=False)))
    budget = dict(iter(results.budget.groupby("salt", sort=False)))
    drawings = material.drawings if len(results.salts) <= MOST_FIGURES else {}
    temperature = f"{results.campaign.reference_temperature:g} K"
    found = []
    for row in chosen:
        salt, name = str(row["salt"]), material.names[row["salt"]]
        known = math.isfinite(row["standard_enthalpy"])
        lead = (
            f"ΔsolH°({temperature}) = {pair(row['standard_enthalpy'], row['u'])} kJ/mol"
            if known
            else "No limit at infinite dilution is given."
        )
        drawing = (
            Markup(
                themed(inlined(drawings[name], f"f-{name}", f"Figure of {salt}; its numbers stand in the tables below"))
            )
            if name in drawings
            else None
        )
        found.append(
            Section(
                anchor=f"salt-{name}",
                title=formula(salt),
                lead=lead,
                reason="" if known else text(row["reason"]),
                figure=drawing,
                figure_file=f"figures/{name}.svg",
                facts=_facts(row),
                budget=_budget(budget.get(salt), row) if known else None,
                smoothed=_smoothed(row["smoothed"]),
                runs=_runs(runs.get(salt)),
            )
        )
    return found


def _facts(row: Mapping[str, Any]) -> list[tuple[str | Markup, str | Markup]]:
    facts: list[tuple[str | Markup, str | Markup]] = [("Molar mass", f"{row['molar_mass']:.3f} g/mol")]
    if math.isfinite(row["standard_enthalpy"]):
        facts += [
            ("95 % interval", f"{span(row['interval_low'], row['interval_high'], row['u'])} kJ/mol"),
            (
                "Coverage factor",
                f"{significant(row['coverage_factor'], 3)} for {freedom(row['degrees_of_freedom'])} degrees of freedom",
            ),
            (
                "Own and shared part of u",
                f"{significant(row['u_random'], 2)} and {significant(row['u_shared'], 2)} kJ/mol",
            ),
        ]
    facts.append(("Dilution parameters from", _model(row)))
    if math.isfinite(row["prior_conflict_p"]):
        facts.append(("Do the runs contradict the prior?", f"p = {p_value(row['prior_conflict_p'])}"))
    facts += [(_SYMBOLS.get(name, name), pair(value, u)) for name, (value, u) in row["parameters"].items()]
    facts.append(("Debye–Hückel slope, computed", Markup("{} {}").format(significant(row["slope"], 4), _SLOPE_UNIT)))
    free = _free(row["free_slope"])
    if free != NOTHING:
        facts.append(("Slope that the runs alone would choose", Markup("{} {}").format(free, _SLOPE_UNIT)))
    if math.isfinite(row["heat_capacity_change"]):
        facts.append(
            ("Heat capacity of dissolution", f"{minus(significant(row['heat_capacity_change'], 3))} J/(K mol)")
        )
    if math.isfinite(row["between_batch_sd"]):
        facts.append(("Between batches, standard deviation", f"{significant(row['between_batch_sd'], 2)} kJ/mol"))
    if math.isfinite(row["recommended_value"]):
        facts.append(
            (
                "Recommended",
                f"{pair(row['recommended_value'], row['recommended_u'])} kJ/mol, {row['recommended_from']}",
            )
        )
    return facts


def _model(row: Mapping[str, Any]) -> str:
    share = f"; prior share {percent(row['prior_share'])}" if math.isfinite(row["prior_share"]) else ""
    return f"{row['dilution_model']}{share}"


def _free(value: Any) -> str:
    if isinstance(value, tuple | list):
        return pair(float(value[0]), float(value[1]))
    return minus(significant(float(value), 3)) if value is not None and math.isfinite(value) else NOTHING


def _budget(table: pd.DataFrame | None, row: Mapping[str, Any]) -> View | None:
    if table is None or not len(table):
        return None
    whole = float(row["u"]) ** 2
    lines: list[Line] = []
    for line in rows(table):
        share = line["contribution"] ** 2 / whole if whole > 0 else math.nan
        bar = (
            Markup('<span class="share" style="--share:{}%"></span>').format(f"{100 * min(share, 1.0):.1f}")
            if math.isfinite(share)
            else ""
        )
        lines.append(
            (
                str(line["source"]),
                significant(abs(line["contribution"]), 2),
                Markup("{} {}").format(bar, percent(share)),
            )
        )
    heads = ("Source", "kJ/mol", "Share of u²")
    return view(
        "Uncertainty budget", heads, {1}, lines, f"Root of the sum of squares: {significant(row['u'], 2)} kJ/mol."
    )


def _smoothed(found: Any) -> View | None:
    lines: list[Line] = [(f"{line['molality']:g}", pair(line["enthalpy"], line["u"])) for line in found]
    heads = ("Molality / (mol/kg)", "ΔsolH / (kJ/mol)")
    return view("Smoothed at round molalities", heads, {0, 1}, lines) if lines else None


def _runs(table: pd.DataFrame | None) -> View | None:
    if table is None or not len(table):
        return None
    lines: list[Line] = []
    for row in rows(table):
        limit, u = row["standard_enthalpy / (kJ/mol)"], row["u(standard_enthalpy) / (kJ/mol)"]
        correction = row["dilution_correction / (kJ/mol)"]
        lines.append(
            (
                text(row["run"]),
                text(row["sample"]),
                text(row["calorimeter"]),
                text(row["batch"]),
                significant(row["molality / (mol/kg)"], 4),
                minus(rounded(row["enthalpy / (kJ/mol)"], row["u(enthalpy) / (kJ/mol)"])),
                minus(value_and_u(correction, u)[0]),
                minus(rounded(limit, u)),
                two_places(row["standardised_residual"]),
                "" if row["included"] else f"excluded: {text(row['reason'])}",
            )
        )
    used = [place for place in range(len(_RUN_HEADS)) if place in _RUN_ALWAYS or any(line[place] for line in lines)]
    heads = [_RUN_HEADS[place] for place in used]
    numeric = [position for position, place in enumerate(used) if place in _RUN_NUMERIC]
    kept = [tuple(line[place] for place in used) for line in lines]
    marked = [i for i, row in enumerate(rows(table)) if abs(row["standardised_residual"]) > 3 or not row["included"]]
    return view("Runs", heads, numeric, kept, "", marked)
