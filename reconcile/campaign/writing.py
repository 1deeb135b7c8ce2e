"""Writing a campaign that was made elsewhere: the demo's and simulated ones; whole or not at all."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Mapping
from pathlib import Path

import pandas as pd

from reconcile.campaign.columns import TABLES


def write_campaign(
    folder: str | os.PathLike[str],
    campaign_toml: str | None,
    tables: Mapping[str, pd.DataFrame],
    *,
    replace: bool = False,
) -> tuple[Path, ...]:
    """Write the files of a campaign into a folder, which is made if it is missing.

    Parameters
    ----------
    folder : path
        Where to.
    campaign_toml : str or None
        Text of campaign.toml; None writes none.
    tables : mapping of str to DataFrame
        runs, samples, calorimeters; columns are headings, quantity / unit. Numbers are written as the shortest text
        that reads back the same, missing ones as empty cells.
    replace : bool
        Whether files of these names may be replaced.

    Returns
    -------
    tuple of Path
        What was written.

    Raises
    ------
    ValueError
        If a table has no such name or there is no table of runs.
    FileExistsError
        If a file is there already and ``replace`` is False; nothing is written then.
    """
    unknown = sorted(set(tables) - set(TABLES))
    if unknown or "runs" not in tables:
        raise ValueError(f"tables {', '.join(sorted(tables))}: expected runs and any of {', '.join(TABLES[1:])}")
    texts = {f"{name}.csv": tables[name].to_csv(index=False, lineterminator="\n") for name in TABLES if name in tables}
    if campaign_toml is not None:
        texts["campaign.toml"] = campaign_toml
    place = Path(folder)
    there = [name for name in texts if (place / name).exists()]
    if there and not replace:
        raise FileExistsError(f"{', '.join(there)} in {place}: expected a folder without them; choose another folder")
    place.mkdir(parents=True, exist_ok=True)
    with tempfile.TemporaryDirectory(prefix=".writing-", dir=place) as unfinished:
        for name, text in texts.items():
            (Path(unfinished) / name).write_text(text, encoding="utf-8", newline="\n")
        for name in texts:
            os.replace(Path(unfinished) / name, place / name)
    return tuple(place / name for name in texts)
