"""The page's tables: rows of the results as texts, rounded for reading."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
import pandas as pd
from markupsafe import Markup

from reconcile.report.cells import Line, View, freedom, p_value, pair, percent, span, text, two_places, view, word
from reconcile.report.markup import formula, list_of_formulae, minus
from reconcile.report.results import Results, rows
from reconcile.report.rounding import NOTHING, significant, value_and_u
from reconcile.report.verdict import LEVEL, sized, sized_interval


def salts(results: Results, anchors: dict[str, str]) -> View:
    """The table of salts, each linked to its section."""
    lines: list[Line] = []
    for row in rows(results.salts):
        name = formula(row["salt"])
        if row["salt"] in anchors:
            name = Markup('<a href="#{}">{}</a>').format(anchors[row["salt"]], name)
        reach = (significant(row["molality_min"], 2), significant(row["molality_max"], 2))
        lines.append(
            (
                name,
                pair(row["standard_enthalpy"], row["u"]),
                span(row["interval_low"], row["interval_high"], row["u"]),
                freedom(row["degrees_of_freedom"]),
                str(row["runs"]),
                reach[0] if reach[0] == reach[1] else " to ".join(reach),
                str(row["dilution_model"]) if math.isfinite(row["standard_enthalpy"]) else NOTHING,
                percent(row["prior_share"]),
                word(row["verdict"]),
            )
        )
    heads = (
        "Salt",
        "ΔsolH° / (kJ/mol)",
        "95 % interval",
        "dof",
        "Runs",
        "Molality / (mol/kg)",
        "Dilution parameters",
        "Prior share",
        "Against published",
    )
    note = (
        "In brackets the standard uncertainty of the last digits. dof: effective degrees of freedom of that "
        "uncertainty. Prior share: how much of the dilution parameters the published set or the population supplied, "
        "rather than these runs."
    )
    temperature = f"{results.campaign.reference_temperature:g} K"
    return view(
        f"Standard molar enthalpies of solution at infinite dilution, {temperature}",
        heads,
        {1, 2, 3, 4, 5, 7},
        lines,
        note,
    )


def suspects(bias: pd.DataFrame) -> View:
    """Hypotheses of systematic effects, most significant first."""
    found = rows(bias)
    lines: list[Line] = [
        (
            str(row["hypothesis"]),
            list_of_formulae(row["subject"]) if row["hypothesis"] == "reference" else str(row["subject"]),
            sized(row),
            sized_interval(row),
            p_value(row["p_value"]),
            p_value(row["p_adjusted"]),
            two_places(row["delta_chi_square"]),
            sized(row, "smallest_detectable") if math.isfinite(row["smallest_detectable"]) else NOTHING,
            ", ".join(row["rests_on"]),
            _rivals(row["confounded_with"]),
        )
        for row in found
    ]
    heads = (
        "Hypothesis",
        "Subject",
        "Size",
        "95 % interval",
        "p",
        "Adjusted p",
        "Δχ²",
        "Smallest detectable",
        "Rests on",
        "Not told apart from",
    )
    note = (
        "A row is what the measurements are compatible with, not what caused it. Adjusted p counts all tests of the "
        "campaign; rows below 0.05 are marked. Smallest detectable: found with 80 % power at adjusted p < 0.05. "
        "A positive gain reads too much heat."
    )
    marked = [i for i, row in enumerate(found) if row["p_adjusted"] < LEVEL]
    return view("Systematic effects tested, most significant first", heads, {2, 3, 4, 5, 6, 7}, lines, note, marked)


def without_suspects(salts: pd.DataFrame, marked: int) -> View | None:
    """The salts before and after taking out what is significant; None where nothing is, or nothing would change."""
    if not marked or "standard_enthalpy_without_suspects" not in salts:
        return None
    lines: list[Line] = []
    for row in rows(salts):
        change = row["standard_enthalpy_without_suspects"] - row["standard_enthalpy"]
        if not abs(change) > 0:  # a salt without a limit has no change either
            continue
        lines.append(
            (
                formula(row["salt"]),
                pair(row["standard_enthalpy"], row["u"]),
                pair(row["standard_enthalpy_without_suspects"], row["u_without_suspects"]),
                minus(value_and_u(change, row["u"])[0]),
            )
        )
    note = (
        "kJ/mol. Without: if every row above with an adjusted p below 0.05 were true, all sized together; the "
        "uncertainty of the sizes is in u. Nothing in this report is corrected so; a correction is a line of "
        "campaign.toml."
    )
    heads = ("Salt", "As measured", "Without the suspects", "Change")
    return view("What would become of the table of salts", heads, {1, 2, 3}, lines, note) if lines else None


def _rivals(names: Sequence[str], most: int = 3) -> Markup:
    """The first few; all of them stand in tables/bias.csv."""
    shown = "; ".join(names[:most]) or "nothing"
    return list_of_formulae(f"{shown}; and {len(names) - most} more" if len(names) > most else shown)


def reconciled(results: Results) -> View:
    """The salts before and after the adjustment."""
    found = rows(results.reconciled)
    lines: list[Line] = [
        (
            formula(row["salt"]),
            pair(row["measured"], row["u_measured"]),
            pair(row["reconciled"], row["u"]),
            minus(value_and_u(row["change"], row["u_measured"])[0]),
            two_places(row["standardised_change"]),
            two_places(row["redundancy"]),
            significant(row["smallest_detectable_error"], 2),
        )
        for row in found
    ]
    heads = ("Salt", "Measured", "Reconciled", "Change", "Standardised", "Redundancy", "Smallest detectable error")
    note = (
        "kJ/mol. Standardised: the change over its own standard uncertainty, beyond ±1.96 marked. Redundancy: "
        "0, nothing checks this value; 1, the others would replace it. Smallest detectable error: found with power 0.8 "
        "at level 0.001."
    )
    marked = [i for i, row in enumerate(found) if abs(row["standardised_change"]) > 1.96]
    return view(
        "Enthalpies of solution before and after the adjustment", heads, {1, 2, 3, 4, 5, 6}, lines, note, marked
    )


def references(results: Results) -> View:
    """Reference values in the adjustment, the most changed first."""
    size = results.references["standardised_change"].abs().to_numpy(float)
    found = rows(results.references.iloc[np.argsort(-np.nan_to_num(size, nan=-1.0), kind="stable")])
    lines: list[Line] = [
        (
            formula(row["species"]),
            str(row["quantity"]),
            pair(row["published"], row["u_published"]),
            pair(row["reconciled"], row["u"]),
            two_places(row["standardised_change"]),
            text(row["source"]),
        )
        for row in found
    ]
    heads = ("Species", "Quantity", "Published / (kJ/mol)", "Adjusted / (kJ/mol)", "Standardised change", "Source")
    marked = [i for i, row in enumerate(found) if abs(row["standardised_change"]) > 1.96]
    return view(
        "Reference values before and after the adjustment, the most changed first", heads, {2, 3, 4}, lines, "", marked
    )


def cycles(table: pd.DataFrame) -> View:
    """Misclosures of the cycles, each on its own."""
    lines: list[Line] = []
    for row in rows(table):
        kinds = [text for key, text in (("identity", "identity"), ("circular", "circular")) if row[key]]
        line = (
            formula(row["salt"]),
            str(row["kind"]),
            pair(row["misclosure"], row["u"]),
            significant(row.get("smallest_detectable_error", math.nan), 2),
        )
        lines.append((*line, ", ".join(kinds), word(row["verdict"])))
    heads = ("Salt", "Cycle", "Misclosure / (kJ/mol)", "Smallest detectable / (kJ/mol)", "Remark", "Verdict")
    note = (
        "A circular cycle rests on a published enthalpy of solution of the same salt: its closing repeats the "
        "comparison with that value and counts once. An identity closes by construction and proves nothing."
    )
    return view("Hess cycles, each on its own", heads, {2, 3}, lines, note)


def scores(table: pd.DataFrame) -> View:
    """Comparison with published values."""
    lines: list[Line] = [
        (
            formula(row["salt"]),
            "infinite dilution" if row["molality"] == 0 else f"{significant(row['molality'], 3)} mol/kg",
            pair(row["measured"], row["u_measured"]),
            pair(row["published"], row["u_published"]),
            minus(value_and_u(row["difference"], math.hypot(row["u_measured"], row["u_published"]))[0]),
            two_places(row["zeta"]),
            two_places(row["e_n"]),
            word(row["verdict"]),
            Markup("{}{}").format(
                text(row["source"]), Markup(' <span class="aside">circular</span>') if row["circular"] else ""
            ),
            text(row["status"]),
        )
        for row in rows(table)
    ]
    heads = ("Salt", "At", "Measured", "Published", "Difference", "ζ", "Eₙ", "Verdict", "Source", "Status")
    note = (
        "kJ/mol. The verdict is by ζ: satisfactory up to 2, unsatisfactory from 3 on (ISO 13528). "
        "Eₙ stands beside it with its own limit of 1."
    )
    return view("Scores against published values", heads, {2, 3, 4, 5, 6}, lines, note)


def sources(table: pd.DataFrame) -> View:
    """Every reference value that entered."""
    found = rows(table)
    lines: list[Line] = [
        (
            formula(row["species"]),
            text(row["quantity"]),
            pair(row["value"], row["u"]),
            text(row["unit"]),
            text(row["source"]),
            text(row["year"]),
            text(row["status"]),
            text(row["used_for"]),
        )
        for row in found
    ]
    heads = ("Species", "Quantity", "Value", "Unit", "Source", "Year", "Status", "Used for")
    marked = [i for i, row in enumerate(found) if row["status"] in ("recalled", "from memory")]
    return view("Reference values used", heads, {2}, lines, "", marked)


def assumptions(table: pd.DataFrame) -> View:
    """What had to be assumed."""
    lines: list[Line] = [
        (text(row["text"]), text(row["affects"]), significant(row["u_contribution"], 2)) for row in rows(table)
    ]
    return view(
        "Assumptions",
        ("Assumed", "Affects", "Adds to u / (kJ/mol)"),
        {2},
        lines,
        "A dash: not known by itself, or nothing.",
    )
