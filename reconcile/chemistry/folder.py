"""Where the tables of published values lie: beside the package in a checkout, inside it in a wheel."""

from __future__ import annotations

from pathlib import Path

PACKAGE = Path(__file__).parents[1]


def tables_folder(package: Path = PACKAGE) -> Path:
    """The folder reference_data of this installation.

    Parameters
    ----------
    package : Path
        Folder of the package reconcile.

    Returns
    -------
    folder : Path

    Raises
    ------
    FileNotFoundError
        If neither place has it; names both.
    """
    inside, beside = package / "reference_data", package.parent / "reference_data"
    for folder in (inside, beside):
        if (folder / "datapackage.json").is_file():
            return folder
    raise FileNotFoundError(f"the reference tables are neither in {inside} nor in {beside}; install reconcile anew")
