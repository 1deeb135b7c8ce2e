"""Units and the order of rows change nothing but the units and the order of rows."""

import tempfile
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reconcile.campaign import Campaign, read_campaign
from reconcile.campaign.columns import COLUMNS, columns_of
from reconcile.campaign.units import UnitError, measured, scale

# Unit, and how many of the glossary's it is; definitions of the SI and of the thermochemical calorie.
MASS = {"g": 1.0, "mg": 1e-3, "kg": 1e3, "µg": 1e-6, "μg": 1e-6}
HEAT = {"J": 1.0, "kJ": 1e3, "mJ": 1e-3, "cal": 4.184, "kcal": 4184.0, "N m": 1.0}
MOLALITY = {"mol/kg": 1.0, "mmol/kg": 1e-3, "mmol/g": 1.0, "mol kg^-1": 1.0, "mol·kg⁻¹": 1.0}
ENTHALPY = {"kJ/mol": 1.0, "J/mol": 1e-3, "kcal/mol": 4.184, "kJ mol⁻¹": 1.0, "kJ mol^-1": 1.0}

run = st.tuples(
    st.floats(0.01, 10), st.floats(10, 500), st.floats(-1000, 1000), st.floats(0, 5), st.floats(5, 60), st.booleans()
)


def read(rows: list[tuple[float, ...]], mass: str, heat: str, molality: str, enthalpy: str, warm: str) -> Campaign:
    columns = (
        f"run,salt,mass / {mass},water / {mass},heat / {heat},u(heat) / {heat},temperature / {warm},"
        f"u(temperature) / {warm},molality / ({molality}),enthalpy / ({enthalpy}),U(enthalpy) / ({enthalpy})"
    )
    lines = [columns]
    for number, (salt, water, joule, u, celsius, is_heat) in rows:
        warmth = celsius + (273.15 if warm == "K" else 0)
        start = f"R{number},KCl,"
        if is_heat:
            cells = [
                salt / MASS[mass],
                water / MASS[mass],
                joule / HEAT[heat],
                u / HEAT[heat],
                warmth,
                0.01,
                "",
                "",
                "",
            ]
        else:
            cells = [
                "",
                "",
                "",
                "",
                warmth,
                0.01,
                salt / MOLALITY[molality],
                joule / ENTHALPY[enthalpy],
                u / ENTHALPY[enthalpy],
            ]
        lines.append(start + ",".join(str(cell) for cell in cells))
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "runs.csv"
        path.write_text("\n".join(lines), encoding="utf-8")
        return read_campaign(path)


@settings(max_examples=40, deadline=None)
@given(
    rows=st.lists(run, min_size=1, max_size=6), order=st.randoms(use_true_random=False),
    mass=st.sampled_from(sorted(MASS)), heat=st.sampled_from(sorted(HEAT)), molality=st.sampled_from(sorted(MOLALITY)),
    enthalpy=st.sampled_from(sorted(ENTHALPY)), warm=st.sampled_from(["K", "°C", "degC"]),
)  # fmt: skip
def test_units_and_order_do_not_matter(rows, order, mass, heat, molality, enthalpy, warm):
    numbered = list(enumerate(rows))
    plain = read(numbered, "g", "J", "mol/kg", "kJ/mol", "K")
    order.shuffle(numbered)
    other = read(numbered, mass, heat, molality, enthalpy, warm)
    places = [number for number, _ in numbered]
    key = other.runs.keys["run"]
    assert [key.labels[code] for code in key.code] == [f"R{place}" for place in places]
    for name, quantity in plain.runs.quantities.items():
        for got, expected in (
            (other.runs.quantities[name].value, quantity.value), (other.runs.quantities[name].u, quantity.u),
        ):  # fmt: skip
            np.testing.assert_allclose(got, expected[places], rtol=1e-12, atol=1e-300, err_msg=name)


@pytest.mark.parametrize("column", [column for column in COLUMNS if column.kind == "quantity"], ids=lambda c: c.name)
def test_every_usual_unit_is_understood(column):
    for unit in column.usual:
        assert scale(unit, column, uncertainty=True).slope > 0
    assert scale(column.usual[0], column).slope == pytest.approx(1.0 if column.usual[0] != "%" else 0.01)


@pytest.mark.parametrize(
    "text", ["", "g", "1..2 g", "0,5 g", "1 g g", "1 x", "1e999999 m", "١ g", "1 " + "g" * 100, "1 g/0"]
)
def test_texts_that_are_no_mass(text):
    with pytest.raises(UnitError):
        measured(text, columns_of("runs")["mass"])


@given(st.text(max_size=30))
@settings(max_examples=200, deadline=None)
def test_no_unit_makes_anything_but_a_unit_error(text):
    for column in (columns_of("runs")["mass"], columns_of("runs")["temperature"], columns_of("samples")["water"]):
        try:
            slope = scale(text, column).slope
        except UnitError:
            continue
        assert column.factors[0] * 0.99 < slope < column.factors[1] * 1.01


def test_a_temperature_has_an_origin_and_a_difference_none():
    temperature = columns_of("runs")["temperature"]
    assert scale("°C", temperature).origin == pytest.approx(273.15)
    assert scale("degF", temperature).origin == pytest.approx(459.67 * 5 / 9)
    assert scale("degF", temperature, uncertainty=True).origin == 0
    assert scale("degF", temperature).slope == pytest.approx(5 / 9)
