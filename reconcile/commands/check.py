"""reconcile check: what a campaign holds, how it was read and what will be done with it; writes nothing."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING

import click

from reconcile.commands import options

if TYPE_CHECKING:
    from reconcile.campaign import Campaign
    from reconcile.campaign.tables import Quantity, Table


@click.command("check")
@options.campaign
def command(campaign: tuple[Path, ...]) -> None:
    """Read CAMPAIGN, say everything that is wrong or assumed, and write nothing."""
    from reconcile.campaign import read_campaign

    checked = read_campaign(list(campaign) if len(campaign) > 1 else campaign[0])
    for line in described(checked):
        click.echo(line)


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
    yield f"{table.name}: {_counted(len(table), 'row')}"
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

    runs = campaign.runs
    reduced = np.isfinite(runs.quantities["enthalpy"].value)
    left_out = int((~campaign.included).sum())
    yield "What will be done:"
    for number, words in (
        (int((~reduced & campaign.included).sum()), "from heat, mass and water to molar enthalpy and molality"),
        (int((reduced & campaign.included).sum()), "taken as molar enthalpies at their molality"),
        (left_out, "excluded by campaign.toml, kept in every table"),
    ):
        if number:
            yield f"  {_counted(number, 'run')}: {words}"
    for position, salt in enumerate(campaign.salts):
        of_it = (campaign.salt == position) & campaign.included
        most = campaign.max_molality[position]
        limit = f", up to {most:g} mol/kg" if np.isfinite(most) else ""
        own = campaign.published_dilution[position]
        prior = "published dilution parameters where held" if own else "the population of dilution parameters"
        yield f"  {salt.formula}: {_counted(int(of_it.sum()), 'run')} to infinite dilution{limit}, prior: {prior}"
    yield f"  all salts: one adjustment with the formation enthalpies {campaign.formation_set},"
    yield "  tests of systematic effects, scores against published values"


def _assumed(campaign: Campaign) -> Iterator[str]:
    if not campaign.remarks:
        yield "Nothing was assumed in reading."
        return
    yield "Told or assumed in reading:"
    for remark in campaign.remarks:
        yield f"  {remark.text.rstrip('.')} ({remark.affects})"


def _filled(filled: int, rows: int) -> str:
    return "every row" if filled == rows else f"{filled} of {rows} rows"


def _counted(number: int, noun: str) -> str:
    return f"{number} {noun}{'' if number == 1 else 's'}"
