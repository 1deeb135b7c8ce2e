"""results.json: valid, complete, null where there is nothing, and consistent with itself."""

import json
import math

import numpy as np
import pandas as pd
import pytest

from reconcile.report import write_report
from reconcile.report.results_json import plain, records

# The keys that whoever reads the file relies on, by list; written down here from the description of the format.
PROMISED = {
    "salts": [
        "salt",
        "molar_mass",
        "temperature",
        "standard_enthalpy",
        "u",
        "degrees_of_freedom",
        "coverage_factor",
        "interval",
        "u_random",
        "u_shared",
        "runs",
        "molality_min",
        "molality_max",
        "dilution_model",
        "prior_share",
        "prior_conflict_p",
        "parameters",
        "slope",
        "free_slope",
        "heat_capacity_change",
        "between_batch_sd",
        "verdict",
        "smoothed",
        "recommended",
    ],
    "bias": [
        "hypothesis",
        "subject",
        "size",
        "u",
        "unit",
        "interval",
        "degrees_of_freedom",
        "statistic",
        "p_value",
        "p_adjusted",
        "delta_chi_square",
        "smallest_detectable",
        "rests_on",
        "confounded_with",
    ],
    "comparison": [
        "salt",
        "molality",
        "measured",
        "u_measured",
        "published",
        "u_published",
        "difference",
        "zeta",
        "e_n",
        "verdict",
        "source",
        "status",
        "circular",
    ],
    "budget": ["salt", "source", "contribution"],
    "assumptions": ["text", "affects", "u_contribution"],
}
IN_ADJUSTMENT = {
    "reconciled": [
        "salt",
        "measured",
        "u_measured",
        "reconciled",
        "u",
        "change",
        "standardised_change",
        "redundancy",
        "smallest_detectable_error",
    ],
    "references": [
        "quantity",
        "species",
        "published",
        "u_published",
        "reconciled",
        "u",
        "standardised_change",
        "source",
    ],
    "cycles": ["salt", "kind", "misclosure", "u", "identity", "circular", "smallest_detectable_error", "verdict"],
}


@pytest.fixture
def written(invented, tmp_path):
    (path,) = write_report(invented, tmp_path / "report", ["results"])
    return json.loads(path.read_text(encoding="utf-8"), parse_constant=lambda name: pytest.fail(f"{name} is not JSON"))


def test_every_promised_key_is_there_and_in_its_order(written):
    top = [
        "schema_version",
        "software_version",
        "input_checksums",
        "campaign",
        "salts",
        "covariance",
        "adjustment",
        "bias",
    ]
    assert list(written)[: len(top)] == top
    for name, keys in PROMISED.items():
        for record in written[name]:
            assert [key for key in record if key in keys] == keys, name
    for name, keys in IN_ADJUSTMENT.items():
        for record in written["adjustment"][name]:
            assert [key for key in record if key in keys] == keys, name


def test_what_is_missing_or_infinite_is_null(written):
    plain_salt, _, no_limit = written["salts"]
    assert plain_salt["degrees_of_freedom"] is None  # infinite
    assert no_limit["standard_enthalpy"] is None
    assert no_limit["interval"] == [None, None]
    assert no_limit["reason"]
    assert written["assumptions"][1]["u_contribution"] is None


def test_nested_parts(written):
    salt = written["salts"][0]
    assert salt["recommended"] == {"value": 17.2212, "u": 0.025, "from": "measured"}
    assert salt["interval"] == [17.172, 17.27]
    assert salt["parameters"]["beta0"] == [5.8e-4, 2.1e-5]
    assert salt["smoothed"][1] == {"molality": 1.0, "enthalpy": 17.39, "u": 0.03}
    assert written["bias"][0]["interval"] == [-0.0153, -0.0093]
    assert written["campaign"]["runs"] == 8
    assert written["campaign"]["runs_included"] == 6


def test_the_covariance_names_its_salts_and_leaves_zeros_out(written):
    covariance = written["covariance"]
    assert covariance["shared"][1] == {"source": "width of the population", "salts": ["CaCl2·6H2O"], "loading": [0.24]}
    total = dict(zip(covariance["salts"], covariance["private_variance"], strict=True))
    for source in covariance["shared"]:
        for salt, loading in zip(source["salts"], source["loading"], strict=True):
            total[salt] += loading**2
    u = {salt["salt"]: salt["u"] for salt in written["salts"]}
    assert {salt: math.sqrt(variance) for salt, variance in total.items()} == pytest.approx(
        {s: u[s] for s in total}, rel=0.01
    )


def test_what_a_laboratory_types_stays_as_it_was_typed(written):
    assert written["bias"][1]["subject"] == '<script>alert("x")</script>'
    assert written["campaign"]["title"] == "Invented season & <b>bold</b>"


def test_columns_that_nobody_foresaw_are_kept():
    table = pd.DataFrame({"contribution": [0.5], "salt": ["KCl"], "source": ["x"], "degrees_of_freedom": [np.inf]})
    from reconcile.report.columns import TABLES

    (record,) = records(table, TABLES["budget"])
    assert list(record.items()) == [
        ("salt", "KCl"),
        ("source", "x"),
        ("contribution", 0.5),
        ("degrees_of_freedom", None),
    ]


def test_a_missing_column_is_not_passed_over():
    from reconcile.report.columns import TABLES

    with pytest.raises(KeyError, match="contribution"):
        records(pd.DataFrame({"salt": ["KCl"], "source": ["x"]}), TABLES["budget"])


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        (np.float64("nan"), None),
        (-math.inf, None),
        (pd.NA, None),
        (None, None),
        (np.int64(3), 3),
        (np.bool_(True), True),
        ((1.0, math.nan), [1.0, None]),
        ({"a": np.array([1.0, np.inf])}, {"a": [1.0, None]}),
        (frozenset({"b", "a"}), ["a", "b"]),
    ],
)
def test_plain_values(value, expected):
    assert plain(value) == expected


def test_plain_refuses_what_has_no_place():
    with pytest.raises(TypeError, match="object has no place"):
        plain(object())
