"""The pages of reference_data/README.md are those that the tables give."""

import pytest

from reconcile.chemistry.folder import tables_folder
from reconcile.reference import consistency


def test_readme_is_up_to_date():
    text = (tables_folder() / "README.md").read_text(encoding="utf-8")
    assert consistency.up_to_date(text) == text, "run: python -m reconcile.reference.consistency"


def test_the_command_writes_the_pages(tmp_path, capsys):
    readme = tmp_path / "README.md"
    readme.write_text(
        "a\n<!-- counts: begin -->old<!-- counts: end -->\nb\n<!-- consistency: begin --><!-- consistency: end -->\n"
        "<!-- lattice: begin --><!-- lattice: end -->c"
    )
    assert consistency.main(tmp_path) == 0
    assert "written" in capsys.readouterr().out
    text = readme.read_text(encoding="utf-8")
    assert "old" not in text
    assert text.startswith("a\n")
    assert text.endswith("c")
    assert "| NaCN |" in text
    assert "| Kapustinskii | all salts |" in text
    consistency.main(tmp_path)
    assert "unchanged" in capsys.readouterr().out


def test_a_readme_without_markers_is_refused():
    with pytest.raises(ValueError, match="no markers"):
        consistency.up_to_date("nothing")


def test_a_reason_stands_for_every_salt_that_is_listed_and_for_no_other():
    listed = set()
    for set_name in ("NBS-1982", "CRC"):
        frame = consistency.cycle_differences(set_name, set_name)
        apart = (frame["difference"].abs() > 0.5) | (frame["difference"].abs() > 2 * frame["u"])
        listed |= {(set_name, salt) for salt in frame.loc[apart, "salt"]}
    assert listed == set(consistency.REASONS)
