"""Published enthalpies of solution as if a laboratory had measured them, through the cycles of the NBS tables.

Values: `reference.solution_enthalpies` (mostly Parker, NSRDS-NBS 2, 1965; each with its source there), those not
computed from the formation enthalpies themselves. Formation enthalpies: Wagman et al., J. Phys. Chem. Ref. Data 11,
Suppl. 2 (1982), whole.
"""

import numpy as np
import pytest

from reconcile import reference
from reconcile.chemistry import FormulaError, read_salt
from reconcile.cycles import adjust, network
from reconcile.statistics import stated

U = 0.1  # kJ/mol, of every "measured" value


def is_a_salt(formula):
    try:
        return bool(read_salt(formula))
    except FormulaError:  # urea, sucrose
        return False


@pytest.fixture(scope="module")
def told():
    """Salts with an independent published value and a crystal in the set; measured = published."""
    rows = reference.table("solution_enthalpy")
    rows = rows[rows["origin"].eq("measurement") & rows["phase"].eq("cr")]
    formulas = [f for f in dict.fromkeys(rows["salt"]) if is_a_salt(f)]
    published = reference.solution_enthalpies(formulas)
    formation = reference.formation_enthalpies("NBS-1982")
    crystals = set(formation.loc[formation["phase"].eq("cr"), "identity"])
    ions = set(formation.loc[formation["phase"].eq("aq"), "species"])
    salts = [read_salt(f) for f in formulas]
    kept = [
        i
        for i, s in enumerate(salts)
        if s.identity in crystals
        and all(ion in ions for ion, _ in s.ions)
        and bool(published["independent"].iloc[i])
        and np.isfinite(published["value"].iloc[i])
    ]
    return [salts[i] for i in kept], published.iloc[kept], formation


def through_the_cycles(salts, published, formation, measured):
    net = network(salts, stated(measured, np.full(len(salts), U), "measured"), formation, published)
    return net, adjust(tuple(s.formula for s in salts), net)


def test_at_least_forty(told):
    salts, published, _ = told
    assert len(salts) >= 40
    assert (published["source"].str.len() > 0).all()
    assert len({s.charge_type for s in salts}) >= 1


def test_circular_cycles_close_by_construction_and_are_counted_once(told):
    salts, published, formation = told
    net, found = through_the_cycles(salts, published, formation, published["value"].to_numpy(float))
    circular = found.cycles.set_index("salt")["circular"]
    assert circular.sum() >= 30
    closed = found.cycles.set_index("salt").loc[circular[circular].index]
    np.testing.assert_allclose(closed["misclosure"], 0, atol=1e-9)  # measured is the published value itself
    assert not closed["identity"].any()
    # a circular crystal is no observation of its own: its published solution enthalpy stands in its place
    crystals = set(net.references.loc[net.references["quantity"].eq("formation enthalpy, crystal"), "species"])
    assert not crystals & set(circular[circular].index)
    # degrees of freedom: one for each salt against its published value, one for each crystal that is independent
    assert found.degrees_of_freedom == len(salts) + int((~circular).sum())


def test_independent_cycles_carry_the_chi_square(told):
    "With measured = published, all of χ² is the misfit of independent crystals; none comes from circular ones."
    salts, published, formation = told
    value = published["value"].to_numpy(float)
    net, found = through_the_cycles(salts, published, formation, value)
    independent = np.flatnonzero(~net.circular)
    some = [salts[i] for i in independent]
    _, alone = through_the_cycles(some, published.iloc[independent], formation, value[independent])
    assert found.chi_square == pytest.approx(alone.chi_square, rel=0.02)
    # three crystals do not close, all three recalled or open (test_formation_cycles.py); without them nothing is amiss
    bad = found.cycles.loc[found.cycles["verdict"].eq("does not close"), "salt"].tolist()
    assert set(bad) == {"KOH·H2O", "RbOH", "RbI"}
    rest = np.array([i for i, s in enumerate(salts) if s.formula not in bad])
    _, clean = through_the_cycles([salts[i] for i in rest], published.iloc[rest], formation, value[rest])
    assert found.p_value < 1e-6
    assert clean.p_value > 0.05


def test_a_wrong_measurement_shows_in_its_own_row(told):
    salts, published, formation = told
    value = published["value"].to_numpy(float)
    _, before = through_the_cycles(salts, published, formation, value)
    sharp = np.flatnonzero(published["u"].to_numpy(float) <= 0.1)
    at = int(sharp[len(sharp) // 2])
    spoilt = value.copy()
    spoilt[at] += 1.5
    _, after = through_the_cycles(salts, published, formation, spoilt)
    change = after.chi_square - before.chi_square
    # alone against the published value it would be 1.5²/(0.1² + u²); an independent crystal can only add to that
    assert change > 0.9 * 1.5**2 / (U**2 + published["u"].iloc[at] ** 2)
    row = after.reconciled.loc[after.reconciled["salt"].eq(salts[at].formula)].iloc[0]
    assert abs(row["standardised_change"]) > 4
    assert row["change"] < 0
    assert after.cycles.set_index("salt").loc[salts[at].formula, "verdict"] != "closes"
