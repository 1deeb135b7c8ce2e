"""Water's properties: shapes, limits, derivatives. Values against the outside stand in tests/published."""

import subprocess
import sys

import numpy as np
import pytest

from reconcile.chemistry import water

FUNCTIONS = (
    water.density,
    water.permittivity,
    water.specific_heat_capacity,
    water.osmotic_slope,
    water.debye_hueckel_slope,
    water.heat_capacity_slope,
    water.slope_relative_u,
)


@pytest.mark.parametrize("function", FUNCTIONS)
def test_shapes_and_missing_values(function):
    values = function(np.array([[274.0, 298.15], [np.nan, 350.0]]))
    assert values.shape == (2, 2)
    assert np.isnan(values[1, 0])
    assert np.isfinite(values[0]).all()
    assert function(298.15) == pytest.approx(values[0, 1])
    assert np.ndim(function(298.15)) == 0


@pytest.mark.parametrize("function", FUNCTIONS)
@pytest.mark.parametrize("temperature", [273.0, 373.15, -5.0, np.inf])
def test_outside_liquid_water_is_refused(function, temperature):
    with pytest.raises(ValueError, match="liquid"):
        function([298.15, temperature])


def test_slopes_are_derivatives():
    t = np.linspace(275, 371, 25)
    h = 0.01
    by_differences = (water.osmotic_slope(t + h) - water.osmotic_slope(t - h)) / (2 * h)
    assert water.debye_hueckel_slope(t) == pytest.approx(
        4 * water.GAS_CONSTANT * t**2 * by_differences / 1000, rel=1e-6
    )
    by_differences = (water.debye_hueckel_slope(t + h) - water.debye_hueckel_slope(t - h)) / (2 * h) * 1000
    assert water.heat_capacity_slope(t) == pytest.approx(by_differences, rel=1e-6)


def test_tables_reproduce_the_formulations_between_their_knots():
    from chemicals.iapws import iapws95_properties, iapws95_rho
    from chemicals.permittivity import permittivity_IAPWS

    for t in (273.2, 281.37, 299.99, 333.33, 372.6):
        rho = iapws95_rho(t, 1e5)
        assert water.density(t) == pytest.approx(rho, rel=1e-9)
        assert water.permittivity(t) == pytest.approx(permittivity_IAPWS(t, rho), rel=1e-9)
        assert water.specific_heat_capacity(t) == pytest.approx(iapws95_properties(t, 1e5)[5] / 1000, rel=1e-9)


def test_reading_formulae_imports_nothing_heavy():
    program = (
        "import sys, reconcile.chemistry as c; c.read_salt('NaCl');"
        "from reconcile.chemistry import water;"
        "print([m for m in ('pandas', 'scipy', 'chemicals') if m in sys.modules])"
    )
    result = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert result.stdout.strip() == "[]"
