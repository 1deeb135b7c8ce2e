"""An invented campaign's results, small enough to check by eye; hostile where a laboratory can type."""

from __future__ import annotations

from types import SimpleNamespace
from typing import Any

import numpy as np
import pandas as pd
import pytest

INF, NAN = float("inf"), float("nan")
HOSTILE = '<script>alert("x")</script>'


def _salts() -> pd.DataFrame:
    common = {
        "temperature": 298.15,
        "slope": 1.972,
        "molality_min": 0.0125,
        "between_batch_sd": NAN,
        "u_free_slope": NAN,
        "line_m": NAN,
        "line_root": NAN,
        "u_heat_capacity_change": NAN,
        "remarks": (),
        "reason": "",
        "parameters": {"beta0": (5.8e-4, 2.1e-5), "beta1": (1.07e-3, 9e-5), "c_phi": (-5.1e-5, 8e-6)},
        "smoothed": [{"molality": 0.1, "enthalpy": 17.61, "u": 0.02}, {"molality": 1.0, "enthalpy": 17.39, "u": 0.03}],
    }
    return pd.DataFrame(
        [
            {
                **common,
                "salt": "KCl",
                "molar_mass": 74.551,
                "standard_enthalpy": 17.2212,
                "u": 0.0250,
                "degrees_of_freedom": INF,
                "coverage_factor": 1.96,
                "interval_low": 17.172,
                "interval_high": 17.270,
                "u_random": 0.015,
                "u_shared": 0.02,
                "runs": 4,
                "molality_max": 1.02,
                "dilution_model": "published parameters",
                "prior_share": 0.62,
                "prior_conflict_p": 0.44,
                "free_slope": 2.05,
                "u_free_slope": 0.11,
                "line_m": 17.41,
                "line_root": 17.33,
                "heat_capacity_change": -160.0,
                "u_heat_capacity_change": 4.0,
                "verdict": "agrees",
                "standard_enthalpy_without_suspects": 17.2012,
                "u_without_suspects": 0.0201,
                "recommended_value": 17.2212,
                "recommended_u": 0.025,
                "recommended_from": "measured",
            },
            {
                **common,
                "salt": "CaCl2·6H2O",
                "molar_mass": 219.07,
                "standard_enthalpy": 14.91,
                "u": 0.30,
                "degrees_of_freedom": 3.4,
                "coverage_factor": 2.98,
                "interval_low": 14.02,
                "interval_high": 15.80,
                "u_random": 0.18,
                "u_shared": 0.24,
                "runs": 2,
                "molality_max": 0.51,
                "dilution_model": "population",
                "prior_share": 0.97,
                "prior_conflict_p": NAN,
                "free_slope": NAN,
                "heat_capacity_change": NAN,
                "verdict": "disagrees",
                "standard_enthalpy_without_suspects": 14.6,
                "u_without_suspects": 0.3,
                "recommended_value": 14.6,
                "recommended_u": 0.2,
                "recommended_from": "reconciled",
            },
            {
                **common,
                "salt": "Na2CO3",
                "molar_mass": 105.988,
                "standard_enthalpy": NAN,
                "u": NAN,
                "degrees_of_freedom": NAN,
                "coverage_factor": NAN,
                "interval_low": NAN,
                "interval_high": NAN,
                "u_random": NAN,
                "u_shared": NAN,
                "runs": 0,
                "molality_max": 0.0125,
                "dilution_model": "limiting law only",
                "prior_share": NAN,
                "prior_conflict_p": NAN,
                "free_slope": NAN,
                "heat_capacity_change": NAN,
                "verdict": "no limit",
                "reason": "CO3-2 reacts with water.",
                "smoothed": [],
                "parameters": {},
                "standard_enthalpy_without_suspects": NAN,
                "u_without_suspects": NAN,
                "recommended_value": NAN,
                "recommended_u": NAN,
                "recommended_from": "",
            },
        ]
    )


def _runs() -> pd.DataFrame:
    heads = (
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
    )
    lines = [
        ("R001", "KCl", "K-1", "A", "2031-03-01", True, "", 0.0125, 17.33, 0.05, -0.11, 17.22, 0.06, 0.1),
        ("R002", "KCl", "K-1", "A", "2031-03-01", True, "", 0.11, 17.52, 0.05, -0.29, 17.23, 0.06, 0.2),
        (
            HOSTILE,
            "KCl",
            '=HYPERLINK("http://x")',
            "{{7*7}}",
            "@SUM(1)",
            True,
            "",
            0.25,
            17.50,
            0.05,
            -0.31,
            17.19,
            0.06,
            -0.5,
        ),
        ("R004", "KCl", "K-1", "$B_1$", "2031-03-02", True, "", 1.02, 17.40, 0.05, -0.17, 17.23, 0.06, 0.2),
        (
            "R005",
            "KCl",
            "K-1",
            "A",
            "2031-03-02",
            False,
            '+bulb "broke" & late',
            0.5,
            16.2,
            0.05,
            -0.3,
            15.9,
            0.06,
            -21.0,
        ),
        ("-6", "CaCl2·6H2O", "", "A", "", True, "", 0.11, 16.4, NAN, -1.6, 14.8, 0.3, -0.4),
        ("R007", "CaCl2·6H2O", "", "A", "", True, "", 0.51, 17.2, NAN, -2.2, 15.0, 0.3, 0.4),
        (
            "R008",
            "Na2CO3",
            "",
            "",
            "",
            False,
            "its salt has no limit at infinite dilution",
            0.0125,
            -24.0,
            0.2,
            NAN,
            NAN,
            NAN,
            NAN,
        ),
    ]
    return pd.DataFrame([(*line, 0.001 * line[-1]) for line in lines], columns=list(heads))


def _curves(salts: pd.DataFrame) -> pd.DataFrame:
    parts = []
    for salt, limit, most, factor in (("KCl", 17.2212, 1.02, 1.0), ("CaCl2·6H2O", 14.91, 0.51, 5.2)):
        m = np.linspace(0, np.sqrt(most), 60) ** 2
        law = factor * 1.972 / 1.2 * np.log1p(1.2 * np.sqrt(m * (1 if factor == 1 else 3)))
        parts.append(
            pd.DataFrame(
                {
                    "salt": salt,
                    "molality": m,
                    "enthalpy": limit + law - factor * 0.95 * m,
                    "u": 0.025 * factor + 0.01 * m,
                    "limiting_law": limit + law,
                    "line_m": limit + 0.2 * factor + 0.02 * m,
                    "line_root": limit + 0.1 + 0.2 * np.sqrt(m),
                }
            )
        )
    return pd.concat(parts, ignore_index=True)


class Runs:
    """As many runs as asked for, all of them dissolutions in water."""

    def __init__(self, number: int) -> None:
        self.number = number
        names = ("initial_molality", "final_molality")
        self.quantities = {name: SimpleNamespace(value=np.full(number, NAN)) for name in names}

    def __len__(self) -> int:
        return self.number


def _campaign() -> SimpleNamespace:
    return SimpleNamespace(
        title="Invented season & <b>bold</b>",
        laboratory="Invented laboratory",
        reference_temperature=298.15,
        pressure=100.0,
        formation_set="NBS-1982",
        date="2031-04-01",
        notes=(("R001", "<i>first</i> of the day"),),
        runs=Runs(8),
        included=np.array([True] * 4 + [False] + [True] * 3),
        salts=("KCl", "CaCl2·6H2O", "Na2CO3"),
        checksums={"runs.csv": "ab" * 32, "campaign.toml": "cd" * 32},
    )


def _invented() -> SimpleNamespace:
    salts = _salts()
    bias = [
        {
            "hypothesis": "gain",
            "subject": "B",
            "size": -0.0123,
            "u": 0.0015,
            "unit": "1",
            "interval_low": -0.0153,
            "interval_high": -0.0093,
            "degrees_of_freedom": INF,
            "statistic": -8.2,
            "p_value": 2.4e-16,
            "p_adjusted": 1.1e-14,
            "delta_chi_square": 67.2,
            "smallest_detectable": 0.0066,
            "rests_on": ("calorimeters", "references"),
            "confounded_with": (),
        },
        {
            "hypothesis": "run",
            "subject": HOSTILE,
            "size": -0.2,
            "u": 0.1,
            "unit": "kJ/mol",
            "interval_low": -0.4,
            "interval_high": 0.0,
            "degrees_of_freedom": 5.0,
            "statistic": -2.0,
            "p_value": 0.045,
            "p_adjusted": 0.63,
            "delta_chi_square": 4.0,
            "smallest_detectable": 0.44,
            "rests_on": ("molality",),
            "confounded_with": ("lot water K-1",),
        },
    ]
    comparison = [
        {
            "salt": "KCl",
            "molality": 0.0,
            "measured": 17.2212,
            "u_measured": 0.025,
            "published": 17.22,
            "u_published": 0.02,
            "difference": 0.0012,
            "zeta": 0.04,
            "e_n": 0.02,
            "verdict": "satisfactory",
            "source": "An invented review",
            "status": "from memory",
            "circular": True,
        },
        {
            "salt": "CaCl2·6H2O",
            "molality": 0.0,
            "measured": 14.91,
            "u_measured": 0.30,
            "published": 13.7,
            "u_published": 0.1,
            "difference": 1.21,
            "zeta": 3.83,
            "e_n": 1.9,
            "verdict": "unsatisfactory",
            "source": "An invented review",
            "status": "read",
            "circular": False,
        },
    ]
    reconciled = [
        {
            "salt": "KCl",
            "measured": 17.2212,
            "u_measured": 0.025,
            "reconciled": 17.2207,
            "u": 0.016,
            "change": -0.0005,
            "standardised_change": -0.03,
            "redundancy": 0.6,
            "smallest_detectable_error": 0.13,
        },
        {
            "salt": "CaCl2·6H2O",
            "measured": 14.91,
            "u_measured": 0.3,
            "reconciled": 14.6,
            "u": 0.2,
            "change": -0.31,
            "standardised_change": -1.4,
            "redundancy": 0.5,
            "smallest_detectable_error": 1.7,
        },
    ]
    references = [
        {
            "quantity": "formation enthalpy",
            "species": "K+",
            "published": -252.38,
            "u_published": 0.04,
            "reconciled": -252.37,
            "u": 0.03,
            "standardised_change": 0.3,
            "source": "An invented table",
        },
        {
            "quantity": "formation enthalpy",
            "species": "Ca+2",
            "published": -542.83,
            "u_published": 0.5,
            "reconciled": -541.0,
            "u": 0.4,
            "standardised_change": 2.6,
            "source": "An invented table",
        },
    ]
    cycles = [
        {
            "salt": "KCl",
            "kind": "formation",
            "misclosure": 0.002,
            "u": 0.03,
            "identity": False,
            "circular": True,
            "smallest_detectable_error": 0.13,
            "verdict": "closes",
        },
        {
            "salt": "CaCl2·6H2O",
            "kind": "formation",
            "misclosure": 1.2,
            "u": 0.7,
            "identity": False,
            "circular": False,
            "smallest_detectable_error": 2.9,
            "verdict": "questionable",
        },
    ]
    budget = [
        ("KCl", "repeatability", 0.015),
        ("KCl", "calorimeter A: energy equivalent", 0.02),
        ("CaCl2·6H2O", "width of the population", 0.24),
        ("CaCl2·6H2O", "repeatability", 0.18),
    ]
    assumptions = [
        ("Repeatability estimated from the scatter: none was stated.", "CaCl2·6H2O", 0.18),
        ("Lots taken as pure.", "all runs", NAN),
    ]
    sources = [
        {
            "quantity": "enthalpy of solution",
            "species": "KCl",
            "value": 17.22,
            "u": 0.02,
            "unit": "kJ/mol",
            "source": "An invented review",
            "year": 1999,
            "status": "from memory",
            "used_for": "comparison",
        },
        {
            "quantity": "formation enthalpy",
            "species": "Ca+2",
            "value": -542.83,
            "u": 0.5,
            "unit": "kJ/mol",
            "source": "An invented table",
            "year": 1982,
            "status": "read",
            "used_for": "cycles",
        },
    ]
    return SimpleNamespace(
        campaign=_campaign(),
        salts=salts,
        runs=_runs(),
        curves=_curves(salts),
        covariance=SimpleNamespace(
            salts=("KCl", "CaCl2·6H2O"),
            private_variance=np.array([0.015**2, 0.18**2]),
            shared=(
                ("calorimeter A: energy equivalent", (0,), (0.02,)),
                ("width of the population", (0, 1), (0.0, 0.24)),
            ),
        ),
        adjustment={"chi_square": 2.1, "degrees_of_freedom": 3, "p_value": 0.55},
        reconciled=pd.DataFrame(reconciled),
        references=pd.DataFrame(references),
        cycles=pd.DataFrame(cycles),
        bias=pd.DataFrame(bias),
        comparison=pd.DataFrame(comparison),
        budget=pd.DataFrame(budget, columns=["salt", "source", "contribution"]),
        assumptions=pd.DataFrame(assumptions, columns=["text", "affects", "u_contribution"]),
        sources=pd.DataFrame(sources),
    )


@pytest.fixture
def with_dilutions() -> Any:
    """The same with two runs more of KCl, an addition and a heat of dilution, and NaBr, which is only diluted."""
    results = _invented()
    more = [
        ("R009", "KCl", "", "A", "", True, "", 0.5, 17.1, 0.05, 0.12, 17.22, 0.07, 0.0),
        ("R010", "KCl", "", "A", "", True, "", 0.25, -0.31, 0.02, NAN, NAN, NAN, 0.4),
        ("R011", "NaBr", "", "A", "", True, "", 0.1, 0.2789, 0.0, NAN, NAN, NAN, 1.2),
    ]
    heads = list(results.runs.columns)
    results.runs = pd.concat(
        [results.runs, pd.DataFrame([(*line, NAN) for line in more], columns=heads)], ignore_index=True
    )
    diluted = results.salts.iloc[[2]].assign(salt="NaBr", runs=1, reason="only heats of dilution are included")
    results.salts = pd.concat([results.salts, diluted], ignore_index=True)
    results.campaign.runs = Runs(11)
    results.campaign.included = np.append(results.campaign.included, [True] * 3)
    results.campaign.runs.quantities["initial_molality"].value[8:] = 0.25, 1.0, 0.5
    results.campaign.runs.quantities["final_molality"].value[9:] = 0.25, 0.1
    results.campaign.salts = (*results.campaign.salts, "NaBr")
    return results


@pytest.fixture
def invented() -> Any:
    """Results of an invented campaign of three salts: one plain, one with few runs, one without a limit."""
    return _invented()
