"""Good input: folders and tables read right, compared number by number."""

import hashlib
from pathlib import Path

import numpy as np
import pytest

from reconcile.campaign import Campaign, CampaignError, read_campaign
from reconcile.chemistry.water import density

LEAST = "salt,molality / (mol/kg),enthalpy / (kJ/mol)\nKCl,0.1,17.55\nNaCl,0.2,4.06\n"


def campaign_of(folder: Path, **files: str | bytes) -> Campaign:
    for name, content in files.items():
        path = folder / (name.replace("_", ".") if name.startswith("campaign") else f"{name}.csv")
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
    return read_campaign(folder)


def test_the_least_that_works(tmp_path: Path) -> None:
    campaign = campaign_of(tmp_path, runs=LEAST)
    assert [salt.formula for salt in campaign.salts] == ["KCl", "NaCl"]
    assert campaign.runs.row.tolist() == [2, 3]
    assert campaign.runs.quantities["enthalpy"].value.tolist() == [17.55, 4.06]
    assert np.isnan(campaign.runs.quantities["enthalpy"].u).all()
    assert np.isnan(campaign.runs.quantities["heat"].value).all()
    assert campaign.runs.quantities["temperature"].value.tolist() == [298.15, 298.15]
    assert campaign.runs.keys["run"].labels == ("2", "3")  # the rows, as a spreadsheet counts them
    assert campaign.title == tmp_path.name
    assert campaign.sample.tolist() == campaign.calorimeter.tolist() == campaign.batch.code.tolist() == [-1, -1]
    assert campaign.included.all()
    assert campaign.formation_set == "NBS-1982"
    assert np.isinf(campaign.max_molality).all()
    assert campaign.published_dilution.all()
    assert campaign.between_batches.all()


def test_a_folder_with_everything(tmp_path: Path) -> None:
    campaign = campaign_of(
        tmp_path,
        runs=(
            "run,sample,salt,calorimeter,date,batch,mass / mg,water / g,heat / kJ,u(heat) / J,temperature / °C,note\n"
            "R1,CaCl2-1,,B,2026-05-31T09:15,,500,100,-0.36,1.5,25,\n"
            "R2,,CaCl2 · 6H2O,A,2026-05-31,extra,600,100,0.04,,24.5,first\n"
            "R3,K-1,KCl,,,,700,100,0.165,,,\n"
        ),
        samples=(
            "sample,salt,mass_fraction / %,u(mass_fraction) / %,water,supplier\n"
            "K-1,KCl,99.9,0.02,,X\nCaCl2-1,CaCl2,,,0.03,Y\n"
        ),
        calorimeters="calorimeter,parasitic_heat / mJ,U(parasitic_heat) / mJ,instrument\nA,250,20,x\nB,,,y\n",
        campaign_toml="""
            [campaign]
            title = "Season"
            laboratory = "Lab"
            reference_temperature = "25.5 °C"
            pressure = "1 bar"
            date = 2026-06-01
            [uncertainty.runs]
            "tol(mass)" = "0.1 mg"
            "u(heat)" = "0.5 %"
            [uncertainty.samples]
            "u(water)" = 0.001
            [analysis]
            published_dilution = false
            max_molality = "3000 mmol/kg"
            [analysis.salts."CaCl2.6H2O"]
            published_dilution = true
            between_batches = false
            [[exclude]]
            run = "R2"
            reason = "bulb broke late"
            by = "JK"
            date = 2026-05-31
            [[note]]
            run = "R3"
            text = "slow"
        """,
    )
    assert (campaign.title, campaign.laboratory, campaign.date) == ("Season", "Lab", "2026-06-01")
    assert campaign.reference_temperature == pytest.approx(298.65)
    assert campaign.pressure == pytest.approx(100.0)
    assert [salt.formula for salt in campaign.salts] == ["CaCl2", "CaCl2·6H2O", "KCl"]
    assert campaign.salt.tolist() == [0, 1, 2]
    assert campaign.sample.tolist() == [1, -1, 0]
    assert campaign.calorimeter.tolist() == [1, 0, -1]
    runs = campaign.runs.quantities
    assert runs["mass"].value == pytest.approx([0.5, 0.6, 0.7])
    assert runs["mass"].u == pytest.approx([1e-4 / 3**0.5] * 3)
    assert runs["heat"].value == pytest.approx([-360, 40, 165])
    assert runs["heat"].u == pytest.approx([1.5, 0.2, 0.825])  # a row's own wins over 0.5 %
    assert runs["temperature"].value == pytest.approx([298.15, 297.65, 298.65])
    samples = campaign.samples.quantities
    assert samples["mass_fraction"].value == pytest.approx([0.999, np.nan], nan_ok=True)
    assert samples["mass_fraction"].u == pytest.approx([2e-4, np.nan], nan_ok=True)
    assert samples["water"].u == pytest.approx([np.nan, 0.001], nan_ok=True)
    assert campaign.calorimeters.quantities["parasitic_heat"].u == pytest.approx([0.01, np.nan], nan_ok=True)
    assert [campaign.batch.labels[code] if code >= 0 else None for code in campaign.batch.code] == [
        "2026-05-31", "extra", None,
    ]  # fmt: skip
    assert campaign.included.tolist() == [True, False, True]
    assert campaign.reason == ("", "bulb broke late (JK, 2026-05-31)", "")
    assert campaign.notes == (("R3", "slow"),)
    assert campaign.published_dilution.tolist() == [False, True, False]
    assert campaign.between_batches.tolist() == [True, False, True]
    assert campaign.max_molality == pytest.approx([3, 3, 3])
    assert sorted(campaign.checksums) == ["calorimeters.csv", "campaign.toml", "runs.csv", "samples.csv"]
    data = (tmp_path / "runs.csv").read_bytes()
    assert campaign.checksums["runs.csv"] == hashlib.sha256(data).hexdigest()


def test_a_table_alone_is_a_campaign(tmp_path: Path) -> None:
    (tmp_path / "spring.csv").write_text(LEAST)
    (tmp_path / "campaign.toml").write_text("this is no TOML, and not read")
    campaign = read_campaign(tmp_path / "spring.csv")
    assert campaign.title == "spring"
    assert list(campaign.checksums) == ["spring.csv"]
    assert read_campaign([tmp_path / "spring.csv"]).title == "spring"


def test_water_by_volume_takes_the_density_at_the_temperature_of_the_row(tmp_path: Path) -> None:
    table = (
        "salt,mass / g,water / mL,tol(water) / mL,heat / J,temperature / °C\n"
        "KCl,1,100,0.3,235,25\nKCl,1,100,,235,60\nKCl,1,100,,235,\n"
    )
    campaign = campaign_of(
        tmp_path,
        runs=table,
        campaign_toml='[campaign]\nreference_temperature = "30 °C"\n[uncertainty.runs]\n"u(water)" = "0.2 mL"',
    )
    per_millilitre = density(np.array([298.15, 333.15, 303.15])) / 1000
    assert per_millilitre[1] < 0.984 < 0.997 < per_millilitre[0]  # water thins out; CRC tables, from memory
    water = campaign.runs.quantities["water"]
    assert water.value == pytest.approx(100 * per_millilitre, rel=1e-12)
    assert water.u == pytest.approx(np.array([0.3 / 3**0.5, 0.2, 0.2]) * per_millilitre, rel=1e-12)


@pytest.mark.parametrize(
    ("heading", "typed", "expected"),
    [
        ("u(enthalpy) / (J/mol)", "20", 0.02),
        ("U(enthalpy) / (kJ/mol)", "0.02", 0.01),
        ("tol(enthalpy) / (kJ/mol)", "0.03", 0.03 / 3**0.5),
        ("u(enthalpy) / %", "1", 0.1755),
        ("u(enthalpy) / (cal/mol)", "10", 0.04184),
    ],
)
def test_uncertainties(tmp_path: Path, heading: str, typed: str, expected: float) -> None:
    table = f"salt,molality / (mol/kg),enthalpy / (kJ/mol),{heading}\nKCl,0.1,17.55,{typed}\nKCl,0.1,17.55,\n"
    u = campaign_of(tmp_path, runs=table).runs.quantities["enthalpy"].u
    assert u == pytest.approx([expected, np.nan], nan_ok=True)


def test_a_coverage_factor_of_the_row(tmp_path: Path) -> None:
    table = (
        "salt,molality / (mol/kg),enthalpy / (kJ/mol),U(enthalpy) / (kJ/mol),k(enthalpy)\n"
        "KCl,0.1,17.55,0.3,3\nKCl,0.1,17.55,0.3,\n"
    )
    assert campaign_of(tmp_path, runs=table).runs.quantities["enthalpy"].u == pytest.approx([0.1, 0.15])


def test_an_offset_does_not_enter_an_uncertainty(tmp_path: Path) -> None:
    table = "salt,molality / (mol/kg),enthalpy / (kJ/mol),temperature / °C,u(temperature) / °C\nKCl,0.1,17.55,20,0.01\n"
    temperature = campaign_of(tmp_path, runs=table).runs.quantities["temperature"]
    assert temperature.value == pytest.approx([293.15])
    assert temperature.u == pytest.approx([0.01])


def test_names_stay_as_typed(tmp_path: Path) -> None:
    table = "run,salt,molality / (mol/kg),enthalpy / (kJ/mol),operator\n001,KCl,0.1,17.55,NA\n2,KCl,0.1,17.55, JK \n"
    campaign = campaign_of(tmp_path, runs=table)
    assert campaign.runs.keys["run"].labels == ("001", "2")
    assert campaign.runs.keys["operator"].labels == ("NA", "JK")


@pytest.mark.parametrize(
    ("names", "expected"),
    [(["17.0", "18.0", ""], ["17", "18", "4"]), (["3.0", "3.1", "3.2"], ["3.0", "3.1", "3.2"])],
)
def test_whole_numbers_keep_no_point(tmp_path: Path, names: list[str], expected: list[str]) -> None:
    rows = "".join(f"{name},KCl,0.1,17.55\n" for name in names)
    campaign = campaign_of(tmp_path, runs="run,salt,molality / (mol/kg),enthalpy / (kJ/mol)\n" + rows)
    key = campaign.runs.keys["run"]
    assert [key.labels[code] for code in key.code] == expected


def test_spellings_of_one_salt_are_one_written_as_first_typed(tmp_path: Path) -> None:
    spellings = ("CaCl2.6H2O", "CaCl2 · 6H2O", "CaCl2*6H2O", "KCl", "CaCl2·6H2O")
    rows = "".join(f"{spelling},0.1,17.55\n" for spelling in spellings)
    campaign = campaign_of(tmp_path, runs="salt,molality / (mol/kg),enthalpy / (kJ/mol)\n" + rows)
    assert [salt.formula for salt in campaign.salts] == ["CaCl2·6H2O", "KCl"]
    assert campaign.salt.tolist() == [0, 0, 0, 1, 0]


@pytest.mark.parametrize(
    "data",
    [
        b"\xef\xbb\xbf" + LEAST.encode(),
        LEAST.replace("\n", "\r\n").encode(),
        LEAST.replace("\n", "\r").encode(),
        LEAST.rstrip("\n").encode(),
        LEAST.replace("KCl", '"KCl"').encode(),
        LEAST.replace("0.1", " 0.1 ").encode(),
        LEAST.replace(" / ", "/").encode(),
        LEAST.replace("KCl,", " KCl ,").encode(),
    ],
    ids=["BOM", "Windows", "old Mac", "no last line end", "quotation marks", "blanks", "tight headings", "blank text"],
)
def test_ways_to_write_the_same_table(tmp_path: Path, data: bytes) -> None:
    campaign = campaign_of(tmp_path, runs=data)
    assert [salt.formula for salt in campaign.salts] == ["KCl", "NaCl"]
    assert campaign.runs.quantities["molality"].value.tolist() == [0.1, 0.2]
    assert campaign.runs.quantities["enthalpy"].value.tolist() == [17.55, 4.06]


def test_blank_rows_are_left_out_and_counted(tmp_path: Path) -> None:
    lines = LEAST.splitlines()
    campaign = campaign_of(tmp_path, runs="\n".join([*lines[:2], ",,", "", " , ,", lines[2], "", ""]) + "\n")
    assert campaign.runs.row.tolist() == [2, 6]
    assert any(remark.text.startswith("5 blank rows are left out") for remark in campaign.remarks)


def test_an_empty_heading_over_an_empty_column_is_left_out(tmp_path: Path) -> None:
    table = "".join(f"{line},\n" for line in LEAST.splitlines())
    assert len(campaign_of(tmp_path, runs=table).runs) == 2


def test_a_text_over_two_lines_counts_as_one_row(tmp_path: Path) -> None:
    table = 'salt,molality / (mol/kg),enthalpy / (kJ/mol),note\nKCl,0.1,17.55,"two\nlines, 5"""\nKCl,0.1,x,\n'
    with pytest.raises(CampaignError) as told:
        campaign_of(tmp_path, runs=table)
    assert [problem.row for problem in told.value.problems] == [3]


def test_named_lots_and_calorimeters_without_tables_of_their_own(tmp_path: Path) -> None:
    table = (
        "salt,sample,calorimeter,molality / (mol/kg),enthalpy / (kJ/mol)\n"
        "KCl,K-1,B,0.1,17.55\nKCl,K-2,A,0.1,17.55\nNaCl,,B,0.1,4.0\n"
    )
    campaign = campaign_of(tmp_path, runs=table)
    assert campaign.sample.tolist() == [0, 1, -1]
    assert campaign.samples.keys["sample"].labels == ("K-1", "K-2")
    assert campaign.calorimeter.tolist() == [0, 1, 0]
    assert len(campaign.calorimeters) == 2
    assert len(campaign.samples) == 2


def test_what_is_kept_but_not_used_is_told(tmp_path: Path) -> None:
    campaign = campaign_of(
        tmp_path,
        runs=LEAST,
        samples="sample,salt,density / (g/cm^3),solid_phase\nN,NH4NO3,1.72,IV\n",
        calorimeters="calorimeter,heat_capacity / (J/K),basis\nA,410,vessel\n",
    )
    told = " ".join(remark.text for remark in campaign.remarks if "not used yet" in remark.text)
    assert all(word in told for word in ("density", "solid_phase", "heat_capacity", "basis"))
    assert campaign.samples.quantities["density"].value == pytest.approx([1.72])
    assert any("298.15 K is taken" in remark.text for remark in campaign.remarks)


def test_a_molality_beside_masses_is_a_check(tmp_path: Path) -> None:
    # 1.0000 g KCl (74.551 g/mol) in 100 g: 0.13414 mol/kg. CaCl2·6H2O (219.07 g/mol), 10 g in 100 g, 4.934 g of its
    # own water: 0.045647 mol in 0.104934 kg = 0.43501; in a lot with 10 % more water 0.041083/0.105441 = 0.38963.
    table = (
        "run,salt,sample,mass / g,water / g,molality / (mol/kg),u(molality) / (mol/kg),heat / J\n"
        "fits,KCl,,1,100,0.1341,,235\n"
        "differs,KCl,,1,100,0.1351,,235\n"
        "within u,KCl,,1,100,0.1351,0.002,235\n"
        "hydrate,CaCl2·6H2O,,10,100,0.4350,,235\n"
        "solvent only,CaCl2·6H2O,,10,100,0.4565,,235\n"
        "wet,,W,10,100,0.3896,,235\n"
    )
    campaign = campaign_of(tmp_path, runs=table, samples="sample,salt,water\nW,CaCl2·6H2O,0.1\n")
    told = [remark for remark in campaign.remarks if "the masses are used" in remark.text]
    assert [remark.affects for remark in told] == ["run differs", "run solvent only"]
    assert "0.1341" in told[0].text
    assert "row 3" in told[0].text


def test_the_order_of_files_in_a_folder_does_not_enter(tmp_path: Path) -> None:
    (tmp_path / "notes.txt").write_text("left alone")
    (tmp_path / "sample.csv").write_text("left alone, but told")
    campaign = campaign_of(tmp_path, runs=LEAST)
    assert any("sample.csv is not read" in remark.text for remark in campaign.remarks)


def test_columns_may_be_changed_by_nobody(tmp_path: Path) -> None:
    campaign = campaign_of(tmp_path, runs=LEAST)
    with pytest.raises(ValueError, match="read-only"):
        campaign.runs.quantities["enthalpy"].value[0] = 0


def test_empty_cells_before_and_between_names_shift_nothing(tmp_path: Path) -> None:
    table = (
        "salt,molality / (mol/kg),enthalpy / (kJ/mol),batch,date,operator\n"
        "KCl,0.1,17.55,,,\nNaCl,0.1,4.0,b,2026-05-31,Z\nKCl,0.1,17.55,,2026-05-30,\nKCl,0.1,17.55,a,,A\nKCl,0.1,17.5,b,,Z\n"
    )
    campaign = campaign_of(tmp_path, runs=table)
    batch, operator = campaign.batch, campaign.runs.keys["operator"]
    assert [batch.labels[code] if code >= 0 else "" for code in batch.code] == ["", "b", "2026-05-30", "a", "b"]
    assert [operator.labels[code] if code >= 0 else "" for code in operator.code] == ["", "Z", "", "A", "Z"]
    assert operator.labels == ("Z", "A")
