"""The report's files on the disk: all of them or none."""

from __future__ import annotations

import os
import shutil
import tempfile
from collections.abc import Callable, Iterable
from pathlib import Path

from reconcile.report.formats import ReportError, chosen, renderer
from reconcile.report.material import Material
from reconcile.report.results import Results


def write_report(
    analysis: Results,
    folder: str | os.PathLike[str],
    files: Iterable[str] | None = None,
    progress: Callable[[str], None] | None = None,
) -> tuple[Path, ...]:
    """Write the report of a campaign.

    Everything is rendered beside the folder first and moved in when it is complete: where a format fails, the former
    report stays as it was. Files of other names in the folder are left alone.

    Parameters
    ----------
    analysis : Results
        What `reconcile.analyse` returns.
    folder : path
        Made if missing.
    files : iterable of str, optional
        Formats by name (results, tables, figures, page); all that are served by default.
    progress : callable, optional
        Called with the name of each format before it is rendered.

    Returns
    -------
    paths : tuple of Path
        The files written, in the order of writing; index.html last where it is among them.

    Raises
    ------
    ReportError
        If a name in ``files`` is unknown or not yet served, or the folder cannot be written.
    """
    formats = chosen(files)
    target = Path(folder)
    if target.exists() and not target.is_dir():
        raise ReportError(f"{target} is a file", "a folder to write the report into", "Give another --out.")
    made: list[Path] = []
    try:
        made = _make(target.parent)
        beside = Path(tempfile.mkdtemp(prefix=f".{target.name}.", dir=target.parent))
    except OSError as fault:
        _unmake(made)
        raise ReportError(
            f"{target.parent}: {fault.strerror}", "a folder that can be written", "Give another --out."
        ) from fault
    try:
        names = _render_into(beside, analysis, formats, progress)
        _move(beside, target, names)
    except BaseException:
        shutil.rmtree(beside, ignore_errors=True)
        _unmake(made)
        raise
    shutil.rmtree(beside, ignore_errors=True)
    return tuple(target / name for name in names)


def _render_into(
    beside: Path, analysis: Results, formats: tuple[str, ...], progress: Callable[[str], None] | None
) -> list[str]:
    material = Material(analysis)
    names: list[str] = []
    for word in formats:
        if progress is not None:
            progress(word)
        for name, data in renderer(word)(material):
            path = beside / name
            path.parent.mkdir(exist_ok=True)
            path.write_bytes(data)
            names.append(name)
    return names


def _move(beside: Path, target: Path, names: list[str]) -> None:
    try:
        target.mkdir(exist_ok=True)
        for inner in {Path(name).parent for name in names}:
            (target / inner).mkdir(exist_ok=True)
        blocked = [name for name in names if (target / name).is_dir()]
        if blocked:
            raise ReportError(
                f"{target / blocked[0]} is a folder", "room for a file of this name", "Give another --out."
            )
        for name in names:
            os.replace(beside / name, target / name)
    except (PermissionError, FileExistsError, NotADirectoryError) as fault:
        where = fault.filename2 or fault.filename or target
        raise ReportError(
            f"{where}: {fault.strerror}", "a folder that can be written", "Give another --out."
        ) from fault


def _make(folder: Path) -> list[Path]:
    """The folders that had to be made, outermost first."""
    missing = [p for p in (folder, *folder.parents) if not p.exists()][::-1]
    folder.mkdir(parents=True, exist_ok=True)
    return missing


def _unmake(made: list[Path]) -> None:
    for folder in reversed(made):
        try:
            folder.rmdir()
        except OSError:  # somebody else has put something there
            return
