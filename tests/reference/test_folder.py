"""The tables are found in a checkout and in an installed wheel."""

import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from reconcile.chemistry.folder import PACKAGE, tables_folder


def test_a_checkout_has_them_beside_the_package():
    assert (tables_folder() / "datapackage.json").is_file()


def test_beside_and_inside(tmp_path):
    package = tmp_path / "reconcile"
    package.mkdir()
    with pytest.raises(FileNotFoundError, match="neither"):
        tables_folder(package)
    beside = tmp_path / "reference_data"
    beside.mkdir()
    (beside / "datapackage.json").write_text("{}")
    assert tables_folder(package) == beside
    inside = package / "reference_data"
    inside.mkdir()
    (inside / "datapackage.json").write_text("{}")
    assert tables_folder(package) == inside


def test_the_layout_of_a_wheel_answers(tmp_path):
    """The package and the folder inside it, as force-include puts them; nothing beside; another working folder."""
    installed = tmp_path / "site"
    shutil.copytree(PACKAGE, installed / "reconcile", ignore=shutil.ignore_patterns("__pycache__", "reference_data"))
    shutil.copytree(tables_folder(), installed / "reconcile" / "reference_data")
    program = (
        "import sys; sys.path.insert(0, sys.argv[1]);"
        "from reconcile import reference; from reconcile.chemistry.folder import tables_folder;"
        "print(tables_folder()); print(reference.solution_enthalpies(['NaCl'])['value'].iloc[0])"
    )
    result = subprocess.run(
        [sys.executable, "-I", "-c", program, str(installed)], capture_output=True, text=True, check=True, cwd=tmp_path
    )
    folder, value = result.stdout.split()
    assert Path(folder) == installed / "reconcile" / "reference_data"
    assert float(value) == 3.88  # Parker 1965, CRC reprint
