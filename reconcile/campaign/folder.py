"""Where a campaign's files are: a folder, or one table alone; what is not served is told."""

from __future__ import annotations

import os
from collections.abc import Sequence
from difflib import get_close_matches
from pathlib import Path

from reconcile.campaign.columns import LATER_TABLES, TABLES
from reconcile.campaign.problems import Problems

SETTINGS = "campaign.toml"
_LATER_FORMATS = {
    ".xlsx": "a workbook", ".xlsm": "a workbook", ".xls": "a workbook", ".ods": "a workbook",
    ".parquet": "a Parquet table", ".xml": "a ThermoML file", ".tsv": "a table with tabs", ".txt": "a text table",
}  # fmt: skip


def one_path(path: str | os.PathLike[str] | Sequence[str | os.PathLike[str]], problems: Problems) -> Path | None:
    """The one campaign that is asked for."""
    paths = [path] if isinstance(path, str | os.PathLike) else list(path)
    if len(paths) != 1:
        found = f"{len(paths)} campaigns; several together are in the design of the input but not yet served"
        problems.add("", None, None, found, "one campaign", "Give one folder or one table.", "not yet served")
        return None
    return Path(paths[0])


def files_of(place: Path, problems: Problems) -> dict[str, Path]:
    """The files of a campaign, by what they are."""
    name = place.name or str(place)
    try:
        folder, file = place.is_dir(), place.is_file()
        inside = {one.name: one for one in sorted(place.iterdir())} if folder else {}
    except (OSError, ValueError) as fault:
        problems.add(name, None, None, f"it cannot be read: {fault}", "a folder or a CSV table", "", "unreadable")
        return {}
    if not folder and not file:
        problems.add(name, None, None, "there is no such folder or file", "a folder or a CSV table of runs",
                     "Look at the spelling of its path.", "no file")  # fmt: skip
        return {}
    if file:
        return _single(place, problems)
    found = {table: inside[f"{table}.csv"] for table in TABLES if f"{table}.csv" in inside}
    if SETTINGS in inside:
        found[SETTINGS] = inside[SETTINGS]
    if "runs" not in found:
        others = [other for other in inside if other.casefold().endswith((".csv", *_LATER_FORMATS))]
        close = get_close_matches("runs.csv", others, n=1, cutoff=0.6)
        remedy = f"Rename {close[0]} to runs.csv." if close else "Put the table of runs there under this name."
        problems.add("runs.csv", None, None, f"it is missing in the folder {name}", "runs.csv", remedy, "no file")
    for later in [f"{table}.csv" for table in LATER_TABLES] + ["traces"]:
        if later in inside:
            problems.add(
                later, None, None, "this is in the design of the input but not yet served",
                f"{', '.join(f'{table}.csv' for table in TABLES)}, {SETTINGS}", "Move it out of the folder for now.",
                "not yet served",
            )  # fmt: skip
    return found


def _single(place: Path, problems: Problems) -> dict[str, Path]:
    """A file given alone: a table of runs."""
    ending = place.suffix.casefold()
    if ending == ".csv":
        return {"runs": place}
    if ending in _LATER_FORMATS:
        found = f"{_LATER_FORMATS[ending]} is in the design of the input but not yet served"
        if ending in (".tsv", ".txt"):
            found = f"{_LATER_FORMATS[ending]} is not served"
        remedy = "Save the runs as CSV with commas."
        problems.add(place.name, None, None, found, "a CSV table of runs", remedy, "not yet served")
    elif place.name == SETTINGS:
        problems.add(place.name, None, None, "this file alone is no campaign", "the folder that it lies in",
                     "Give the folder.", "no table")  # fmt: skip
    else:
        problems.add(place.name, None, None, f"a file with the ending {ending or '(none)'}", "a folder or a .csv table",
                     "Save the runs as CSV with commas.", "no table")  # fmt: skip
    return {}
