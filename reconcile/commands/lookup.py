"""reconcile lookup: every reference value held about a salt or ion, and which one a report uses."""

from __future__ import annotations

import json
from collections.abc import Iterator, Mapping
from typing import Any

import click


@click.command("lookup")
@click.argument("species")
@click.option("--json", "as_json", is_flag=True, help="Print everything as JSON.")
def command(species: str, as_json: bool) -> None:
    """Print what is held about SPECIES (CaCl2.6H2O, Na+, SO4^2-, …), with uncertainty, source and status.

    The values that a report uses are marked with *, with the reason.
    """
    from reconcile.reference import UnknownSpeciesError, lookup

    try:
        found = lookup(species)
    except UnknownSpeciesError as fault:
        raise click.ClickException(str(fault)) from fault
    if as_json:
        click.echo(json.dumps(found, ensure_ascii=False, indent=1, allow_nan=False))
        return
    for line in described(found):
        click.echo(line)


def described(found: Mapping[str, Any]) -> Iterator[str]:
    """The lines for a person: quantity by quantity, used values first."""
    yield _title(found)
    if not found["values"]:
        near = " or ".join(found["nearest"])
        yield "nothing is held about it" + (f"; the nearest known: {near}" if near else "")
        return
    quantities = list(dict.fromkeys(value["quantity"] for value in found["values"]))
    for quantity in quantities:
        values = [value for value in found["values"] if value["quantity"] == quantity]
        yield ""
        unit = str(values[0]["unit"])
        yield f"{quantity} / " + (f"({unit})" if "/" in unit or " " in unit else unit)
        for value in sorted(values, key=lambda value: not value["used"]):
            yield from _value(value)
    yield ""
    yield "* a report uses this value"


def _title(found: Mapping[str, Any]) -> str:
    if found["kind"] != "salt":
        return str(found["species"])
    ions = " + ".join(f"{number:g} {ion}" if number != 1 else ion for ion, number in found["ions"].items())
    others = f"; other crystals held: {', '.join(found['crystals'])}" if found["crystals"] else ""
    return f"{found['species']}: {ions}, {found['molar_mass']:.3f} g/mol{others}"


def _value(value: Mapping[str, Any]) -> Iterator[str]:
    number = "–" if value["value"] is None else f"{value['value']:.10g}"
    u = "" if value["u"] is None else f" ± {value['u']:.2g} (u, {value['u_basis'].split(':')[0]})"
    mark = "*" if value["used"] else " "
    yield f"{mark} {number}{u}  {value['conditions']}; {value['reference_set'] or '–'}; {value['status']}"
    year = f" ({value['year']})" if value["year"] else ""
    yield f"    {value['source']}{year}"
    if value["note"]:
        yield f"    {value['note']}"
    if value["used"]:
        yield f"    because: {value['why']}"
