"""read_campaign: a laboratory's folder, or one table of runs, to checked tables."""

from __future__ import annotations

import os
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path

import numpy as np

from reconcile.campaign.checks import check_purity, check_required, check_runs, check_words, contradictions
from reconcile.campaign.columns import TABLES, keys_of, quantities_of
from reconcile.campaign.delimited import read_delimited
from reconcile.campaign.dilutions import remarks_of_solutions
from reconcile.campaign.folder import SETTINGS, files_of, one_path
from reconcile.campaign.headings import read_headings
from reconcile.campaign.links import (
    Spellings,
    batches,
    duplicates,
    identities,
    look_up,
    parsed,
    run_names,
    spellings,
    unify,
)
from reconcile.campaign.named import calorimeters_as_named, samples_as_named
from reconcile.campaign.own_values import remarks_of_own_values
from reconcile.campaign.problems import CampaignError, Problems
from reconcile.campaign.quantities import Built, build, empty_table
from reconcile.campaign.settings import Settings
from reconcile.campaign.tables import Booleans, Campaign, Integers, Table
from reconcile.campaign.told import choices_by_salt, exclusions, notes, remarks_of_tables
from reconcile.campaign.toml import read_settings
from reconcile.chemistry import Salt


def read_campaign(path: str | os.PathLike[str] | Sequence[str | os.PathLike[str]]) -> Campaign:
    """Read and check a campaign.

    Parameters
    ----------
    path : path or sequence of one path
        A folder (runs.csv; samples.csv, calorimeters.csv and campaign.toml where they are there), or one table of runs
        as CSV, which is then a whole campaign.

    Returns
    -------
    Campaign
        Its quantities in the glossary's units (g, J, K, mol/kg, kJ/mol).

    Raises
    ------
    CampaignError
        With every problem of all files, in their order.
    """
    problems = Problems()
    checksums: dict[str, str] = {}
    place = one_path(path, problems)
    files = files_of(place, problems) if place is not None else {}
    if place is None or not files:
        raise CampaignError(problems.all())
    settings = Settings()
    if SETTINGS in files:
        settings = read_settings(files[SETTINGS], problems, checksums)
    built = {name: _table(name, files[name], settings, problems, checksums) for name in TABLES if name in files}
    return _Assembly(place, files, built, settings, problems, checksums).campaign()


def _table(name: str, path: Path, settings: Settings, problems: Problems, checksums: dict[str, str]) -> Built | None:
    """One table from its file; None where nothing can be made of it."""
    texts = [column.name for column in keys_of(name)]
    quantities = [column.name for column in quantities_of(name)]
    raw = read_delimited(path, texts, quantities, problems, checksums)
    if raw is None:
        return None
    empty = [not text and bool(raw.frame[place].isna().all()) for place, text in enumerate(raw.headings)]
    headings = read_headings(path.name, name, raw.headings, empty, problems)
    defaults = settings.defaults.get(name, {})
    return build(raw, headings, name, defaults, settings.reference_temperature, problems)


class _Assembly:
    """The tables of one campaign being put together; every check that can be made is made."""

    def __init__(
        self,
        place: Path,
        files: dict[str, Path],
        built: dict[str, Built | None],
        settings: Settings,
        problems: Problems,
        checksums: dict[str, str],
    ) -> None:
        self.place, self.files, self.settings = place, files, settings
        self.problems, self.checksums = problems, checksums
        self.built = {name: one for name, one in built.items() if one is not None}

    def campaign(self) -> Campaign:
        """The whole, or every problem."""
        for name, built in self.built.items():
            check_words(built, name, self.problems)
        if "runs" not in self.built:
            raise CampaignError(self.problems.all())
        self._no_rows()
        runs = self._named_runs()
        samples, sample, sample_spellings = self._samples(runs)
        calorimeters, calorimeter = self._calorimeters(runs)
        salts, salt = self._salts(runs, sample, sample_spellings)
        check_runs(runs, self.problems)
        batch = batches(runs, self.problems)
        included, reason = exclusions(self.settings, runs, self.problems)
        noted = notes(self.settings, runs, self.problems)
        published, most, between = choices_by_salt(self.settings, salts, not len(self.problems), self.problems)
        self.problems.raise_if_any()
        return Campaign(
            title=self.settings.title or self._stem(),
            laboratory=self.settings.laboratory,
            reference_temperature=self.settings.reference_temperature,
            pressure=self.settings.pressure,
            runs=runs.table,
            samples=samples,
            calorimeters=calorimeters,
            salts=salts,
            salt=salt,
            sample=sample,
            calorimeter=calorimeter,
            batch=batch,
            included=included,
            reason=reason,
            published_dilution=published,
            max_molality=most,
            between_batches=between,
            formation_set=self.settings.formation_set,
            remarks=(
                *remarks_of_tables(runs, self.built, self.files, self.settings, salts, self.place),
                *remarks_of_solutions(runs.table, salts, salt),
                *contradictions(runs.table, samples, sample, salts, salt),
                *remarks_of_own_values(self.settings.references, salts, self.settings.formation_set),
            ),
            checksums=self.checksums,
            date=self.settings.date,
            notes=noted,
            references=self.settings.references,
        )

    def _stem(self) -> str:
        return self.place.stem if self.place.is_file() else self.place.resolve().name

    def _no_rows(self) -> None:
        """A table of runs without runs."""
        table = self.built["runs"].table
        if not len(table) and self.built["runs"].complete:
            expected = "at least one run"
            self.problems.add(table.name, None, None, "there are no rows below the headings", expected, "", "no rows")

    def _named_runs(self) -> Built:
        """The runs with their names in place, and those told that come twice."""
        built = self.built["runs"]
        named = run_names(built.table.keys["run"], built.table.row)
        table = replace(built.table, keys={**built.table.keys, "run": named})
        built = replace(built, table=table)
        duplicates(built, "run", self.problems)
        return built

    def _samples(self, runs: Built) -> tuple[Table, Integers, Spellings]:
        """The lots, the lot of each run, and their salts."""
        built = self.built.get("samples")
        if built is None:
            nothing = Spellings((), np.full(0, -1, dtype=np.int64))
            if "samples" in self.files:  # a problem already
                return empty_table("samples.csv", "samples"), np.full(len(runs.table), -1, dtype=np.int64), nothing
            table, sample = samples_as_named(runs, self.problems)
            return table, sample, parsed(table.keys["salt"])
        check_required(built, ("sample", "salt"), self.problems)
        check_purity(built, self.problems)
        duplicates(built, "sample", self.problems)
        if built.complete and built.headings.find("sample"):
            sample = look_up(runs, "sample", built.table.keys["sample"], built.table.name, self.problems)
        else:
            sample = np.full(len(runs.table), -1, dtype=np.int64)
        return built.table, sample, spellings(built, self.problems)

    def _calorimeters(self, runs: Built) -> tuple[Table, Integers]:
        """The calorimeters, and that of each run."""
        built = self.built.get("calorimeters")
        if built is None:
            if "calorimeters" in self.files:
                return empty_table("calorimeters.csv", "calorimeters"), np.full(len(runs.table), -1, dtype=np.int64)
            return calorimeters_as_named(runs)
        check_required(built, ("calorimeter",), self.problems)
        duplicates(built, "calorimeter", self.problems)
        if not built.complete or not built.headings.find("calorimeter"):
            return built.table, np.full(len(runs.table), -1, dtype=np.int64)
        names = built.table.keys["calorimeter"]
        return built.table, look_up(runs, "calorimeter", names, built.table.name, self.problems)

    def _salts(self, runs: Built, sample: Integers, lots: Spellings) -> tuple[tuple[Salt, ...], Integers]:
        """The salts of the runs, straight away or through their lots; told where the two differ."""
        own = spellings(runs, self.problems)
        of_lot = np.append(lots.code, -1)[sample]
        shifted = np.where(of_lot >= 0, of_lot + len(own.salts), -1)
        everything = (*own.salts, *lots.salts)
        mine, theirs = identities(own.code, everything), identities(shifted, everything)
        differ: Booleans = (mine >= 0) & (theirs >= 0) & (mine != theirs)
        heading = runs.headings.find("salt")
        for position in np.flatnonzero(differ).tolist():
            lot = lots.salts[int(of_lot[position])]
            salt = own.salts[int(own.code[position])]
            key = runs.table.keys["sample"]
            label = key.labels[int(key.code[position])]
            self.problems.add(
                runs.table.name, int(runs.table.row[position]), heading.text if heading else "salt",
                f"{salt.formula if salt else ''}, but the sample {label} is {lot.formula if lot else ''}",
                "the salt of the sample", "Correct one of the two, or empty the cell.", "two salts",
            )  # fmt: skip
        return unify(np.where(own.code >= 0, own.code, shifted), everything)
