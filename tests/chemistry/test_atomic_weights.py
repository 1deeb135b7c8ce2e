"""The small loader of the atomic weights: one place, few imports, faults named."""

import subprocess
import sys

import pytest

from reconcile.chemistry import standard_atomic_weights
from reconcile.chemistry.atomic_weights import FILE, _read
from reconcile.chemistry.folder import tables_folder

HEADING = "element,standard_atomic_weight / 1,half_width / 1,u(standard_atomic_weight) / 1\n"


def test_what_formulae_use_is_what_the_table_says():
    "The reference room reads the same file with its own loader."
    from reconcile.reference import table

    frame = table("atomic_weights").set_index("element")
    assert dict(standard_atomic_weights()) == {
        name: (value, u)
        for name, value, u in zip(
            frame.index,
            frame["standard_atomic_weight / 1"],
            frame["u(standard_atomic_weight) / 1"],
            strict=True,
        )
    }


def test_no_weight_stands_anywhere_else_in_the_package():
    "39.0983 (K), 22.98976928 (Na): IUPAC 2021, from memory."
    from reconcile.chemistry.folder import PACKAGE

    texts = {path.name: path.read_text(encoding="utf-8") for path in PACKAGE.rglob("*.py")}
    holders = [name for name, text in texts.items() if "39.0983" in text or "22.98976" in text]
    assert holders == []
    assert "39.0983" in (tables_folder() / FILE).read_text(encoding="utf-8")


def test_radium_has_its_nuclide():
    import periodictable

    assert standard_atomic_weights()["Ra"][0] == pytest.approx(periodictable.Ra[226].mass, abs=1e-4)


@pytest.mark.parametrize("row", ["Na,22.99,0.01,", "Na,heavy,0.01,0.006", "Na,22.99"])
def test_a_row_that_cannot_be_read_is_named(tmp_path, row):
    path = tmp_path / FILE
    path.write_text(HEADING + "H,1.008,0.0002,0.0001\n" + row + "\n", encoding="utf-8")
    with pytest.raises(ValueError, match=r"atomic_weights\.csv, row 3"):
        _read(path)


def test_another_heading_is_refused(tmp_path):
    path = tmp_path / FILE
    path.write_text("element,weight\nH,1.008\n", encoding="utf-8")
    with pytest.raises(ValueError, match=r"row 2.*standard_atomic_weight"):
        _read(path)


def test_formulae_need_no_heavy_import():
    program = (
        "import sys; from reconcile.chemistry import read_salt; read_salt('KCl');"
        "print([name for name in ('numpy', 'pandas', 'scipy', 'chemicals') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
