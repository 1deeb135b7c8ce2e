"""The Hess network: the laboratory's salts, their ions and crystals, and every reference value that bears on them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy import sparse

from reconcile.chemistry import Salt
from reconcile.statistics import Ledger, stack, stated

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

TAKEN_OVER = ("likely", "possible")  # marks of a crystal that was computed from the published solution enthalpy


@dataclass(frozen=True, slots=True, eq=False)
class Network:
    """Observations of one adjustment: first the laboratory's salts, then the reference values."""

    observed: Ledger  # kJ/mol, (n,)
    design: sparse.csr_array  # (n, unknowns)
    unknowns: tuple[str, ...]  # formation enthalpies: "NaCl(cr)", "Na+(aq)", "H2O(l)"
    references: (
        pd.DataFrame
    )  # quantity, species, value, u, source, year, status, reference_set: rows after the laboratory's
    circular: NDArray[np.bool_]  # (S,) the crystal's value rests on the published solution enthalpy
    reference_side: Floats  # (S,) what the references make of the salt's ΔsolH°, NaN where they do not reach
    u_reference_side: Floats  # (S,)


def network(salts: Sequence[Salt], measured: Ledger, formation: pd.DataFrame, published: pd.DataFrame) -> Network:
    """Lay out the formation cycles ΔsolH° = Σν ΔfH°(ion, aq) + h ΔfH°(H2O, l) − ΔfH°(crystal).

    A crystal whose tabulated value was computed from the published enthalpy of solution is no source of its own: the
    published enthalpy of solution stands as the observation in its place. Where a salt has an ion that the set does not
    hold, its unknown is the crystal against its ions: only a published enthalpy of solution can then be compared.

    Parameters
    ----------
    salts : sequence of S salts
        Those of the laboratory that have a standard enthalpy.
    measured : Ledger (S,)
    formation : DataFrame
        One whole set: species, identity, phase, value, u, circular, source, year, status.
    published : DataFrame (S rows)
        Enthalpies of solution at infinite dilution, NaN where none; `independent` marks those not computed from the
        set.

    Returns
    -------
    Network
    """
    ions = formation[formation["phase"] == "aq"].set_index("species")
    water = formation[(formation["phase"] == "l") & (formation["species"] == "H2O")].set_index("species")
    crystals = formation[formation["phase"] == "cr"].set_index("identity")
    crystals = crystals.reindex([s.identity for s in salts]).set_index(pd.Index([s.formula for s in salts]))
    reached = np.array(
        [all(ion in ions.index for ion, _ in s.ions) and (s.water == 0 or len(water) > 0) for s in salts], dtype=bool
    )
    independent = published["independent"].to_numpy(bool) & np.isfinite(published["value"].to_numpy(float))
    has_crystal = reached & np.isfinite(crystals["value"].to_numpy(float))
    circular = has_crystal & independent & crystals["circular"].isin(TAKEN_OVER).to_numpy()
    by_crystal = np.flatnonzero(has_crystal & ~circular)
    by_published = np.flatnonzero(independent)

    used_ions = list(
        dict.fromkeys(ion for s, ok in zip(salts, reached, strict=True) if ok for ion, _ in s.ions if ion != "H+")
    )
    with_water = any(s.water > 0 and ok for s, ok in zip(salts, reached, strict=True))
    names = [f"{s.formula}(cr)" for s in salts] + [f"{ion}(aq)" for ion in used_ions] + ["H2O(l)"] * with_water
    place = {name: i for i, name in enumerate(names)}

    dissolution = _dissolution_rows(salts, reached, place)
    rows = [dissolution]
    frames = []
    if by_crystal.size:
        rows.append(_single_rows(by_crystal, len(names)))
        frames.append(_described(crystals.iloc[by_crystal], "formation enthalpy, crystal"))
    if used_ions:
        rows.append(_single_rows(np.array([place[f"{ion}(aq)"] for ion in used_ions]), len(names)))
        frames.append(_described(ions.loc[used_ions], "formation enthalpy, aqueous ion"))
    if with_water:
        rows.append(_single_rows(np.array([place["H2O(l)"]]), len(names)))
        frames.append(_described(water, "formation enthalpy, water"))
    if by_published.size:
        rows.append(sparse.csr_array(dissolution[by_published]))
        frames.append(_described(published.iloc[by_published], "enthalpy of solution"))
    references = pd.concat(frames, ignore_index=True) if frames else _described(published.iloc[:0], "")
    values = stated(references["value"].to_numpy(float), references["u"].to_numpy(float), "reference values")

    side, u_side = _reference_side(salts, ions, water, crystals, published, reached, has_crystal, circular)
    return Network(
        stack([measured, values]),
        sparse.csr_array(sparse.vstack(rows, format="csr")),
        tuple(names),
        references,
        circular,
        side,
        u_side,
    )


def _dissolution_rows(salts: Sequence[Salt], reached: NDArray[np.bool_], place: dict[str, int]) -> sparse.csr_array:
    rows, columns, values = [], [], []
    for i, salt in enumerate(salts):  # salts, not runs
        terms = [(f"{salt.formula}(cr)", -1.0)]
        if reached[i]:
            terms += [(f"{ion}(aq)", nu) for ion, nu in salt.ions if ion != "H+"]
            terms += [("H2O(l)", salt.water)] * (salt.water > 0)
        for name, factor in terms:
            rows.append(i)
            columns.append(place[name])
            values.append(factor)
    return sparse.csr_array((values, (rows, columns)), shape=(len(salts), len(place)))


def _single_rows(columns: Integers, unknowns: int) -> sparse.csr_array:
    return sparse.csr_array((np.ones(len(columns)), (np.arange(len(columns)), columns)), shape=(len(columns), unknowns))


def _described(frame: pd.DataFrame, quantity: str) -> pd.DataFrame:
    columns = ["value", "u", "source", "year", "status", "reference_set"]
    out = frame.reindex(columns=columns).copy()
    out.insert(0, "species", list(frame.index))
    out.insert(0, "quantity", quantity)
    return out.reset_index(drop=True)


def _reference_side(
    salts: Sequence[Salt], ions: pd.DataFrame, water: pd.DataFrame, crystals: pd.DataFrame, published: pd.DataFrame,
    reached: NDArray[np.bool_], has_crystal: NDArray[np.bool_], circular: NDArray[np.bool_],
) -> tuple[Floats, Floats]:  # fmt: skip
    """ΔsolH° from the references alone, and its u (each reference value a source of its own)."""
    value = np.full(len(salts), np.nan)
    variance = np.full(len(salts), np.nan)
    ion_value, ion_u = ions["value"].to_dict(), ions["u"].to_dict()
    water_value = float(water["value"].iloc[0]) if len(water) else np.nan
    water_u = float(water["u"].iloc[0]) if len(water) else np.nan
    crystal_value, crystal_u = crystals["value"].to_numpy(float), crystals["u"].to_numpy(float)
    published_value, published_u = published["value"].to_numpy(float), published["u"].to_numpy(float)
    for i, salt in enumerate(salts):  # salts, not runs
        if circular[i]:
            value[i], variance[i] = published_value[i], published_u[i] ** 2
        elif reached[i] and has_crystal[i]:
            value[i] = sum(nu * ion_value[ion] for ion, nu in salt.ions) - crystal_value[i]
            variance[i] = sum((nu * ion_u[ion]) ** 2 for ion, nu in salt.ions if ion != "H+") + crystal_u[i] ** 2
            if salt.water > 0:
                value[i] += salt.water * water_value
                variance[i] += (salt.water * water_u) ** 2
    return value, np.sqrt(variance)
