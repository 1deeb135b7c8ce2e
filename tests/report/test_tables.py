"""tables/*.csv read back to the last bit, are inert in a spreadsheet, and are what datapackage.json says."""

import csv
import hashlib
import json
import math

import numpy as np
import pandas as pd
import pytest

from reconcile.report import write_report
from reconcile.report.columns import TABLES
from reconcile.report.tables import inert, to_csv

RUNS = [
    "run",
    "salt",
    "sample",
    "calorimeter",
    "batch",
    "included",
    "reason",
    "molality / (mol/kg)",
    "enthalpy / (kJ/mol)",
    "u(enthalpy) / (kJ/mol)",
    "dilution_correction / (kJ/mol)",
    "standard_enthalpy / (kJ/mol)",
    "u(standard_enthalpy) / (kJ/mol)",
    "standardised_residual",
    "influence / (kJ/mol)",
    "kind",
    "initial_molality / (mol/kg)",
]


@pytest.fixture
def folder(invented, tmp_path):
    write_report(invented, tmp_path / "report", ["tables"])
    return tmp_path / "report" / "tables"


def cells(path):
    with open(path, newline="", encoding="utf-8") as file:
        return list(csv.reader(file))


def test_runs_have_one_row_each_under_the_promised_headings(folder, invented):
    heads, *lines = cells(folder / "runs.csv")
    assert heads == RUNS
    assert len(lines) == len(invented.runs)
    assert [line[5] for line in lines] == ["true"] * 4 + ["false"] + ["true"] * 2 + ["false"]


def test_where_a_run_started_stands_beside_where_it_ended(with_dilutions, tmp_path):
    write_report(with_dilutions, tmp_path, ["tables"])
    heads, *lines = cells(tmp_path / "tables" / "runs.csv")
    found = [(line[heads.index("kind")], float(line[heads.index("initial_molality / (mol/kg)")])) for line in lines]
    assert found[7:] == [
        ("dissolution in water", 0.0),
        ("successive addition", 0.25),
        ("heat of dilution", 1.0),
        ("heat of dilution", 0.5),
    ]


def test_no_cell_starts_a_formula(folder):
    for path in folder.glob("*.csv"):
        for line in cells(path)[1:]:
            for cell in line:
                if cell.startswith(("=", "+", "-", "@", "\t", "\r")):
                    assert math.isfinite(float(cell)), (path.name, cell)  # a negative number is no formula


def test_what_a_laboratory_types_gets_an_apostrophe_and_nothing_else(folder):
    found = cells(folder / "runs.csv")
    assert found[3][2] == '\'=HYPERLINK("http://x")'
    assert found[3][4] == "'@SUM(1)"
    assert found[6][0] == "'-6"
    assert found[5][6] == '\'+bulb "broke" & late'


@pytest.mark.parametrize("text", ["=1", "+1", "-x", "@a", "\tx", "\rx"])
def test_inert(text):
    assert inert(text) == "'" + text


def test_numbers_read_back_the_same():
    numbers = np.array([0.1 + 0.2, 1 / 3, 1e-300, -2.5e17, 17.0, np.nan, np.inf])
    table = pd.DataFrame({"salt": "KCl", "source": "x", "contribution": numbers})
    data = to_csv(table, TABLES["budget"])
    read = [line.split(",")[2] for line in data.decode().splitlines()[1:]]
    assert [float(cell) for cell in read[:5]] == numbers[:5].tolist()
    assert read[5:] == ["", ""]


def test_the_package_describes_every_file(folder):
    package = json.loads((folder / "datapackage.json").read_text(encoding="utf-8"))
    described = {resource["path"]: resource for resource in package["resources"]}
    assert set(described) == {path.name for path in folder.glob("*.csv")}
    types = {"number": float, "integer": int, "string": str, "boolean": {"true": True, "false": False}.__getitem__}
    for name, resource in described.items():
        data = (folder / name).read_bytes()
        assert resource["bytes"] == len(data)
        assert resource["hash"] == f"sha256:{hashlib.sha256(data).hexdigest()}"
        heads, *lines = cells(folder / name)
        fields = resource["schema"]["fields"]
        assert [field["name"] for field in fields] == heads
        assert all(field["description"] for field in fields)
        for line in lines:
            for field, cell in zip(fields, line, strict=True):
                if cell:
                    types[field["type"]](cell)
        for key in resource["schema"].get("primaryKey", ()):
            column = [line[heads.index(key)] for line in lines]
            assert len(set(column)) == len(column)
            assert all(column)


def test_a_unit_in_a_heading_is_the_unit_of_the_field():
    for columns in TABLES.values():
        for column in columns:
            if column.unit:
                assert column.heading.endswith((f"/ {column.unit}", f"/ ({column.unit})"))
