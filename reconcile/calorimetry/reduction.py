"""All runs of a campaign to molar enthalpies and molalities, each with its named error sources."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reconcile.calorimetry.molar import molality_over_all_water, molar_enthalpy
from reconcile.campaign import Campaign
from reconcile.chemistry import standard_atomic_weights
from reconcile.chemistry.water import MOLAR_MASS_OF_WATER
from reconcile.statistics import Collector, Ledger

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]

LINES = ("heat", "weighing of the salt", "weighing of the water", "enthalpy as given", "molality as given")


@dataclass(frozen=True, slots=True, eq=False)
class ReducedRuns:
    """What the calorimeters say, run by run, at each run's own temperature and molality."""

    enthalpy: Ledger  # kJ/mol, (n,)
    molality: Ledger  # mol/kg, of the final solution, (n,); the same private errors and sources as the enthalpies
    initial_molality: Floats  # mol/kg, of the solvent before the run, (n,); 0 for water
    u_initial_molality: Floats  # mol/kg, 0 where none is given
    initial_share: Floats  # n₁/(n₂ − n₁): moles of salt there before, a mole added; 1 for a heat of dilution
    dissolves: NDArray[np.bool_]  # (n,) False for a heat of dilution
    amount: Floats  # mol of salt dissolved, NaN where the row gave no mass
    temperature: Floats  # K
    u_temperature: Floats  # K, 0 where none is given
    unstated: NDArray[np.bool_]  # no uncertainty of heat or enthalpy is given: the scatter must tell it
    lot_water: Floats  # (n,) change of enthalpy per unit mass fraction of water in the lot, kJ/mol; 0 without masses


def reduce_runs(campaign: Campaign) -> ReducedRuns:
    """Reduce rows given as heat with masses, or as enthalpy with molality.

    Parameters
    ----------
    campaign : Campaign
        Checked; every run has either a heat with masses or an enthalpy with a molality.

    Returns
    -------
    ReducedRuns

    References
    ----------
    Sensitivities are the partial derivatives of `molar_enthalpy` and `molality_over_all_water` (GUM, 5.1).
    """
    runs, samples, calorimeters = campaign.runs, campaign.samples, campaign.calorimeters
    names = ("mass", "water", "molality", "temperature", "heat", "enthalpy", "initial_molality", "final_molality")
    q = {name: runs.quantities[name] for name in names}
    by_heat = np.isfinite(q["heat"].value)
    of_salt = campaign.salt
    molar_mass = np.array([s.molar_mass for s in campaign.salts])[of_salt]
    hydrate = np.array([s.water for s in campaign.salts])[of_salt]

    lot_water, u_lot_water = _of_lot(samples.quantities["water"].value, samples.quantities["water"].u, 0.0)
    purity_given = np.isfinite(samples.quantities["mass_fraction"].value)
    purity, u_purity = _of_lot(samples.quantities["mass_fraction"].value, samples.quantities["mass_fraction"].u, np.nan)
    purity = np.where(purity_given, purity, 1 - lot_water)
    parasitic, u_parasitic = _of_lot(
        calorimeters.quantities["parasitic_heat"].value, calorimeters.quantities["parasitic_heat"].u, 0.0
    )
    w = _per_run(purity, campaign.sample, 1.0)
    x = _per_run(lot_water, campaign.sample, 0.0)
    stray = _per_run(parasitic, campaign.calorimeter, 0.0)

    weighed = np.isfinite(q["mass"].value) & np.isfinite(q["water"].value)  # a molality beside masses is only a check
    mass = np.where(weighed, q["mass"].value, 1.0)
    water = np.where(weighed, q["water"].value, 1.0)
    heat = np.where(by_heat, q["heat"].value - stray, 0.0)
    amount = np.where(weighed, mass * w / molar_mass, np.nan)
    enthalpy = np.where(by_heat, molar_enthalpy(heat, mass, molar_mass, w), q["enthalpy"].value)
    initial = np.where(np.isfinite(q["initial_molality"].value), q["initial_molality"].value, 0.0)
    dissolves = ~np.isfinite(q["final_molality"].value)
    added = molality_over_all_water(mass, water, molar_mass, w, hydrate, x)
    solvent = water + mass * (w * hydrate * MOLAR_MASS_OF_WATER / molar_mass + x)
    by_mass = added + initial * water / solvent  # the salt that was there is in the water as weighed
    typed = np.where(dissolves, q["molality"].value, q["final_molality"].value)
    molality = np.where(weighed, by_mass, typed)
    share = _initial_share(initial, molality, np.where(weighed, added * solvent / water, np.nan), hydrate, dissolves)

    # sensitivities; an enthalpy already reduced has none to the weighings
    h, k = by_heat / 1.0, weighed / 1.0
    per_joule = h * molar_mass / (mass * w) / 1000  # kJ/mol a joule
    bound = mass * w * hydrate * MOLAR_MASS_OF_WATER / molar_mass  # g, water of hydration
    molality_per_mass = k * (added * solvent - molality * (solvent - water)) / (mass * solvent)
    molality_per_water = k * (initial - molality) / solvent
    molality_per_purity = k * (added * solvent - molality * bound) / (w * solvent)
    molality_per_lot_water = -k * molality * mass / solvent
    linked = ~_per_run(purity_given, campaign.sample, True).astype(bool)  # mass fraction = 1 − water there
    enthalpy_per_lot_water = np.where(linked, h * enthalpy / w, 0.0)
    molality_per_lot_water = molality_per_lot_water - np.where(linked, molality_per_purity, 0.0)

    zero = np.zeros(len(runs))
    private_enthalpy = np.column_stack(
        [
            per_joule * _known(q["heat"].u),
            -h * enthalpy / mass * _known(q["mass"].u),
            zero,
            np.where(by_heat, 0.0, _known(q["enthalpy"].u)),
            zero,
        ]
    )
    private_molality = np.column_stack(
        [
            zero,
            molality_per_mass * _known(q["mass"].u),
            molality_per_water * _known(q["water"].u),
            zero,
            np.where(weighed, 0.0, np.where(dissolves, _known(q["molality"].u), _known(q["final_molality"].u))),
        ]
    )

    sample_names = samples.keys["sample"].labels
    calorimeter_names = calorimeters.keys["calorimeter"].labels
    shared = Collector(len(runs), ledgers=2)
    shared.group(
        campaign.sample, u_purity, [f"lot {s}: mass fraction" for s in sample_names], "composition of the lot",
        -h * enthalpy / w, molality_per_purity,
    )  # fmt: skip
    shared.group(
        campaign.sample, u_lot_water, [f"lot {s}: water" for s in sample_names], "composition of the lot",
        enthalpy_per_lot_water, molality_per_lot_water,
    )  # fmt: skip
    shared.group(
        campaign.calorimeter, u_parasitic, [f"calorimeter {c}: parasitic heat" for c in calorimeter_names],
        "parasitic heat", -per_joule, zero,
    )  # fmt: skip
    _atomic_weights(shared, campaign, h * enthalpy / molar_mass, -molality_per_purity * w / molar_mass)
    sources, (loading_enthalpy, loading_molality) = shared.finish()
    temperature = q["temperature"]
    return ReducedRuns(
        enthalpy=Ledger(enthalpy, private_enthalpy, LINES, loading_enthalpy, sources),
        molality=Ledger(molality, private_molality, LINES, loading_molality, sources),
        initial_molality=initial,
        u_initial_molality=_known(q["initial_molality"].u),
        initial_share=share,
        dissolves=dissolves,
        amount=amount,
        temperature=temperature.value,
        u_temperature=_known(temperature.u),
        unstated=~(np.where(by_heat, q["heat"].u, q["enthalpy"].u) > 0),  # a 0 is no statement: nothing is exact
        lot_water=np.where(by_heat, enthalpy / w, 0.0),
    )


def _initial_share(initial: Floats, final: Floats, added: Floats, hydrate: Floats, dissolves: Booleans) -> Floats:
    """n₁/(n₂ − n₁): with `added` moles a kilogram of the first water where known, else from both molalities.

    A hydrate brings its water along: per kilogram of the first water, (m₁ + a)/(1 + a h M_w) = m₂.
    """
    from_both = (final - initial) / (1 - final * hydrate * MOLAR_MASS_OF_WATER / 1000)
    added = np.where(np.isfinite(added), added, from_both)
    return np.where(dissolves, initial / np.where(added > 0, added, np.inf), 1.0)


def _atomic_weights(shared: Collector, campaign: Campaign, enthalpy: Floats, molality: Floats) -> None:
    """One source an element: M = Σ a A_r, so that ΔH/M and −m/M go with a·u(A_r)."""
    if not (enthalpy.any() or molality.any()):
        return
    weights = standard_atomic_weights()
    elements = sorted({element for salt in campaign.salts for element, _ in salt.elements})
    atoms = {e: np.array([dict(s.elements).get(e, 0.0) for s in campaign.salts]) for e in elements}
    for element in elements:
        u = weights[element][1]
        of_run = atoms[element][campaign.salt]
        code = np.where((of_run > 0) & ((enthalpy != 0) | (molality != 0)), 0, -1)
        shared.group(
            code, np.array([u]), [f"atomic weight of {element}"], "atomic weights", enthalpy * of_run, molality * of_run
        )


def _known(u: Floats) -> Floats:
    """u with 0 where none is stated."""
    return np.where(np.isfinite(u), u, 0.0)


def _of_lot(value: Floats, u: Floats, default: float) -> tuple[Floats, Floats]:
    return np.where(np.isfinite(value), value, default), _known(u)


def _per_run(of_member: NDArray[np.generic], code: Integers, default: float) -> Floats:
    """A lot's or calorimeter's figure for each run; the default where the run names none."""
    if not len(of_member):
        return np.full(len(code), float(default))
    return np.where(code >= 0, of_member[code].astype(float), default)
