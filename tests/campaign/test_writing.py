"""A campaign that is written reads back the same."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from reconcile.campaign import read_campaign, write_campaign


def tables() -> dict[str, pd.DataFrame]:
    rng = np.random.default_rng(1)
    runs = pd.DataFrame({
        "run": [f"R{number}" for number in range(20)], "salt": ["KCl", "CaCl2·6H2O"] * 10,
        "molality / (mol/kg)": rng.uniform(0.01, 1, 20), "enthalpy / (kJ/mol)": rng.normal(17, 3, 20),
        "u(enthalpy) / (kJ/mol)": np.where(rng.random(20) < 0.5, 0.02, np.nan), "calorimeter": "A",
        "note": 'a "quoted", note\nwith two lines',
    })  # fmt: skip
    return {"runs": runs, "calorimeters": pd.DataFrame({"calorimeter": ["A"], "parasitic_heat / J": [0.1]})}


def test_what_is_written_reads_back(tmp_path: Path) -> None:
    made = tables()
    paths = write_campaign(tmp_path / "new" / "folder", '[campaign]\ntitle = "Größe"\n', made)
    assert [path.name for path in paths] == ["runs.csv", "calorimeters.csv", "campaign.toml"]
    assert sorted(path.name for path in (tmp_path / "new" / "folder").iterdir()) == sorted(path.name for path in paths)
    campaign = read_campaign(tmp_path / "new" / "folder")
    assert campaign.title == "Größe"
    enthalpy = campaign.runs.quantities["enthalpy"]
    assert enthalpy.value.tolist() == made["runs"]["enthalpy / (kJ/mol)"].tolist()  # to the last digit
    np.testing.assert_array_equal(enthalpy.u, made["runs"]["u(enthalpy) / (kJ/mol)"])
    assert campaign.runs.keys["note"].labels == ('a "quoted", note\nwith two lines',)


def test_nothing_is_overwritten_unasked(tmp_path: Path) -> None:
    write_campaign(tmp_path, None, tables())
    before = (tmp_path / "runs.csv").read_bytes()
    changed = tables()
    changed["runs"]["salt"] = "NaCl"
    with pytest.raises(FileExistsError, match=r"runs\.csv"):
        write_campaign(tmp_path, None, changed)
    assert (tmp_path / "runs.csv").read_bytes() == before
    write_campaign(tmp_path, None, changed, replace=True)
    assert [salt.formula for salt in read_campaign(tmp_path).salts] == ["NaCl"]


def test_only_tables_of_a_campaign(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match="expected runs and any of samples, calorimeters"):
        write_campaign(tmp_path, None, {"run": tables()["runs"]})
    assert not list(tmp_path.iterdir())
