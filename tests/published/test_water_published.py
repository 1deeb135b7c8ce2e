"""Water and its Debye–Hückel slopes against published values."""

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


def test_against_the_permittivity_of_1979():
    "Within 0.15 % and 1 % from 20 to 90 °C; the spread covers what lies below."
    frame = table_of("Bradley-Pitzer-1979")
    celsius = frame["temperature / °C"].to_numpy()
    slope = frame["debye_hueckel_slope / (kJ kg^0.5 mol^-1.5)"].to_numpy()
    osmotic = frame["osmotic_slope / (kg^0.5 mol^-0.5)"].to_numpy()
    warm = (celsius >= 20) & (celsius <= 90)
    t = celsius + 273.15
    assert warm.sum() >= 14
    assert water.osmotic_slope(t[warm]) == pytest.approx(osmotic[warm], rel=0.0016)
    assert water.debye_hueckel_slope(t[warm]) == pytest.approx(slope[warm], rel=0.0111)
    liquid = t <= water.HIGHEST
    apart = abs(water.debye_hueckel_slope(t[liquid]) / slope[liquid] - 1)
    assert (apart < 2 * water.slope_relative_u(t[liquid])).all()
    assert apart[0] == pytest.approx(0.05, abs=0.01)  # 0 °C: 5 %
