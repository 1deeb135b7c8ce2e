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
        "8 runs: taken as molar enthalpies of solution",
        "KCl: 4 dissolutions in water to infinite dilution",
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
    assert "NaCl: 4 dissolutions in water to infinite dilution, up to 1 mol/kg, prior: the population" in out
    assert "KCl: 3 dissolutions in water to infinite dilution, prior: published" in out


def test_problems_exit_2(run, season):
    (season / "runs.csv").write_text("salt,molality / (mol/m)\nKCl,0.1\n", encoding="utf-8")
    status, out, err = run("check", season)
    assert status == 2
    assert out == ""
    assert "mol/m" in err


def test_additions_and_dilutions_are_told_apart(run, season):
    (season / "runs.csv").write_text(
        "salt,initial_molality / (mol/kg),molality / (mol/kg),final_molality / (mol/kg),enthalpy / (kJ/mol),role\n"
        "KCl,,0.1,,17.55,sample\nKCl,0.1,0.2,,17.6,sample\nKCl,0.2,0.3,,17.5,\nKCl,1,,0.2,0.44,dilution\n"
        "NaBr,1,,0.5,0.37,dilution\nNa2CO3,,0.1,,-25,sample\n",
        encoding="utf-8",
    )
    status, out, err = run("check", season)
    assert (status, err) == (0, "")
    plan = out[out.index("What will be done") : out.index("Told or assumed")].splitlines()
    assert "  4 runs: taken as molar enthalpies of solution at their molality" in plan
    assert "  2 runs: taken as enthalpies of dilution, which have no standard enthalpy of solution" in plan
    kcl, nabr, na2co3 = (next(line for line in plan if line.startswith(f"  {s}:")) for s in ("KCl", "NaBr", "Na2CO3"))
    assert "1 dissolution in water, 2 successive additions and 1 heat of dilution to infinite dilution" in kcl
    assert "1 heat of dilution; no limit at infinite dilution: no included run dissolves it" in nabr
    assert "no limit at infinite dilution: CO3-2 reacts with water" in na2co3
    assert "prior" not in nabr + na2co3


def test_a_diluted_salt_serves_its_hydrate(run, season):
    (season / "runs.csv").write_text(
        "salt,initial_molality / (mol/kg),molality / (mol/kg),final_molality / (mol/kg),enthalpy / (kJ/mol),role\n"
        "CaCl2·6H2O,,0.1,,16,\nCaCl2,1,,0.5,0.37,dilution\n",
        encoding="utf-8",
    )
    assert "they serve the other crystals of that solution" in run("check", season)[1]


def test_a_campaign_without_any_limit_is_a_problem_here_too(run, season):
    (season / "runs.csv").write_text("salt,molality / (mol/kg),enthalpy / (kJ/mol)\nNa2CO3,0.1,-25\n", encoding="utf-8")
    status, out, err = run("check", season)
    assert status == 2
    assert "Na2CO3: 1 dissolution in water; no limit" in out
    assert "report has nothing to fit" in err
    assert run("report", season)[0] == 2
