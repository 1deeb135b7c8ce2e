"""The network's rows, by hand; what is circular, what is missing."""

import numpy as np
import pandas as pd
import pytest
from scipy import sparse

from reconcile.chemistry import read_salt
from reconcile.cycles import adjust, network
from reconcile.statistics import Sources, stated


def formation(rows):
    frame = pd.DataFrame(rows, columns=["species", "phase", "value", "u", "circular"])
    frame["identity"] = [
        read_salt(s).identity if p == "cr" else s for s, p in zip(frame.species, frame.phase, strict=True)
    ]
    for column in ("source", "year", "status"):
        frame[column] = "invented"
    return frame


def published(salts, value, u, independent=True):
    return pd.DataFrame(
        {"value": value, "u": u, "independent": independent, "source": "invented", "year": 1965, "status": "read"},
        index=salts,
    )


# invented round numbers: MX dissolves with −40 − 60 + 120 = 20, MX·2H2O with −40 − 60 + 2·(−285) + 700 = 30
SET = [
    ("Na+", "aq", -40.0, 0.1, ""), ("Cl-", "aq", -60.0, 0.2, ""), ("H2O", "l", -285.0, 0.04, ""),
    ("NaCl", "cr", -120.0, 0.3, "no"), ("NaCl·2H2O", "cr", -700.0, 0.4, "no"),
]  # fmt: skip
SALTS = [read_salt("NaCl"), read_salt("NaCl·2H2O")]
NONE = published(["NaCl", "NaCl·2H2O"], np.nan, np.nan)


def measured(values=(20.5, 30.2), u=(0.05, 0.06)):
    return stated(np.array(values), np.array(u), "measured")


def test_cycles_by_hand():
    net = network(SALTS, measured(), formation(SET), NONE)
    np.testing.assert_allclose(net.reference_side, [20.0, 30.0])
    np.testing.assert_allclose(
        net.u_reference_side, [np.sqrt(0.01 + 0.04 + 0.09), np.sqrt(0.01 + 0.04 + 0.0064 + 0.16)]
    )
    found = adjust(("NaCl", "NaCl·2H2O"), net)
    assert found.cycles["misclosure"].tolist() == pytest.approx([0.5, 0.2])
    assert found.degrees_of_freedom == 2  # two cycles
    # dense: the two misclosures share the ions
    misclosure = np.array([0.5, 0.2])
    covariance = np.diag([0.05**2 + 0.09, 0.06**2 + 0.0064 + 0.16]) + 0.05
    assert found.chi_square == pytest.approx(misclosure @ np.linalg.solve(covariance, misclosure))


def test_adjusted_values_obey_hess():
    found = adjust(("NaCl", "NaCl·2H2O"), network(SALTS, measured(), formation(SET), NONE))
    value = found.references.set_index(["species", "quantity"])["reconciled"].droplevel(1)
    ions = value["Na+"] + value["Cl-"]
    reconciled = found.reconciled.set_index("salt")["reconciled"]
    assert reconciled["NaCl"] == pytest.approx(ions - value["NaCl"])
    assert reconciled["NaCl·2H2O"] == pytest.approx(ions + 2 * value["H2O"] - value["NaCl·2H2O"])
    assert (found.reconciled["u"] <= found.reconciled["u_measured"]).all()
    assert found.reconciled["redundancy"].sum() + found.references["redundancy"].sum() == pytest.approx(2)


def test_the_sources_of_the_laboratory_go_into_the_adjustment():
    "A calorimeter common to both salts makes their misclosures one."
    shared = measured().with_sources(
        sparse.csr_array(np.array([[0.5], [0.5]])), Sources(("calorimeter",), ("stated",), ("calorimeter",))
    )
    found = adjust(("NaCl", "NaCl·2H2O"), network(SALTS, shared, formation(SET), NONE))
    misclosure = np.array([0.5, 0.2])
    covariance = np.diag([0.05**2 + 0.09, 0.06**2 + 0.0064 + 0.16]) + 0.05 + 0.25
    assert found.chi_square == pytest.approx(misclosure @ np.linalg.solve(covariance, misclosure))


def test_a_circular_crystal_is_its_published_solution_enthalpy():
    rows = [(*r[:4], "likely" if r[0] == "NaCl" else r[4]) for r in SET]
    net = network(SALTS, measured(), formation(rows), published(["NaCl", "NaCl·2H2O"], [20.1, np.nan], [0.1, np.nan]))
    assert net.circular.tolist() == [True, False]
    assert "NaCl" not in net.references.loc[net.references["quantity"].str.contains("crystal"), "species"].tolist()
    np.testing.assert_allclose([net.reference_side[0], net.u_reference_side[0]], [20.1, 0.1])
    found = adjust(("NaCl", "NaCl·2H2O"), net)
    hydrate = 0.2**2 / (0.06**2 + 0.01 + 0.04 + 0.0064 + 0.16)
    assert found.chi_square == pytest.approx(0.4**2 / (0.05**2 + 0.1**2) + hydrate)  # no cycle counts it again


def test_a_missing_ion_leaves_the_published_value_alone():
    rows = [r for r in SET if r[0] != "Na+"]
    net = network(SALTS[:1], measured((20.5,), (0.05,)), formation(rows), published(["NaCl"], [20.1], [0.1]))
    assert np.isnan(net.reference_side[0])
    found = adjust(("NaCl",), net)
    assert len(found.cycles) == 0
    assert found.chi_square == pytest.approx(0.4**2 / (0.05**2 + 0.1**2))
    assert found.degrees_of_freedom == 1


def test_nothing_to_compare_with():
    found = adjust(("NaCl",), network(SALTS[:1], measured((20.5,), (0.05,)), formation(SET[1:3]), NONE.iloc[:1]))
    assert found.degrees_of_freedom == 0
    assert found.p_value is None
    assert found.reconciled["reconciled"][0] == pytest.approx(20.5)
    assert np.isnan(found.reconciled["smallest_detectable_error"][0])


def test_protons_are_the_zero():
    rows = [("H+", "aq", 0.0, 0.0, ""), ("Cl-", "aq", -60.0, 0.2, ""), ("HCl", "cr", -50.0, 0.3, "no")]
    net = network([read_salt("HCl")], measured((-10.0,), (0.1,)), formation(rows), published(["HCl"], np.nan, np.nan))
    assert net.reference_side[0] == -10.0
    assert not [name for name in net.unknowns if name.startswith("H+")]


@pytest.mark.parametrize(("away", "verdict"), [(0.0, "closes"), (2.5, "questionable"), (4.0, "does not close")])
def test_verdicts(away, verdict):
    u = np.sqrt(0.01 + 0.04 + 0.09 + 0.2**2)
    found = adjust(("NaCl",), network(SALTS[:1], measured((20 + away * u,), (0.2,)), formation(SET), NONE.iloc[:1]))
    assert found.cycles["verdict"].tolist() == [verdict]


def test_too_weak_to_test_anything():
    rows = [(r[0], r[1], r[2], 15.0 if r[0] == "NaCl" else r[3], r[4]) for r in SET]
    found = adjust(("NaCl",), network(SALTS[:1], measured((20.5,), (0.05,)), formation(rows), NONE.iloc[:1]))
    assert found.cycles["verdict"].tolist() == ["too weak"]
    assert found.cycles["smallest_detectable_error"][0] > 60
