"""The entry point: light help, and an exit status for every fate."""

import subprocess
import sys

import pytest

import reconcile.commands.report
from reconcile.commands.entry import COMMANDS

HEAVY = ("pandas", "numpy", "scipy", "statsmodels", "pint", "pydantic", "matplotlib", "chemicals", "jinja2", "rich")


@pytest.mark.parametrize("arguments", [["--help"], ["report", "--help"], ["demo", "--help"], ["check", "--help"]])
def test_help_imports_nothing_heavy(arguments):
    program = (
        "import sys\nfrom reconcile.commands import main\n"
        f"status = main({arguments!r})\n"
        f"print([name for name in {HEAVY!r} if name in sys.modules], file=sys.stderr)\nsys.exit(status)"
    )
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stderr.strip() == "[]"
    assert "Usage: reconcile" in done.stdout


def test_the_public_names_load_nothing_until_asked():
    program = "import sys, reconcile; print([n for n in dir(reconcile) if n[0] != '_'], 'numpy' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout.endswith("False\n")
    assert "'analyse'" in done.stdout


def test_an_unknown_public_name_is_an_attribute_error():
    import reconcile

    with pytest.raises(AttributeError, match="analyze"):
        _ = reconcile.analyze


def test_help_names_every_command_and_status(run):
    status, out, _ = run("--help")
    assert status == 0
    assert all(name in out for name in COMMANDS)
    assert "2 the input" in " ".join(out.split())


def test_version_names_what_can_change_a_number(run):
    status, out, _ = run("--version")
    assert status == 0
    assert [line.split()[0] for line in out.splitlines()][:3] == ["reconcile", "python", "numpy"]


@pytest.mark.parametrize(
    ("arguments", "told"),
    [
        ([], "Usage"),
        (["reprot", "x"], "Did you mean report?"),
        (["report"], "Missing argument"),
        (["report", "x", "--otu", "y"], "No such option"),
        (["report", "x", "--files", "pages"], "Did you mean page?"),
        (["report", "x", "--files", "workbook"], "not yet served"),
        (["demo", "--files", ""], "nothing is named"),
    ],
)
def test_a_command_with_problems_exits_2(run, tmp_path, arguments, told):
    status, out, err = run(*arguments)
    assert status == 2
    assert told in out + err
    assert list((tmp_path / "here").iterdir()) == []


def test_an_internal_error_exits_1_and_shows_a_trace_only_when_asked(run, season, monkeypatch):
    def broken(path):
        raise ZeroDivisionError("a slip of ours")

    monkeypatch.setattr("reconcile.read_campaign", broken, raising=False)
    monkeypatch.delenv("RECONCILE_TRACEBACK", raising=False)
    status, out, err = run("report", season)
    assert status == 1
    assert out == ""
    assert "Internal error: ZeroDivisionError: a slip of ours" in err
    assert "Traceback" not in err
    assert "Traceback" in run("--traceback", "report", season)[2]
    monkeypatch.setenv("RECONCILE_TRACEBACK", "1")
    assert "Traceback" in run("report", season)[2]


def test_an_interrupted_run_says_so(run, season, monkeypatch):
    def interrupted(path):
        raise KeyboardInterrupt

    monkeypatch.setattr("reconcile.read_campaign", interrupted, raising=False)
    status, _, err = run("report", season)
    assert status == 1
    assert "nothing was written" in err


def test_stem_of_a_campaign(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "spring.2031").mkdir()
    stem = reconcile.commands.report.stem
    assert stem(tmp_path / "spring.2031") == "spring.2031"
    assert stem(tmp_path / "autumn.csv") == "autumn"
    assert stem(tmp_path / "spring.2031" / ".") == "spring.2031"
