"""The report is written whole or not at all, with the same bytes every time."""

import os
from pathlib import Path

import pytest

from reconcile.report import ReportError, chosen, write_report
from reconcile.report import writing as writing_module


def snapshot(folder: Path) -> dict[str, bytes]:
    return {str(p.relative_to(folder)): p.read_bytes() for p in sorted(folder.rglob("*")) if p.is_file()}


def test_two_runs_give_the_same_bytes(invented, tmp_path, monkeypatch):
    write_report(invented, tmp_path / "one")
    monkeypatch.setenv("TZ", "Pacific/Auckland")
    monkeypatch.setenv("LC_ALL", "de_DE.UTF-8")
    write_report(invented, tmp_path / "elsewhere" / "two")
    first = snapshot(tmp_path / "one")
    assert first == snapshot(tmp_path / "elsewhere" / "two")
    assert {"index.html", "results.json", "tables/runs.csv", "tables/datapackage.json", "figures/KCl.svg"} <= set(first)
    assert not any(str(tmp_path).encode() in data for data in first.values())


def test_paths_returned_are_the_files_written(invented, tmp_path):
    paths = write_report(invented, tmp_path / "report")
    assert {str(path.relative_to(tmp_path / "report")) for path in paths} == set(snapshot(tmp_path / "report"))
    assert paths[-1].name == "index.html"


def test_only_the_files_named(invented, tmp_path):
    write_report(invented, tmp_path / "report", ["results"])
    assert list(snapshot(tmp_path / "report")) == ["results.json"]


def test_a_page_asked_for_alone_still_has_its_figures(invented, tmp_path):
    write_report(invented, tmp_path / "report", ["page"])
    assert list(snapshot(tmp_path / "report")) == ["index.html"]
    assert (tmp_path / "report" / "index.html").read_text(encoding="utf-8").count(
        "<svg"
    ) == 4  # three salts and the scores


def test_results_alone_never_touch_runs_or_curves(invented, tmp_path):
    del invented.runs, invented.curves  # an AttributeError if anybody asks
    write_report(invented, tmp_path / "report", ["results"])


@pytest.mark.parametrize("broken", ["page", "figures", "tables", "results"])
def test_a_format_that_fails_leaves_the_former_report_untouched(invented, tmp_path, monkeypatch, broken):
    folder = tmp_path / "report"
    write_report(invented, folder)
    (folder / "my notes.txt").write_text("kept")
    before = snapshot(folder)
    invented.campaign.title = "Another season"
    real = writing_module.renderer

    def failing(word):
        def render(material):
            yield from real(word)(material)
            raise RuntimeError("broken")

        return render if word == broken else real(word)

    monkeypatch.setattr(writing_module, "renderer", failing)
    with pytest.raises(RuntimeError, match="broken"):
        write_report(invented, folder)
    assert snapshot(folder) == before
    assert [p.name for p in tmp_path.iterdir()] == ["report"]


def test_a_failure_makes_no_folder(invented, tmp_path, monkeypatch):
    monkeypatch.setattr(writing_module, "renderer", lambda word: 1 / 0)
    with pytest.raises(ZeroDivisionError):
        write_report(invented, tmp_path / "a" / "b" / "report")
    assert list(tmp_path.iterdir()) == []


def test_former_files_are_replaced_and_others_left_alone(invented, tmp_path):
    folder = tmp_path / "report"
    (folder / "tables").mkdir(parents=True)
    (folder / "tables" / "mine.csv").write_text("kept")
    (folder / "index.html").write_text("old")
    write_report(invented, folder)
    assert (folder / "tables" / "mine.csv").read_text() == "kept"
    assert "Verdict" in (folder / "index.html").read_text(encoding="utf-8")


def test_a_file_in_the_folders_place_is_a_problem(invented, tmp_path):
    (tmp_path / "report").write_text("a file")
    with pytest.raises(ReportError, match="is a file"):
        write_report(invented, tmp_path / "report")
    (tmp_path / "report").unlink()
    (tmp_path / "report" / "index.html").mkdir(parents=True)
    with pytest.raises(ReportError, match="is a folder"):
        write_report(invented, tmp_path / "report")
    assert snapshot(tmp_path / "report") == {}


@pytest.mark.skipif(os.geteuid() == 0, reason="root may write anywhere")
def test_a_folder_that_cannot_be_written_is_a_problem(invented, tmp_path):
    tmp_path.chmod(0o500)
    with pytest.raises(ReportError, match="can be written"):
        write_report(invented, tmp_path / "report")


@pytest.mark.parametrize(
    ("files", "told"),
    [
        (["pages"], "Did you mean page"),
        (["appendix"], "not yet served"),
        ([], "nothing is named"),
        (["x", "page"], '"x" is unknown'),
    ],
)
def test_names_that_are_not_served(files, told, tmp_path, invented):
    with pytest.raises(ReportError, match=told):
        write_report(invented, tmp_path / "report", files)
    assert list(tmp_path.iterdir()) == []


def test_the_order_of_names_does_not_matter():
    assert chosen(["page", "tables", "page"]) == chosen(["tables", "page"])
