"""reconcile check: what a campaign holds, how it was read and what will be done with it; writes nothing."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path
from typing import TYPE_CHECKING

import click

from reconcile.commands import options
from reconcile.report.words import counted

if TYPE_CHECKING:
    from reconcile.campaign import Campaign
    from reconcile.campaign.tables import Quantity, Table
    from reconcile.chemistry import Salt


@click.command("check")
@options.campaign
def command(campaign: tuple[Path, ...]) -> None:
    """Read CAMPAIGN, say everything that is wrong or assumed, and write nothing."""
    from reconcile.campaign import read_campaign

    checked = read_campaign(list(campaign) if len(campaign) > 1 else campaign[0])
    for line in described(checked):
        click.echo(line)
    if len(_no_limit(checked)) == len(checked.salts):
        raise click.ClickException(
            "No salt will get a limit at infinite dilution: report has nothing to fit. Expected at least one "
            "dissolution of a salt whose ions do not react with water."
        )


def described(campaign: Campaign) -> Iterator[str]:
    """The lines that check prints."""
    yield campaign.title + (f", {campaign.laboratory}" if campaign.laboratory else "")
    yield f"reference temperature {campaign.reference_temperature:g} K, pressure {campaign.pressure:g} kPa, " + (
        f"formation enthalpies {campaign.formation_set}"
    )
    for table in (campaign.runs, campaign.samples, campaign.calorimeters):
        if len(table):
            yield ""
            yield from _table(table)
    yield ""
    yield from _plan(campaign)
    yield ""
    yield from _assumed(campaign)


def _table(table: Table) -> Iterator[str]:
    from reconcile.campaign.columns import COLUMNS

    kind = Path(table.name).stem
    known = {column.name: column for column in COLUMNS if column.table == kind}
    if not known:  # a single table of any name is a table of runs
        known = {column.name: column for column in COLUMNS if column.table == "runs"}
    yield f"{table.name}: {counted(len(table), 'row')}"
    for name, quantity in table.quantities.items():
        filled = int((quantity.value == quantity.value).sum())
        if filled:
            column = known.get(name)
            heading, meaning = (column.heading, column.meaning) if column else (name, "")
            yield f"  {heading}: {_filled(filled, len(table))}, {_range(quantity)}; {meaning}".rstrip("; ")
    for name, key in table.keys.items():
        filled = int((key.code >= 0).sum())
        if filled:
            different = len(set(key.code[key.code >= 0].tolist()))
            meaning = known[name].meaning if name in known else ""
            yield f"  {name}: {_filled(filled, len(table))}, {different} different; {meaning}".rstrip("; ")


def _range(quantity: Quantity) -> str:
    import numpy as np

    low, high = float(np.nanmin(quantity.value)), float(np.nanmax(quantity.value))
    text = f"{low:.6g}" if low == high else f"{low:.6g} to {high:.6g}"
    stated = quantity.u[np.isfinite(quantity.u) & np.isfinite(quantity.value)]
    if not stated.size:
        return f"{text}, no uncertainty stated"
    least, most = float(stated.min()), float(stated.max())
    return f"{text}, u {least:.2g}" + ("" if least == most else f" to {most:.2g}")


def _plan(campaign: Campaign) -> Iterator[str]:
    """What will be done with how many runs, salt by salt."""
    import numpy as np

    from reconcile.report.kinds import counted_kinds, kinds

    kind, kept = kinds(campaign), campaign.included
    reduced = np.isfinite(campaign.runs.quantities["enthalpy"].value)
    yield "What will be done:"
    for chosen, words in (
        (kept & ~reduced, "from heat, mass and water to molar enthalpy and molality"),
        (kept & reduced & ~kind.dilution, "taken as molar enthalpies of solution at their molality"),
        (kept & kind.dilution, "taken as enthalpies of dilution, which have no standard enthalpy of solution"),
        (~kept, "excluded by campaign.toml, kept in every table"),
    ):
        if number := int(chosen.sum()):
            yield f"  {counted(number, 'run')}: {words}"
    prior = _priors(campaign)
    count = kind.count(kept, campaign.salt, len(campaign.salts))
    without = _no_limit(campaign)
    for position, salt in enumerate(campaign.salts):
        runs = counted_kinds(count[position].tolist())
        if position in without:
            yield f"  {salt.formula}: {runs}; no limit at infinite dilution: {without[position]}"
            continue
        most = campaign.max_molality[position]
        limit = f", up to {most:g} mol/kg" if np.isfinite(most) else ""
        yield f"  {salt.formula}: {runs} to infinite dilution{limit}, prior: {prior(salt)}"
    if len(without) < len(campaign.salts):
        yield f"  all salts with a limit: one adjustment with the formation enthalpies {campaign.formation_set},"
        yield "  tests of systematic effects, scores against published values"


def _priors(campaign: Campaign) -> Callable[[Salt], str]:
    """Whence the dilution parameters of a salt's solution come before its runs."""
    from reconcile import reference

    published = frozenset(reference.dilution_parameters().index)
    forbidden = {s.electrolyte for s, may in zip(campaign.salts, campaign.published_dilution, strict=True) if not may}

    def prior(salt: Salt) -> str:
        if salt.electrolyte in forbidden:
            return "the population of dilution parameters, as campaign.toml asks"
        if salt.electrolyte in published:
            return "published dilution parameters"
        return "the population of dilution parameters, none being held for it"

    return prior


def _no_limit(campaign: Campaign) -> dict[int, str]:
    """Salts that will get no standard enthalpy: position ─► why."""
    from reconcile.dilution.electrolytes import why_no_limit
    from reconcile.report.kinds import kinds

    count = kinds(campaign).count(campaign.included, campaign.salt, len(campaign.salts)).tolist()
    dissolved = {
        salt.electrolyte
        for salt, (into_water, added, _) in zip(campaign.salts, count, strict=True)
        if into_water + added
    }
    reasons: dict[int, str] = {}
    for position, (salt, (into_water, added, diluted)) in enumerate(zip(campaign.salts, count, strict=True)):
        if why := why_no_limit(salt):
            reasons[position] = f"{why}. Its runs stay in the tables"
        elif not into_water + added + diluted:
            reasons[position] = "all its runs are excluded"
        elif not into_water + added:
            serve = "; they serve the other crystals of that solution" if salt.electrolyte in dissolved else ""
            reasons[position] = f"no included run dissolves it, and a heat of dilution is one of the solution{serve}"
    return reasons


def _assumed(campaign: Campaign) -> Iterator[str]:
    if not campaign.remarks:
        yield "Nothing was assumed in reading."
        return
    yield "Told or assumed in reading:"
    for remark in campaign.remarks:
        yield f"  {remark.text.rstrip('.')} ({remark.affects})"


def _filled(filled: int, rows: int) -> str:
    return "every row" if filled == rows else f"{filled} of {rows} rows"
