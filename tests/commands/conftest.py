"""A small invented campaign on the disk, and a way to run commands as a person would."""

from __future__ import annotations

from pathlib import Path

import pytest

from reconcile.commands import main

RUNS = """run,salt,molality / (mol/kg),enthalpy / (kJ/mol),u(enthalpy) / (kJ/mol),calorimeter,date
R001,KCl,0.0512,17.46,0.05,A,2031-03-01
R002,KCl,0.1030,17.55,0.05,A,2031-03-01
R003,KCl,0.2508,17.53,0.05,B,2031-03-02
R004,KCl,0.5021,17.44,0.05,B,2031-03-02
R005,NaCl,0.0508,4.12,0.05,A,2031-03-03
R006,NaCl,0.1017,4.19,0.05,A,2031-03-03
R007,NaCl,0.2511,4.17,0.05,B,2031-03-04
R008,NaCl,0.4998,4.07,0.05,B,2031-03-04
"""


@pytest.fixture
def season(tmp_path: Path) -> Path:
    """A folder with a campaign of eight invented runs."""
    folder = tmp_path / "spring season"
    folder.mkdir()
    (folder / "runs.csv").write_text(RUNS, encoding="utf-8")
    (folder / "campaign.toml").write_text('[campaign]\ntitle = "Invented spring"\n', encoding="utf-8")
    return folder


@pytest.fixture
def run(capsys, monkeypatch, tmp_path):
    """Run the command line in an empty folder; status, what went to stdout, what went to stderr."""
    here = tmp_path / "here"
    here.mkdir()
    monkeypatch.chdir(here)

    def run_it(*arguments: object) -> tuple[int, str, str]:
        status = main([str(argument) for argument in arguments])
        shown = capsys.readouterr()
        return status, shown.out, shown.err

    return run_it
