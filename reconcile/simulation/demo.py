"""The demo: an invented season with four planted faults, and what is true in it."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from reconcile import reference
from reconcile.chemistry import read_salt, water
from reconcile.dilution import electrolytes, published_sets
from reconcile.simulation.truth import Truth, heat_rows

SEED = 20_260_301
TITLE = "Demo season (invented data)"

# Salt, lots (name, calorimeters in turn), molalities aimed at / (mol/kg). All invented.
SALTS = ("KCl", "NaCl", "KBr", "NaNO3", "NH4Cl", "KNO3", "CaCl2", "CaCl2·6H2O", "MgCl2", "K2SO4")
LOTS = {
    "KCl-1": "KCl", "NaCl-1": "NaCl", "KBr-1": "KBr", "NaNO3-1": "NaNO3", "NH4Cl-1": "NH4Cl", "KNO3-1": "KNO3",
    "CaCl2-1": "CaCl2", "CaCl2-2": "CaCl2", "CaCl2.6H2O-1": "CaCl2·6H2O", "MgCl2-1": "MgCl2", "K2SO4-1": "K2SO4",
}  # fmt: skip
MOLALITIES = (0.02, 0.04, 0.07, 0.12, 0.2, 0.3, 0.45, 0.65)
PERIODS = ("A", "B-winter", "B-spring")  # one row a calorimeter in one calibration period
MONTHS = ("2026-01", "2026-02", "2026-03")

# What is planted.
GAIN = {"B-spring": -0.012}  # reads 1.2 % too small a heat since its last calibration
LOT_WATER = {"CaCl2-2": 0.03}  # 3 % liquid water that nobody stated
SPOILT = ("NaNO3-1", 11, 0.07)  # lot, which of its runs, fraction of the heat lost
SLIP = ("KBr", 18.97)  # published 19.87 typed with two digits exchanged, in the lab's own reference line

CAMPAIGN = f"""# Invented data. The chemistry is real, the laboratory and its numbers are not.
[campaign]
title = "{TITLE}"
laboratory = "an invented laboratory"
reference_temperature = "298.15 K"
date = 2026-04-01

[uncertainty.runs]
"u(mass)" = "0.2 mg"
"u(water)" = "0.02 g"
"u(heat)" = "0.25 %"

[analysis]
between_batches = false

# A value of the lab's own collection, with the slip that the demo plants: 18.97 stands for 19.87.
[[reference]]
quantity = "enthalpy of solution"
species = "{SLIP[0]}"
value = "{SLIP[1]} kJ/mol"
u = "0.1 kJ/mol"
source = "invented card index of the demo laboratory"
"""


def demo_truth() -> Truth:
    """Truth of the demo: published values, taken as exact, and the planted faults."""
    published = reference.solution_enthalpies(SALTS)["value"].to_numpy(float)
    salts = [read_salt(s) for s in SALTS]
    what = electrolytes(salts)
    sets = published_sets(reference.dilution_parameters(), float(water.debye_hueckel_slope(298.15)))
    rows = []
    for name, kind in zip(what.name, what.charge_type, strict=True):
        own = sets.scaled[sets.electrolyte.index(name)] if name in sets.electrolyte else np.full(4, np.nan)
        rows.append(np.where(np.isfinite(own), own, sets.population[kind].mean))
    return Truth(SALTS, published, np.array(rows)[what.of_salt], 1.0, GAIN, LOT_WATER)


def demo() -> tuple[str, dict[str, pd.DataFrame]]:
    """The demo campaign as its laboratory would hand it in.

    Returns
    -------
    campaign_toml : str
    tables : dict
        "runs", "samples", "calorimeters". Invented data.
    """
    rng = np.random.default_rng(SEED)
    sample, calorimeter, molality, date = _plan(rng)
    truth = demo_truth()
    lot, which, part = SPOILT
    spoilt = np.flatnonzero(np.array(sample) == lot)[which]
    truth = Truth(
        truth.salts, truth.standard_enthalpy, truth.parameters, 1.0, truth.gain, truth.lot_water, {int(spoilt): part}
    )
    # a dissolution must not warm the vessel by more than some kelvin: less salt where the heat is large
    runs = heat_rows(truth, sample, LOTS, calorimeter, molality, np.full(len(sample), 100.0), 2e-4, 0.02, 0.0025, rng)
    runs.insert(0, "run", [f"D{i + 1:03d}" for i in range(len(runs))])
    runs.insert(3, "date", date)
    samples = pd.DataFrame(
        {"sample": list(LOTS), "salt": list(LOTS.values()), "u(mass_fraction)": 0.0005, "mass_fraction": 1.0}
    )
    samples = samples[["sample", "salt", "mass_fraction", "u(mass_fraction)"]]
    calorimeters = pd.DataFrame({"calorimeter": list(PERIODS), "calibrated_by": "electrical", "note": "invented"})
    return CAMPAIGN, {"runs": runs, "samples": samples, "calorimeters": calorimeters}


def _plan(rng: np.random.Generator) -> tuple[list[str], list[str], NDArray[np.float64], list[str]]:
    """Each lot at each molality in calorimeters A and B by turns, months spread over the season."""
    sample, calorimeter, molality, date = [], [], [], []
    for lot in LOTS:
        for m in MOLALITIES:
            for instrument in ("A", "B"):
                month = int(rng.integers(3))
                sample.append(lot)
                calorimeter.append("A" if instrument == "A" else ("B-spring" if month == 2 else "B-winter"))
                molality.append(m * float(np.exp(0.1 * rng.standard_normal())))
                date.append(f"{MONTHS[month]}-{int(rng.integers(1, 28)):02d}")
    return sample, calorimeter, np.array(molality), date
