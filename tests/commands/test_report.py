"""reconcile report, end to end on a small campaign."""

import json
import subprocess
import sys

import pytest


def test_the_whole_job(run, season, tmp_path):
    status, out, err = run("report", season)
    assert status == 0
    assert err == ""  # no bar into a pipe
    folder = tmp_path / "here" / "reports" / "spring season"
    assert out.splitlines()[-1] == str((folder / "index.html").relative_to(tmp_path / "here"))
    results = json.loads((folder / "results.json").read_text(encoding="utf-8"))
    assert results["campaign"]["runs"] == 8
    assert [salt["salt"] for salt in results["salts"]] == ["KCl", "NaCl"]
    assert results["salts"][0]["standard_enthalpy"] == pytest.approx(17.22, abs=0.15)  # Parker 1965, from memory
    assert results["salts"][1]["standard_enthalpy"] == pytest.approx(3.88, abs=0.15)  # Parker 1965, from memory
    assert str(tmp_path) not in (folder / "index.html").read_text(encoding="utf-8")


def test_a_table_alone_and_only_the_files_named(run, season, tmp_path):
    status, out, _ = run("report", season / "runs.csv", "--out", tmp_path / "out", "--files", "results")
    assert status == 0
    assert [path.name for path in (tmp_path / "out").iterdir()] == ["results.json"]
    assert out.splitlines()[-1] == str(tmp_path / "out" / "results.json")


def test_all_problems_at_once_and_nothing_written(run, season, tmp_path):
    table = season / "runs.csv"
    text = table.read_text(encoding="utf-8").replace("KCl,0.1030", "KCl2,0.1030").replace("17.53", '"17,53"')
    table.write_text(text.replace("R008", "R007"), encoding="utf-8")
    before = sorted(path.name for path in season.iterdir())
    status, out, err = run("report", season)
    assert status == 2
    assert out == ""
    for told in ("runs.csv, row 3", "KCl2", "17,53", "R007", "nothing was written"):
        assert told in err
    assert "Traceback" not in err
    assert list((tmp_path / "here").iterdir()) == []
    assert sorted(path.name for path in season.iterdir()) == before


def test_a_campaign_that_is_not_there(run, tmp_path):
    status, _, err = run("report", tmp_path / "nowhere")
    assert status == 2
    assert "nowhere" in err


def test_a_file_in_the_place_of_the_folder(run, season, tmp_path):
    (tmp_path / "taken").write_text("x")
    status, _, err = run("report", season, "--out", tmp_path / "taken", "--files", "results")
    assert status == 2
    assert "is a file" in err
    assert (tmp_path / "taken").read_text() == "x"


def test_a_console_without_greek_letters(season, tmp_path):
    program = [sys.executable, "-c", "import sys; from reconcile.commands import main; sys.exit(main())"]
    done = subprocess.run(
        [*program, "report", str(season), "--out", str(tmp_path / "out"), "--files", "results"],
        capture_output=True,
        env={"PYTHONIOENCODING": "latin-1", "PATH": ""},
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert b"?" in done.stdout  # the console's letters hold no χ
