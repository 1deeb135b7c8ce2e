"""Water and its Debye–Hückel slopes against published values."""

import numpy as np
import pytest

from reconcile import reference
from reconcile.chemistry import water

# A_φ / (kg^½ mol^−½), A_H / (kJ kg^½ mol^−3/2) at 25 °C, both from memory
PUBLISHED = [
    ("Archer, Wang, J. Phys. Chem. Ref. Data 19, 371 (1990)", 0.39147, 1.9864),
    ("Pitzer, Peiper, Busey, J. Phys. Chem. Ref. Data 13, 1 (1984)", 0.3915, 1.9856),
]


@pytest.mark.parametrize(("source", "osmotic", "enthalpy"), PUBLISHED)
def test_slopes_at_25_degrees(source, osmotic, enthalpy):
    "A_φ within 0.1 %, A_H within 1 %."
    assert water.osmotic_slope(298.15) == pytest.approx(osmotic, rel=0.001), source
    assert water.debye_hueckel_slope(298.15) == pytest.approx(enthalpy, rel=0.01), source


@pytest.mark.parametrize(("source", "osmotic", "enthalpy"), PUBLISHED)
def test_the_named_source_knows_how_far_evaluations_lie_apart(source, osmotic, enthalpy):
    ours = water.debye_hueckel_slope(298.15)
    assert abs(ours - enthalpy) < 2 * water.slope_relative_u(298.15) * ours, source


@pytest.mark.parametrize(
    ("temperature", "density", "tolerance"),
    # kg/m³, air-free, 100 kPa; CRC Handbook / IAPWS, from memory
    [(277.13, 999.97, 0.01), (293.15, 998.21, 0.01), (298.15, 997.05, 0.01), (323.15, 988.03, 0.02)],
)
def test_density(temperature, density, tolerance):
    assert water.density(temperature) == pytest.approx(density, abs=tolerance)


def test_permittivity():
    "78.38 to 78.41 at 25 °C: Archer, Wang 1990 and Fernández et al. 1997, from memory."
    assert 78.35 < water.permittivity(298.15) < 78.43
    assert water.permittivity(293.15) == pytest.approx(80.2, abs=0.1)  # CRC Handbook, from memory


@pytest.mark.parametrize(("temperature", "expected"), [(288.15, 4.1855), (298.15, 4.1813), (313.15, 4.1794)])
def test_specific_heat_capacity(temperature, expected):
    "J/(g K), IAPWS-95 tables, from memory; the 15 °C calorie is 4.1855 J."
    assert water.specific_heat_capacity(temperature) == pytest.approx(expected, abs=0.003)


def table_of(reference_set):
    frame = reference.table("debye_hueckel_slope")
    return frame[frame["reference_set"].eq(reference_set)]


def test_the_iapws_table_is_what_we_compute():
    "Table and function were made separately: digits of the table, and of its central differences."
    frame = table_of("IAPWS")
    inside = frame["temperature / °C"].between(0.25, 99)
    frame = frame[inside]
    t = frame["temperature / °C"].to_numpy() + 273.15
    assert len(t) > 15
    assert water.osmotic_slope(t) == pytest.approx(frame["osmotic_slope / (kg^0.5 mol^-0.5)"].to_numpy(), rel=5e-5)
    slope = frame["debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"].to_numpy()
    assert water.debye_hueckel_slope(t) == pytest.approx(slope, rel=2e-4)
    third = frame["heat_capacity_slope / (J kg^0.5 mol^-1.5 K^-1)"].to_numpy()
    assert water.heat_capacity_slope(t) == pytest.approx(third, rel=2e-3)


def bradley_pitzer(temperature, pressure=1.0):
    """Bradley, Pitzer, J. Phys. Chem. 83, 1599 (1979): static permittivity; K, bar; constants from memory."""
    low = 342.79 * np.exp(-5.0866e-3 * temperature + 9.4690e-7 * temperature**2)
    c = -2.0525 + 3115.9 / (temperature - 182.89)
    b = -8032.5 + 4.2142e6 / temperature + 2.1417 * temperature
    return low + c * np.log((b + pressure) / (b + 1000))


def test_the_table_of_1979_recomputed():
    "Permittivity of 1979, written out here, with our density: both columns of the table to 1e-4."
    frame = table_of("Bradley-Pitzer-1979")
    frame = frame[frame["temperature / °C"].between(0.5, 98)]
    t = frame["temperature / °C"].to_numpy() + 273.15

    def osmotic(t):
        length = 1.602176634e-19**2 / (4 * np.pi * 8.8541878188e-12 * bradley_pitzer(t) * 1.380649e-23 * t)
        return np.sqrt(2 * np.pi * 6.02214076e23 * water.density(t)) * length**1.5 / 3

    assert osmotic(t) == pytest.approx(frame["osmotic_slope / (kg^0.5 mol^-0.5)"].to_numpy(), rel=1e-4)
    derivative = (osmotic(t + 0.05) - osmotic(t - 0.05)) / 0.1
    enthalpy = 4 * 8.314462618e-3 * t**2 * derivative
    assert enthalpy == pytest.approx(frame["debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"].to_numpy(), rel=1e-4)


def test_against_the_permittivity_of_1979():
    "Within 0.15 % and 1 % from 20 to 85 °C (0.16 and 1.06 % at 90 °C); the named source covers all of it."
    frame = table_of("Bradley-Pitzer-1979")
    celsius = frame["temperature / °C"].to_numpy()
    slope = frame["debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"].to_numpy()
    osmotic = frame["osmotic_slope / (kg^0.5 mol^-0.5)"].to_numpy()
    t = celsius + 273.15
    for low, high, of_osmotic, of_enthalpy in ((20, 85, 0.0015, 0.01), (90, 90, 0.0016, 0.0107)):
        inside = (celsius >= low) & (celsius <= high)
        assert inside.any()
        assert water.osmotic_slope(t[inside]) == pytest.approx(osmotic[inside], rel=of_osmotic)
        assert water.debye_hueckel_slope(t[inside]) == pytest.approx(slope[inside], rel=of_enthalpy)
    liquid = t <= water.HIGHEST
    apart = abs(water.debye_hueckel_slope(t[liquid]) / slope[liquid] - 1)
    assert (apart < 1.1 * water.slope_relative_u(t[liquid])).all()
    assert apart[0] == pytest.approx(0.05, abs=0.005)  # 0 °C: 5 %
    assert water.slope_relative_u(273.15) == 0.05
