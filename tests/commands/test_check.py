"""reconcile check tells everything and writes nothing."""


def everything_in(folder):
    return {path: path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def test_what_was_read_and_what_will_be_done(run, season, tmp_path):
    before = everything_in(tmp_path)
    status, out, err = run("check", season)
    assert status == 0
    assert err == ""
    assert everything_in(tmp_path) == before
    for told in (
        "Invented spring",
        "runs.csv: 8 rows",
        "molality / (mol/kg): every row, 0.0508 to 0.5021",
        "enthalpy / (kJ/mol): every row, 4.07 to 17.55, u 0.05",
        "8 runs: taken as molar enthalpies",
        "KCl: 4 runs to infinite dilution",
        "298.15 K is taken",
    ):
        assert told in out


def test_an_excluded_run_and_a_salts_own_choice(run, season):
    with (season / "campaign.toml").open("a", encoding="utf-8") as settings:
        settings.write(
            '[analysis.salts.NaCl]\npublished_dilution = false\nmax_molality = "1 mol/kg"\n'
            '[[exclude]]\nrun = "R003"\nreason = "bulb broke late"\n'
        )
    status, out, _ = run("check", season)
    assert status == 0
    assert "1 run: excluded by campaign.toml" in out
    assert "NaCl: 4 runs to infinite dilution, up to 1 mol/kg, prior: the population" in out


def test_problems_exit_2(run, season):
    (season / "runs.csv").write_text("salt,molality / (mol/m)\nKCl,0.1\n", encoding="utf-8")
    status, out, err = run("check", season)
    assert status == 2
    assert out == ""
    assert "mol/m" in err
