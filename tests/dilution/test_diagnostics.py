"""Diagnostics against refits and plain straight lines."""

from dataclasses import replace

import numpy as np
import pandas as pd
import pytest

from reconcile.campaign import read_campaign, write_campaign
from reconcile.pipeline import analyse
from reconcile.simulation import Truth, enthalpy_rows


def season(folder, rows):
    write_campaign(folder, None, {"runs": rows})
    return analyse(read_campaign(folder))


@pytest.fixture(scope="module")
def two_salts(tmp_path_factory):
    truth = Truth(("NaCl", "CaCl2"), np.array([3.88, -81.3]), np.array([[-1.1, -1.0, 0.09, 0], [0.5, -3.0, 0.06, 0]]))
    rows = enthalpy_rows(truth, 7, (0.02, 0.8), 0.03, np.random.default_rng(5), True, ("A", "B"))
    return season(tmp_path_factory.mktemp("two"), rows)


def test_influence_is_what_leaving_the_run_out_does(two_salts):
    found = two_salts.dilution.extrapolation
    problem, fit = found.problem, found.fit
    for row in (0, 4, 9, 13):
        private = problem.observed.private.copy()
        private[row] = 1e5  # as good as left out, with everything else frozen
        without = replace(problem, observed=replace(problem.observed, private=private))
        refit = without.fit(found.sizes, found_precision(found))
        crystal = problem.salt[row]
        expected = fit.value[crystal] - refit.value[crystal]
        assert two_salts.diagnostics.influence[row] == pytest.approx(expected, rel=1e-4, abs=1e-7)


def found_precision(found):
    """The prior precision of the final fit, read back from its prior rows."""
    problem = found.problem
    rows = found.fit.inner[len(problem.salt) :]
    rows = rows if isinstance(rows, np.ndarray) else rows.toarray()
    column = problem.parameter_column
    out = np.tile(np.eye(4), (len(column), 1, 1))
    for b, places in enumerate(column):
        here = places >= 0
        root = rows[:, places[here]]
        out[b][np.ix_(here, here)] = root.T @ root
    return out


def test_straight_lines_are_the_weighted_ones(two_salts):
    runs = two_salts.runs[two_salts.runs["salt"] == "CaCl2"]
    m, y = runs["molality / (mol/kg)"].to_numpy(), runs["enthalpy / (kJ/mol)"].to_numpy()
    row = two_salts.salts.set_index("salt").loc["CaCl2"]
    for name, x in (("line_m", m), ("line_root", np.sqrt(m))):
        assert row[name] == pytest.approx(np.polyfit(x, y, 1)[1], rel=1e-6)  # u is the same for all runs


def test_a_free_slope_finds_a_planted_one(tmp_path):
    parameters = np.array([[-1.1, -1.0, 0.09, 0]])
    truth = Truth(("NaCl",), np.array([3.88]), parameters, slope_factor=1.10)
    found = season(tmp_path, enthalpy_rows(truth, 400, (0.0005, 0.05), 0.02, np.random.default_rng(2)))
    row = found.salts.iloc[0]
    assert row["free_slope"] == pytest.approx(1.10 * row["slope"], abs=3 * row["u_free_slope"])
    assert abs(row["free_slope"] - row["slope"]) > 3 * row["u_free_slope"]


def test_what_to_mind_is_told(tmp_path):
    truth = Truth(("NaCl", "KCl"), np.array([3.88, 17.22]), np.array([[-1.1, -1.0, 0.09, 0], [-0.9, -1.6, 0.05, 0]]))
    rows = enthalpy_rows(truth, 3, (0.5, 0.6), 0.03, np.random.default_rng(3))
    rows = pd.concat([rows[rows["salt"] == "NaCl"], rows[rows["salt"] == "KCl"].head(1)], ignore_index=True)
    rows.loc[0, "molality / (mol/kg)"] = 6.9  # NaCl is saturated at 6.16 mol/kg (CRC Handbook, from memory)
    told = season(tmp_path, rows).salts.set_index("salt")["remarks"]
    assert any("1 of 3 runs above saturation" in text for text in told["NaCl"])
    assert any("no run below an ionic strength of 0.1" in text for text in told["NaCl"])
    assert "a single run" in told["KCl"]
