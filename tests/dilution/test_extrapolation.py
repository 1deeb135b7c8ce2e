"""Runs to infinite dilution: what must not matter, and what must."""

import numpy as np
import pandas as pd
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from reconcile.chemistry import read_salt, water
from reconcile.dilution import electrolytes
from reconcile.dilution.models import empirical_terms, limiting_law

A_H = float(water.debye_hueckel_slope(298.15))
OFTEN = settings(max_examples=5, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])


def season(salts=("KCl", "NaNO3", "CaCl2"), runs=6, seed=1, u=0.05, declared=True):
    rng = np.random.default_rng(seed)
    what = electrolytes([read_salt(s) for s in salts])
    salt = np.repeat(np.arange(len(salts)), runs)
    m = np.exp(rng.uniform(np.log(0.02), np.log(0.3), len(salt)))
    one = what.composition.of(what.of_salt[salt])
    value = 5.0 + 7 * salt + limiting_law(m, one.charge_factor, A_H) - 1.2 * m * one.charge_factor
    frame = pd.DataFrame(
        {
            "run": [f"R{i + 1:03d}" for i in range(len(salt))],
            "salt": np.array(salts, dtype=object)[salt],
            "molality / (mol/kg)": m,
            "enthalpy / (kJ/mol)": value + u * rng.standard_normal(len(salt)),
        }
    )
    if declared:
        frame["u(enthalpy) / (kJ/mol)"] = u
    return frame


def by_salt(dilution, campaign_salts):
    found = dilution.extrapolation
    names = [campaign_salts[i] for i in dilution.layout.crystal]
    return {
        n: (v, u, *i) for n, v, u, i in zip(names, found.crystals.value, found.crystals.u, found.interval, strict=True)
    }


def assert_same(first, second, rel=1e-6):
    assert first.keys() == second.keys()
    for name, values in first.items():
        assert second[name] == pytest.approx(values, rel=rel, abs=1e-6), name


def order_of(frame):
    return list(dict.fromkeys(frame["salt"]))


@given(st.permutations(range(18)))
@OFTEN
def test_the_order_of_rows_does_not_matter(laid_out, order):
    frame = season()
    turned = frame.iloc[list(order)].reset_index(drop=True)
    assert_same(by_salt(laid_out(frame), order_of(frame)), by_salt(laid_out(turned), order_of(turned)), rel=1e-5)


def test_units_do_not_matter(laid_out):
    frame = season()
    other = frame.rename(
        columns={
            "molality / (mol/kg)": "molality / (mmol/kg)",
            "enthalpy / (kJ/mol)": "enthalpy / (cal/mol)",
            "u(enthalpy) / (kJ/mol)": "U(enthalpy) / (J/mol)",
        }
    )
    other["molality / (mmol/kg)"] *= 1000
    other["enthalpy / (cal/mol)"] *= 1000 / 4.184
    other["U(enthalpy) / (J/mol)"] *= 2000  # k = 2
    assert_same(by_salt(laid_out(frame), order_of(frame)), by_salt(laid_out(other), order_of(frame)))


def test_campaigns_that_share_nothing_but_the_slope_may_be_split(laid_out):
    "With published parameters and stated u one salt tells nothing of another; only the slope's error is common."
    frame = season(("KCl", "NaNO3"), runs=40)
    whole = by_salt(laid_out(frame), order_of(frame))
    parts = {}
    for salt, part in frame.groupby("salt", sort=False):
        parts |= by_salt(laid_out(part), [salt])
    for salt, (value, u, *_) in whole.items():
        assert parts[salt][0] == pytest.approx(value, abs=0.1 * u)  # the slope is 0.7 %: it moves by a hair
        assert parts[salt][1] == pytest.approx(u, rel=0.05)


@given(st.floats(0.2, 5.0))
@OFTEN
def test_a_constant_added_to_all_enthalpies_is_added_to_the_limits(laid_out, constant):
    "What is stated in kJ/mol does not depend on the level; dilution is a difference."
    frame = season()
    moved = frame.assign(**{"enthalpy / (kJ/mol)": frame["enthalpy / (kJ/mol)"] + constant})
    first, second = laid_out(frame).extrapolation, laid_out(moved).extrapolation
    np.testing.assert_allclose(second.crystals.value - first.crystals.value, constant, atol=1e-4)
    np.testing.assert_allclose(second.crystals.u, first.crystals.u, rtol=1e-4)


def test_dilute_runs_follow_the_limiting_law(laid_out):
    "At 10⁻⁵ mol/kg nothing but A_H √m is left: the run less the law is the limit, whatever the prior."
    m = np.array([1e-5, 2e-5, 4e-5])
    frame = season(("KCl",), runs=3).assign(
        **{"molality / (mol/kg)": m, "enthalpy / (kJ/mol)": 17.22 + A_H * np.sqrt(m)}
    )
    found = laid_out(frame, "[analysis]\npublished_dilution = false\n").extrapolation
    assert found.crystals.value[0] == pytest.approx(17.22, abs=2e-4)
    assert found.crystals.u[0] == pytest.approx(0.05 / np.sqrt(3), rel=0.01)


def test_a_hydrate_leans_on_the_runs_of_its_anhydrous_salt(laid_out):
    "Three runs of CaCl2·6H2O at 0.5 to 0.8 mol/kg, alone and beside fourteen of CaCl2 (no published set)."
    rng = np.random.default_rng(8)
    what = electrolytes([read_salt("CaCl2")]).composition
    m = np.concatenate([[0.5, 0.65, 0.8], np.geomspace(0.01, 0.8, 14)])
    one = what.of(np.zeros(17, int))
    dilution = limiting_law(m, one.charge_factor, A_H) + empirical_terms(m, np.full(17, 298.15), one)[:, 0] * -0.4
    frame = pd.DataFrame(
        {
            "run": [f"R{i}" for i in range(17)],
            "salt": ["CaCl2·6H2O"] * 3 + ["CaCl2"] * 14,
            "molality / (mol/kg)": m,
            "enthalpy / (kJ/mol)": np.where(np.arange(17) < 3, 14.0, -81.3) + dilution + 0.05 * rng.standard_normal(17),
            "u(enthalpy) / (kJ/mol)": 0.05,
        }
    )
    toml = "[analysis]\npublished_dilution = false\n"
    alone, both = (laid_out(f, toml).extrapolation for f in (frame.iloc[:3], frame))
    assert both.crystals.u[0] < 0.5 * alone.crystals.u[0]
    assert abs(both.crystals.value[0] - 14.0) < 3 * both.crystals.u[0]
    covariance = both.crystals.covariance()
    assert covariance[0, 1] > 0.2 * np.sqrt(covariance[0, 0] * covariance[1, 1])  # they err together


@pytest.mark.parametrize("declared", [True, False])
def test_every_budget_adds_up(laid_out, declared):
    found = laid_out(season(declared=declared)).extrapolation.crystals
    contribution, _ = found.budgets()
    np.testing.assert_allclose(np.sqrt((contribution**2).sum(axis=1)), found.u, rtol=1e-9)


def test_salts_that_share_a_calorimeter_err_together(laid_out):
    frame = season(("KCl", "NaNO3"), runs=4).drop(columns=["enthalpy / (kJ/mol)", "u(enthalpy) / (kJ/mol)"])
    frame["mass / g"], frame["water / g"], frame["heat / J"], frame["u(heat) / J"] = 1.0, 100.0, 200.0, 0.5
    frame = frame.drop(columns="molality / (mol/kg)").assign(calorimeter="A")
    covariances = []
    for u in (0.0, 3.0):
        vessel = pd.DataFrame({"calorimeter": ["A"], "parasitic_heat / J": [0.0], "u(parasitic_heat) / J": [u]})
        found = laid_out(frame, calorimeters=vessel)
        covariances.append(found.extrapolation.crystals.covariance()[0, 1])
    # 3 J over 1 g: 3·74.551/1000 and 3·84.994/1000 kJ/mol
    assert covariances[1] - covariances[0] == pytest.approx(0.003**2 * 74.551 * 84.994, rel=0.02)


def test_two_percent_more_published_uncertainty_is_not_less(laid_out):
    "Without the published set u grows."
    frame = season(("KCl",), runs=4)
    with_set, without = (
        laid_out(frame, f"[analysis]\npublished_dilution = {word}\n").extrapolation for word in ("true", "false")
    )
    assert without.crystals.u[0] > with_set.crystals.u[0]
    assert without.prior_share[0] <= 1
    assert with_set.problem.prior.published.all()
    assert not without.problem.prior.published.any()


@pytest.mark.parametrize("away", [5.0, -10.0])
def test_temperature(laid_out, away):
    "KCl: ΔH°(298.15 K) = ΔH(T) − ΔsolCp° (T − 298.15 K), its u along with it."
    frame = season(("KCl",), runs=4)
    moved = frame.assign(**{"temperature / K": 298.15 + away})
    near, far = laid_out(frame), laid_out(moved)
    change, u = near.heat_capacity.value[0] / 1000, near.heat_capacity.u[0] / 1000
    difference = far.extrapolation.crystals.value[0] - near.extrapolation.crystals.value[0]
    assert difference == pytest.approx(-change * away, abs=0.12)  # the slope and parameters move as well
    assert far.extrapolation.crystals.u[0] > abs(u * away)
