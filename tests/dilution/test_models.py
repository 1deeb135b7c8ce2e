"""The equation of L_φ: limits, special cases, and the scaling of its parameters."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reconcile.chemistry import read_salt
from reconcile.dilution.models import composition, decay, empirical_terms, limiting_law, scale_of_parameters

R = 8.314462618e-3  # kJ/(K mol), exact in the SI (from memory)
A_H = 1.986  # kJ kg^½ mol^−3/2 at 298.15 K (Archer & Wang 1990)
KINDS = {"NaCl": 1.0, "CaCl2": 3.0, "Na2SO4": 3.0, "LaCl3": 6.0, "CuSO4": 4.0, "(NH4)2Fe(SO4)2": 9.0, "AgCs(NO3)2": 2.0}


def of(*formulas):
    salts = [read_salt(f) for f in formulas]
    return composition([s.ions for s in salts], [s.charges for s in salts])


def test_ionic_strength_over_molality():
    "½Σνz² by hand: Mohr's salt ½(2·1 + 4 + 2·4) = 7, AgCs(NO3)2 ½(1 + 1 + 2) = 2."
    expected = {**KINDS, "(NH4)2Fe(SO4)2": 7.0}
    np.testing.assert_allclose(of(*expected).charge_factor, list(expected.values()))


@pytest.mark.parametrize("formula", list(KINDS))
def test_limiting_law(formula):
    "L_φ ─► ν|z₊z₋|/2 · A_H √I = ½Σνz² · A_H √I: factor^1.5 A_H √m, the empirical terms vanishing as m."
    what = of(formula)
    factor = what.charge_factor[0]
    m = np.array([1e-8])
    assert limiting_law(m, factor, A_H)[0] == pytest.approx(factor**1.5 * A_H * 1e-4, rel=1e-3)
    assert np.abs(empirical_terms(m, np.array([298.15]), what)).max() <= factor * 1.001e-8


@given(st.floats(1e-6, 6.0))
@settings(max_examples=30, deadline=None)
def test_the_law_for_two_ions_is_the_textbooks(m):
    "CaCl2: ν|z₊z₋|(A_H/2b) ln(1 + b√I) with ν = 3, |z₊z₋| = 2, I = 3m, b = 1.2."
    assert limiting_law(m, 3.0, A_H) == pytest.approx(6 * A_H / 2.4 * np.log(1 + 1.2 * np.sqrt(3 * m)))


def test_decay():
    assert decay(0.0) == 1.0
    x = np.array([1e-5, 1e-3, 0.5, 12.0])
    np.testing.assert_allclose(decay(x)[1:], (2 * (1 - (1 + x) * np.exp(-x)) / x**2)[1:], rtol=1e-5)
    assert decay(1e-5) == pytest.approx(1 - 2e-5 / 3)


@pytest.mark.parametrize("formula", ["NaCl", "CaCl2", "Na2SO4", "LaCl3", "CuSO4"])
@pytest.mark.parametrize("temperature", [288.15, 298.15, 320.0])
def test_scaled_terms_are_pitzers(formula, temperature):
    "−2ν₊ν₋RT²[m β⁽⁰⁾ᴸ + m g(α₁√I) β⁽¹⁾ᴸ + m² ν₊z₊ Cᵠᴸ/(2|z₊z₋|^½) + m g(12√I) β⁽²⁾ᴸ]: Pitzer 1991."
    salt = read_salt(formula)
    (_, nu_m), (_, nu_x) = salt.ions
    z_m, z_x = salt.charges
    m = np.array([0.01, 0.3, 2.0])
    strength = m * 0.5 * (nu_m * z_m**2 + nu_x * z_x**2)
    two_two = z_m == 2 and z_x == -2
    first, second = (1.4, 12.0) if two_two else (2.0, 0.0)
    beta = np.array([7e-4, -3e-4, 2e-5, -5e-3 if two_two else 0.0])
    g1 = decay(first * np.sqrt(strength))
    g2 = decay(second * np.sqrt(strength)) if two_two else 0.0
    third = m**2 * nu_m * z_m / (2 * np.sqrt(abs(z_m * z_x)))
    by_hand = (
        -2 * nu_m * nu_x * R * temperature**2 * (m * beta[0] + m * g1 * beta[1] + third * beta[2] + m * g2 * beta[3])
    )
    what = of(formula)
    scaled = scale_of_parameters(what)[0] * beta
    terms = empirical_terms(m, np.full(3, temperature), what.of(np.zeros(3, int)))
    np.testing.assert_allclose(terms @ scaled, by_hand, rtol=1e-9)
