"""reconcile demo: from nothing to the finished report, twice the same."""

import json

import pytest


@pytest.fixture(scope="module")
def reports(tmp_path_factory):
    from reconcile.commands import main

    folder = tmp_path_factory.mktemp("demo")
    assert main(["demo", "--out", str(folder / "one")]) == 0
    assert main(["demo", "--out", str(folder / "two")]) == 0
    return folder


def test_the_same_bytes_twice(reports):
    first, second = (
        {str(p.relative_to(reports / name)): p.read_bytes() for p in (reports / name).rglob("*") if p.is_file()}
        for name in ("one", "two")
    )
    assert first == second
    assert {"index.html", "results.json", "campaign/runs.csv", "campaign/campaign.toml"} <= set(first)


def test_the_page_says_that_it_is_invented(reports):
    assert "invented" in (reports / "one" / "index.html").read_text(encoding="utf-8").lower()


def test_the_page_stays_small(reports):
    assert (reports / "one" / "index.html").stat().st_size < 3_000_000


def test_every_budget_adds_up(reports):
    results = json.loads((reports / "one" / "results.json").read_text(encoding="utf-8"))
    assert len(results["salts"]) == 10
    for salt in results["salts"]:
        if salt["u"] is not None:
            parts = [line["contribution"] ** 2 for line in results["budget"] if line["salt"] == salt["salt"]]
            assert sum(parts) ** 0.5 == pytest.approx(salt["u"], rel=0.01)


def test_again_over_the_former_report(reports):
    from reconcile.commands import main

    before = (reports / "one" / "results.json").read_bytes()
    assert main(["demo", "--out", str(reports / "one"), "--files", "results"]) == 0
    assert (reports / "one" / "results.json").read_bytes() == before
