"""Checks that need more than one cell: what a run must have, and what contradicts itself."""

from __future__ import annotations

from collections.abc import Sequence
from difflib import get_close_matches

import numpy as np

from reconcile.campaign.columns import keys_of
from reconcile.campaign.dilutions import check_additions, check_dilutions, dilution_rows
from reconcile.campaign.links import rows_of, tell_labels
from reconcile.campaign.presence import heading_of, needed, there
from reconcile.campaign.problems import Problems, number
from reconcile.campaign.quantities import Built
from reconcile.campaign.tables import Floats, Integers, Remark, Table
from reconcile.chemistry import Salt
from reconcile.chemistry.water import MOLAR_MASS_OF_WATER

CONTRADICTION = 0.005  # a molality further than this share from that of the masses is told
TOLD_SINGLY = 10


def check_words(built: Built, table: str, problems: Problems) -> None:
    """Columns that allow only certain words."""
    for column in keys_of(table):
        if not column.words:
            continue
        labels = built.table.keys[column.name].labels
        wrong = [place for place, label in enumerate(labels) if label not in column.words]

        def say(
            label: str, words: tuple[str, ...] = column.words, later: tuple[str, ...] = column.later_words
        ) -> tuple[str, str, str, str]:
            expected = " or ".join(words)
            if label in later:
                found = f'"{label}" is in the design of the input but not yet served'
                return found, expected, "Leave such rows out for now.", "not yet served"
            close = get_close_matches(label.casefold(), [*words, *later], n=1, cutoff=0.5)
            return f'"{label}"', expected, f"Did you mean {close[0]}?" if close else "Empty the cell.", "unknown word"

        tell_labels(built, column.name, wrong, say, problems)


def check_required(built: Built, names: Sequence[str], problems: Problems) -> None:
    """Text cells that may not be empty."""
    for name in names:
        if not built.headings.has(name):
            found = f"there is no column `{name}`"
            problems.add(built.table.name, 1, None, found, f"a column `{name}`", "Add it.", "missing column", (1, -1))
            continue
        if name in built.headings.blamed:
            continue
        empty = rows_of(built.table.keys[name].code < 0, built)
        heading = built.headings.find(name)
        problems.add_rows(
            built.table.name, empty, heading.text if heading else name, "the cell is empty", f"a {name}",
            "Fill it in.", "empty cell",
        )  # fmt: skip


def check_runs(built: Built, problems: Problems) -> None:
    """What every run must have: a salt, and a heat with masses or an enthalpy with a molality, or with two."""
    _salt_or_sample(built, problems)
    dilution = dilution_rows(built)
    check_dilutions(built, dilution, problems)
    check_additions(built, dilution, problems)
    heat, enthalpy = there(built, "heat"), there(built, "enthalpy")
    headings, table = built.headings, built.table
    if not headings.has("heat") and not headings.has("enthalpy"):
        problems.add(
            table.name, 1, None, "there is neither a column of heats nor one of enthalpies",
            "`heat / J` with `mass / g` and `water / g`, or `enthalpy / (kJ/mol)` with `molality / (mol/kg)`",
            "Add the columns of one of the two.", "missing column", (1, -1),
        )  # fmt: skip
        return
    if not {"heat", "enthalpy"} & headings.blamed:
        place = heading_of(built, "heat") or heading_of(built, "enthalpy")
        problems.add_rows(
            table.name, rows_of(~heat & ~enthalpy & ~dilution, built), place, "neither a heat nor an enthalpy",
            "one of the two", "Fill it in, or leave out the row.", "nothing measured",
        )  # fmt: skip
    problems.add_rows(
        table.name, rows_of(heat & enthalpy & ~dilution, built), heading_of(built, "heat"),
        "both a heat and an enthalpy", "one of the two", "Empty one of the two cells.", "measured twice",
    )  # fmt: skip
    only_heat, only_enthalpy = heat & ~enthalpy & ~dilution, enthalpy & ~heat & ~dilution
    for name, rows, why in (
        ("mass", only_heat, "a heat needs the mass of the salt"),
        ("water", only_heat, "a heat needs the amount of water"),
        ("molality", only_enthalpy, "an enthalpy needs its molality"),
    ):
        needed(built, name, rows, why, problems)


def _salt_or_sample(built: Built, problems: Problems) -> None:
    headings, table = built.headings, built.table
    if not headings.has("salt") and not headings.has("sample"):
        problems.add(
            table.name, 1, None, "there is neither a column `salt` nor a column `sample`", "one of the two",
            "Add `salt`, with formulae such as KCl or CaCl2·6H2O.", "missing column", (1, -1),
        )  # fmt: skip
    elif not {"salt", "sample"} & headings.blamed:
        neither = (table.keys["salt"].code < 0) & (table.keys["sample"].code < 0)
        place = heading_of(built, "salt") or heading_of(built, "sample")
        problems.add_rows(
            table.name, rows_of(neither, built), place, "neither a salt nor a sample", "one of the two",
            "Fill it in.", "empty cell",
        )  # fmt: skip


def check_purity(built: Built, problems: Problems) -> None:
    """A lot's mass fractions of salt and water cannot add up to more than all of it."""
    fraction, water = built.table.quantities["mass_fraction"], built.table.quantities["water"]
    slack = 1e-9 + np.nan_to_num(fraction.u) + np.nan_to_num(water.u)
    with np.errstate(invalid="ignore"):
        over = np.flatnonzero(fraction.value + water.value > 1 + slack)
    for position in over.tolist():
        total = float(fraction.value[position] + water.value[position])
        problems.add(
            built.table.name, int(built.table.row[position]), heading_of(built, "mass_fraction"),
            f"mass_fraction and water add up to {total:.6g}", "1 at most", "Correct one of the two.", "out of range",
        )  # fmt: skip


def contradictions(
    runs: Table, samples: Table, sample: Integers, salts: Sequence[Salt], salt: Integers
) -> tuple[Remark, ...]:
    """Runs whose stated molality is not that of their masses, beyond 0.5 % and its u; the masses are used.

    The molality of the masses is over all water: solvent, water of the lot, water of hydration; and of all salt, that
    which the solvent held before the run included: m₂ = (m₁W₀ + a)/W.
    """
    stated, mass, water, initial = (runs.quantities[name] for name in ("molality", "mass", "water", "initial_molality"))
    both = np.flatnonzero(~np.isnan(stated.value) & ~np.isnan(mass.value) & ~np.isnan(water.value) & (salt >= 0))
    if not both.size:
        return ()
    molar_mass = np.array([one.molar_mass for one in salts])[salt[both]]
    hydration = np.array([one.water for one in salts])[salt[both]]
    lot_water, fraction = _lot(samples, sample[both])
    amount = mass.value[both] * fraction / molar_mass  # mol
    before = np.nan_to_num(initial.value[both])  # mol/kg
    solvent = water.value[both] / 1000  # kg
    brought = (mass.value[both] * lot_water + amount * hydration * MOLAR_MASS_OF_WATER) / 1000  # kg
    kilograms = solvent + brought
    weighed = (before * solvent + amount) / kilograms
    parts = (
        stated.u[both],
        (amount - weighed * brought) / kilograms * (mass.u[both] / mass.value[both]),
        (before - weighed) / kilograms * (water.u[both] / 1000),
        solvent / kilograms * initial.u[both],
    )
    spread = np.sqrt(sum(np.nan_to_num(part) ** 2 for part in parts))
    difference = np.abs(stated.value[both] - weighed)
    odd = np.flatnonzero((difference > CONTRADICTION * weighed) & (difference > spread))
    name = runs.keys["run"]
    remarks = [
        Remark(
            f"run {name.labels[name.code[both[place]]]} ({runs.name}, row {runs.row[both[place]]}): its molality "
            f"{number(stated.value[both[place]])} mol/kg is not the {weighed[place]:.4g} mol/kg of its masses"
            f"{' and its initial molality' if before[place] > 0 else ''}; the masses are used",
            f"run {name.labels[name.code[both[place]]]}",
        )
        for place in odd[: TOLD_SINGLY if odd.size > 50 else odd.size].tolist()
    ]
    if odd.size > len(remarks):
        left = odd.size - len(remarks)
        text = f"{left} more runs have a molality that is not that of their masses; the masses are used"
        remarks.append(Remark(text, f"{left} runs"))
    return tuple(remarks)


def _lot(samples: Table, sample: Integers) -> tuple[Floats, Floats]:
    """Water and salt in the lot of each run, as mass fractions; a pure salt where no lot is named."""
    water = np.append(np.nan_to_num(samples.quantities["water"].value), 0.0)
    fraction = np.append(samples.quantities["mass_fraction"].value, 1.0)
    fraction = np.where(np.isnan(fraction), 1.0 - water, fraction)
    return water[sample], fraction[sample]
