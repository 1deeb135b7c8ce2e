"""Amounts, molalities over all water, and the molar enthalpy by hand."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reconcile.calorimetry import molality_over_all_water, molar_enthalpy


@pytest.mark.parametrize("mass", [0.0, -1.0, np.nan])
def test_an_amount_that_is_none_is_refused(mass):
    with pytest.raises(ValueError, match="salt at position 1"):
        molar_enthalpy([1.0, 1.0], [1.0, mass], 74.551)


def test_water_of_the_crystal_and_of_the_lot_is_solvent():
    # 1 mol of a dihydrate of M = 100 g/mol, 1 % further water and 1 % inert in the lot
    mass = 100 / 0.98
    water = 1000 - 2 * 18.015 - 0.01 * mass
    assert molality_over_all_water(mass, water, 100.0, 0.98, 2.0, 0.01) == pytest.approx(1.0)


@given(st.floats(0.01, 50), st.floats(10, 1000), st.floats(1e-3, 1e3))
@settings(max_examples=30, deadline=None)
def test_twice_of_everything_changes_nothing(mass, water, scale):
    "Intensive quantities: masses and heats in one proportion."
    args = (74.551, 0.99, 1.0, 0.005)
    assert molality_over_all_water(mass * scale, water * scale, *args) == pytest.approx(
        float(molality_over_all_water(mass, water, *args))
    )
    assert molar_enthalpy(100 * scale, mass * scale, 74.551) == pytest.approx(float(molar_enthalpy(100, mass, 74.551)))


@given(st.floats(0.01, 5), st.floats(50, 500))
@settings(max_examples=30, deadline=None)
def test_hydrate_in_less_water_is_the_anhydrous_salt_in_more(amount, water):
    "n mol of MX·6H2O in w g are n mol of MX in w + 6 n M(H2O)."
    hydrate = molality_over_all_water(amount * 219.08, water, 219.08, 1.0, 6.0)
    anhydrous = molality_over_all_water(amount * 110.99, water + amount * 6 * 18.015, 110.99)
    assert float(hydrate) == pytest.approx(float(anhydrous), rel=1e-12)
