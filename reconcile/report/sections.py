"""One section a salt: its numbers, budget, dilution table and runs."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import pandas as pd
from markupsafe import Markup

from reconcile.report.cells import Line, View, freedom, p_value, pair, percent, span, view
from reconcile.report.figures import MOST_FACTOR
from reconcile.report.kinds import counted_kinds, kinds
from reconcile.report.markup import formula, minus
from reconcile.report.material import Material
from reconcile.report.palette import themed
from reconcile.report.results import rows
from reconcile.report.rounding import significant, value_and_u
from reconcile.report.salt_runs import runs_of
from reconcile.report.svg import inlined
from reconcile.report.words import sentence

MOST_SECTIONS = 300  # salts with a section of their own
MOST_FIGURES = 60  # drawings put into the page
_SLOPE_UNIT = Markup("kJ kg<sup>½</sup> mol<sup>−3/2</sup>")
_SYMBOLS = {  # parameter ─► its symbol and unit
    "beta0": Markup("β<sup>(0)L</sup> / (kg/(mol K))"),
    "beta1": Markup("β<sup>(1)L</sup> / (kg/(mol K))"),
    "beta2": Markup("β<sup>(2)L</sup> / (kg/(mol K))"),
    "c_phi": Markup("C<sup>φL</sup> / (kg<sup>2</sup>/(mol<sup>2</sup> K))"),
}


@dataclass(frozen=True, slots=True)
class Section:
    """A salt on the page."""

    anchor: str
    title: Markup
    lead: str  # its value in one line
    reason: str  # why there is no limit
    remarks: str  # what to mind of the extrapolation
    figure: Markup | None
    caption: str  # of the figure
    undrawn: str  # why there is no figure here
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
    kind = kinds(results.campaign)
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
        own = runs.get(salt)
        count = kind.counted(own.index.to_numpy()) if own is not None else (0, 0, 0)
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
                reason="" if known else sentence(row["reason"]),
                remarks="; ".join(row["remarks"]),
                figure=drawing,
                caption=_caption(temperature, row, count),
                undrawn=(
                    f"The drawing is in figures/{name}.svg, where figures were asked for."
                    if count[0] + count[1]
                    else "Nothing is drawn: no run dissolves this salt."
                ),
                facts=_facts(row, count),
                budget=_budget(budget.get(salt), row) if known else None,
                smoothed=_smoothed(row["smoothed"]),
                runs=runs_of(own, kind),
            )
        )
    return found


def _caption(temperature: str, row: Mapping[str, Any], count: tuple[int, int, int]) -> str:
    """What a salt's figure shows."""
    if not math.isfinite(row["standard_enthalpy"]):
        return "dissolutions in water as measured. No model is drawn, for there is no limit."
    text = (
        f"runs brought to {temperature}, and below to infinite dilution as well, against the 95 % interval of the "
        "limit. Bars: one standard uncertainty, dilution and scatter included. Grey: what a straight line in m or in "
        "√m would have given. An arrow at the edge stands for an excluded run beyond it."
    )
    if row["coverage_factor"] > MOST_FACTOR:
        text += f" The interval reaches far out of the figure; {MOST_FACTOR:g} u are drawn."
    if count[1]:
        text += " A successive addition stands where the same salt would in water, at the molality that it ended at."
    return text + (" Heats of dilution stand in the table of runs only." if count[2] else "")


def _facts(row: Mapping[str, Any], count: tuple[int, int, int]) -> list[tuple[str | Markup, str | Markup]]:
    facts: list[tuple[str | Markup, str | Markup]] = [("Molar mass", f"{row['molar_mass']:.3f} g/mol")]
    facts.append(("Runs", counted_kinds(count)))
    known = math.isfinite(row["standard_enthalpy"])
    if known:
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
    if math.isfinite(row["free_slope"]):
        free = pair(row["free_slope"], row["u_free_slope"])
        facts.append(("Slope that the runs would choose", Markup("{} {}").format(free, _SLOPE_UNIT)))
    if known and math.isfinite(row["line_m"]):
        lines = " and ".join(minus(value_and_u(row[key], row["u"])[0]) for key in ("line_m", "line_root"))
        facts.append(("A straight line in m, in √m, would say", f"{lines} kJ/mol"))
    if known and math.isfinite(row["heat_capacity_change"]):
        u = row["u_heat_capacity_change"]
        shown = (
            pair(row["heat_capacity_change"], u) if math.isfinite(u) else significant(row["heat_capacity_change"], 3)
        )
        facts.append(("Heat capacity of dissolution", f"{minus(shown)} J/(K mol)"))
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
