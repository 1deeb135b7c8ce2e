"""What the settings do to the runs, and what is told about a campaign without refusing it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from difflib import get_close_matches
from pathlib import Path
from typing import TypeVar

import numpy as np

from reconcile.campaign.columns import TABLES, columns_of, heading
from reconcile.campaign.problems import Problems, number
from reconcile.campaign.quantities import Built
from reconcile.campaign.settings import PRESSURE, UNREADABLE, Choices, Exclusion, Note, Settings
from reconcile.campaign.tables import Booleans, Floats, Remark
from reconcile.chemistry import Salt

_Act = TypeVar("_Act", Exclusion, Note)


def exclusions(settings: Settings, runs: Built, problems: Problems) -> tuple[Booleans, tuple[str, ...]]:
    """Which runs are included, and the reasons of those that are not."""
    included = np.ones(len(runs.table), dtype=bool)
    reasons = [""] * len(runs.table)
    for one, position in _runs_of(settings, settings.exclusions, runs, problems):
        if not included[position]:
            problems.add(settings.file, None, one.place, f"run {one.run} is excluded already", "each run once",
                         "Delete one of the two.", "twice", one.order)  # fmt: skip
        included[position] = False
        reasons[position] = one.reason
    included.flags.writeable = False
    return included, tuple(reasons)


def notes(settings: Settings, runs: Built, problems: Problems) -> tuple[tuple[str, str], ...]:
    """The laboratory's remarks on its runs."""
    return tuple((one.run, one.text) for one, _ in _runs_of(settings, settings.notes, runs, problems))


def _runs_of(settings: Settings, acts: Sequence[_Act], runs: Built, problems: Problems) -> list[tuple[_Act, int]]:
    """Each act with the position of its run; told where there is no such run."""
    if not acts:
        return []
    key = runs.table.keys["run"]
    code = {label: place for place, label in enumerate(key.labels)}
    order = np.argsort(key.code, kind="stable")
    found = []
    for act in acts:
        if act.run in code:
            found.append((act, int(order[np.searchsorted(key.code[order], code[act.run])])))
        elif act.run != UNREADABLE and runs.complete and "run" not in runs.headings.blamed:
            close = get_close_matches(act.run, key.labels, n=1, cutoff=0.6) if len(key.labels) < 100_000 else []
            remedy = f"Did you mean {close[0]}?" if close else "Correct the name, or delete the entry."
            problems.add(
                settings.file, None, act.place, f"run {act.run} is not in {runs.table.name}",
                f"the name of a run of {runs.table.name}", remedy, "unknown run", act.order,
            )  # fmt: skip
    return found


def choices_by_salt(
    settings: Settings, salts: Sequence[Salt], complete: bool, problems: Problems
) -> tuple[Booleans, Floats, Booleans]:
    """[analysis], salt by salt: published_dilution, max_molality (inf where none), between_batches."""
    general = settings.choices
    chosen = [settings.salts[salt.identity][1] if salt.identity in settings.salts else Choices() for salt in salts]
    held = {salt.identity for salt in salts}
    for identity, (formula, choices) in settings.salts.items():
        if identity not in held and complete:
            close = get_close_matches(formula, [salt.formula for salt in salts], n=1, cutoff=0.5)
            problems.add(
                settings.file, None, choices.place, f"no run has the salt {formula}", "a salt of the runs",
                f"Did you mean {close[0]}?" if close else "Delete the table.", "unknown salt", choices.order,
            )  # fmt: skip

    def either(own: bool | None, all_salts: bool | None) -> bool:
        return own if own is not None else all_salts if all_salts is not None else True

    most = [one.max_molality or general.max_molality or np.inf for one in chosen]
    return (
        np.array([either(one.published_dilution, general.published_dilution) for one in chosen], dtype=bool),
        np.array(most, dtype=np.float64),
        np.array([either(one.between_batches, general.between_batches) for one in chosen], dtype=bool),
    )


def remarks_of_tables(
    runs: Built,
    built: Mapping[str, Built],
    files: Mapping[str, Path],
    settings: Settings,
    salts: Sequence[Salt],
    place: Path,
) -> tuple[Remark, ...]:
    """What was assumed, left out or not used in reading the tables."""
    remarks = [*_files_left_alone(files, place)]
    for name, one in built.items():
        remarks += _of_headings(name, one)
        if one.blank_rows:
            rows = "1 blank row is" if one.blank_rows == 1 else f"{one.blank_rows} blank rows are"
            remarks.append(Remark(f"{rows} left out of {one.table.name}", one.table.name))
    if runs.headings.find("calorimeter") and "calorimeters" not in files:
        remarks.append(Remark("there is no calorimeters.csv: the calorimeters are taken as the runs name them"))
    if runs.headings.find("sample") and "samples" not in files:
        remarks.append(Remark("there is no samples.csv: the lots are taken as the runs name them, and as pure"))
    remarks += _assumed(runs, settings)
    remarks += [
        Remark(f"uncertainties of {table} in {settings.file} serve nothing: there is no {table}.csv", table)
        for table in TABLES
        if settings.defaults.get(table) and table not in built
    ]
    if settings.pressure != PRESSURE:
        remarks.append(Remark(f"the pressure of {number(settings.pressure)} kPa is kept but not used yet"))
    remarks += [Remark(salt.reading_note, f"salt {salt.formula}") for salt in salts if salt.reading_note]
    return tuple(remarks)


def _files_left_alone(files: Mapping[str, Path], place: Path) -> list[Remark]:
    """Files whose names look like those of a campaign and are not."""
    if not place.is_dir():
        return []
    found = []
    wanted = {f"{table}.csv" for table in TABLES} | {"campaign.toml"}
    for one in sorted(place.iterdir()):
        close = get_close_matches(one.name.casefold(), sorted(wanted - set(files)), n=1, cutoff=0.8)
        if one.is_file() and one.name not in wanted and close:
            found.append(Remark(f"{one.name} is not read; did you mean {close[0]}?", "files"))
    return found


def _of_headings(table: str, built: Built) -> list[Remark]:
    """Columns that are not used yet, and readings of headings that are worth a word."""
    found = []
    columns = columns_of(table)
    for one in built.headings.known:
        name = one.column.name
        if not columns[name].used and not one.function:
            found.append(Remark(f"`{one.text}` in {built.table.name} is kept but not used yet", built.table.name))
        if one.scale.relative:
            found.append(Remark(f"`{one.text}` is read as a share of each row's {name}", built.table.name))
        if one.function == "U" and built.headings.find(name, "k") is None:
            told = heading(f"k({name})", "")
            found.append(Remark(f"`{one.text}` has no `{told}` beside it: k = 2 is taken", built.table.name))
    return found


def _assumed(runs: Built, settings: Settings) -> list[Remark]:
    """What stands in for cells that nobody filled in."""
    found = []
    reference = f"{settings.reference_temperature:g} K"
    if runs.headings.find("temperature") is None:
        found.append(Remark(f"no temperatures are given: {reference} is taken"))
    elif runs.assumed:
        rows = "1 run has" if runs.assumed == 1 else f"{runs.assumed} runs have"
        found.append(Remark(f"{rows} no temperature: {reference} is taken", f"{runs.assumed} of the runs"))
    return found
