"""Lattice potential energies from radii and volumes held against the tabulated ones, by class of salt."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from functools import lru_cache

import numpy as np
import pandas as pd

from reconcile.chemistry import IONS, Salt, read_salt
from reconcile.chemistry.lattice import enthalpy_less_energy, kapustinskii_energy, motion_terms, volume_energy
from reconcile.reference.identities import STATUS_ORDER, identity
from reconcile.reference.tables import rows

METHODS = ("formula volume", "ion volumes", "Kapustinskii")
FEWEST = 5  # salts in a class of their own
ALL = "all salts"
ROBUST = 1.4826  # median absolute deviation to standard deviation of a normal distribution
_STOICHIOMETRY = {"1-1": "MX", "2-2": "MX", "2-1": "MX2", "1-2": "M2X"}
# Cations of groups 1 to 3 with the lanthanoids, Th, Zr, Hf, and those of several atoms: bonds that the equations mean.
# The others (Be, Al, Ag, Tl, Pb, the transition metals) bind more firmly than their charge and size say.
_ALKALI_AND_EARTH = ("Li", "Na", "K", "Rb", "Cs", "Mg", "Ca", "Sr", "Ba", "Ra")
_LANTHANOIDS = ("La", "Ce", "Pr", "Nd", "Sm", "Eu", "Gd", "Tb", "Dy", "Ho", "Er", "Tm", "Yb", "Lu")
_HARD = frozenset((*_ALKALI_AND_EARTH, "Sc", "Y", *_LANTHANOIDS, "Th", "Zr", "Hf"))


def lattice_class(salt: Salt) -> str:
    """Class that the spread is given for: charges, kind of cation, kind of anion.

    Examples
    --------
    >>> [lattice_class(read_salt(text)) for text in ("KBr", "AgNO3")]
    ['1-1, hard cation, monatomic anion', '1-1, other cation, polyatomic anion']
    """
    cation, anion = (IONS[name] for name, _ in (salt.ions[0], salt.ions[-1]))
    hard = not cation.monatomic or cation.body in _HARD
    kinds = f"{'hard' if hard else 'other'} cation, {'mon' if anion.monatomic else 'poly'}atomic anion"
    return f"{salt.charge_type}, {kinds}"


def lattice_energies(salts: Sequence[Salt]) -> pd.DataFrame:
    """Lattice potential energy of each salt by each method; nothing is corrected.

    Parameters
    ----------
    salts : sequence of Salt (n,)
        Hydrates and salts of more than two ions have none.

    Returns
    -------
    frame : DataFrame (n rows)
        Index: Salt.formula. formula volume, ion volumes, Kapustinskii: U_pot / (kJ/mol), NaN where a volume or radius
        is missing or the equation does not reach; less_enthalpy: U_pot less the lattice enthalpy / (kJ/mol);
        class. Radii: Shannon's (high spin) for ions of one atom, the thermochemical ones of 1999 for others.
    """
    plain = np.array([len(salt.ions) == 2 and salt.water == 0 for salt in salts], dtype=bool)
    pairs = [salt.ions if usable else (("", np.nan), ("", np.nan)) for salt, usable in zip(salts, plain, strict=True)]
    charges = np.array([salt.charges[:2] for salt in salts], dtype=float).reshape(-1, 2)
    counts = np.array([[number for _, number in pair] for pair in pairs], dtype=float).reshape(-1, 2)
    charge_sum = (counts * charges**2).sum(axis=1)
    radius, volume, unit_volume = _radii(), _volumes("ion"), _volumes("formula unit")
    sizes = np.array([[radius.get(name, np.nan) for name, _ in pair] for pair in pairs]).reshape(-1, 2)
    volumes = np.array([[volume.get(name, np.nan) for name, _ in pair] for pair in pairs]).reshape(-1, 2)
    units = np.array([unit_volume.get(salt.identity, np.nan) for salt in salts], dtype=float)
    terms = np.array([[motion_terms(IONS[name]) if name else 6 for name, _ in pair] for pair in pairs]).reshape(-1, 2)
    constants = {row["salt_type"]: row for row in rows("lattice_constants")}
    kinds = [constants[_STOICHIOMETRY.get(salt.charge_type, "any")] for salt in salts]
    alpha = np.array([row["alpha / (kJ nm/mol)"] for row in kinds], dtype=float)
    beta = np.array([row["beta / (kJ/mol)"] for row in kinds], dtype=float)
    constant = constants["Kapustinskii"]["alpha / (kJ nm/mol)"]
    return pd.DataFrame(
        {
            "formula volume": volume_energy(charge_sum, units, alpha, beta),
            "ion volumes": volume_energy(charge_sum, (counts * volumes).sum(axis=1), alpha, beta),
            "Kapustinskii": kapustinskii_energy(counts.sum(axis=1), charges.prod(axis=1), sizes.sum(axis=1), constant),
            "less_enthalpy": -enthalpy_less_energy(counts, terms),
            "class": [lattice_class(salt) for salt in salts],
        },
        index=pd.Index([salt.formula for salt in salts], dtype=object),
    )


def _radii() -> dict[str, float]:
    """nm, by ion."""
    held = {}
    for row in rows("ionic_radius"):
        crystal = row["reference_set"] == "Shannon-VI" and row["spin"] != "low"
        if crystal or (row["reference_set"] == "thermochemical-1999" and not IONS[row["ion"]].monatomic):
            held[row["ion"]] = row["radius / nm"]
    return held


def _volumes(kind: str) -> dict[str, float]:
    """nm³, by identity of the salt or by ion; a read value before a recalled one."""
    held: dict[str, float] = {}
    for row in sorted(rows("formula_volume"), key=lambda row: STATUS_ORDER[row["status"]]):
        if row["kind"] == kind:
            held.setdefault(identity(row["species"]), row["volume / nm^3"])
    return held


def lattice_comparison() -> pd.DataFrame:
    """Each method against the lattice enthalpies of the Born–Haber cycle, a row a salt and method.

    Returns
    -------
    frame : DataFrame
        salt, class, method, tabulated and computed U_pot / (kJ/mol), deviation = computed/tabulated − 1. Tabulated are
        Σν ΔfH°(gaseous ion) − ΔfH°(crystal), taken to U_pot; one row a salt, of the set NBS-1982 where both sets
        have it. The radii of 1999 came from such lattices themselves: for them this is no independent test.
    """
    held: dict[str, tuple[Salt, float]] = {}
    for row in sorted(rows("lattice_enthalpy"), key=lambda row: row["reference_set"] != "NBS-1982"):
        if row["status"] == "derived" and row["quantity"] == "lattice enthalpy":
            salt = read_salt(row["salt"])
            held.setdefault(salt.identity, (salt, row["lattice_enthalpy / (kJ/mol)"]))
    frame = lattice_energies([salt for salt, _ in held.values()])
    frame["tabulated"] = np.array([enthalpy for _, enthalpy in held.values()]) + frame["less_enthalpy"]
    long = frame.reset_index(names="salt").melt(
        ["salt", "class", "tabulated"], list(METHODS), var_name="method", value_name="computed"
    )
    long = long.dropna().reset_index(drop=True)
    long["deviation"] = long["computed"] / long["tabulated"] - 1
    return long


@lru_cache(maxsize=1)
def _spread() -> pd.DataFrame:
    return pd.DataFrame(_spreads(lattice_comparison())).set_index(["method", "class"])


def _spreads(comparison: pd.DataFrame) -> Iterator[dict[str, object]]:
    for method in METHODS:
        of_method = comparison[comparison["method"].eq(method)]
        offsets: list[float] = []
        for name, group in [*of_method.groupby("class"), (ALL, of_method)]:
            if len(group) < FEWEST:
                continue
            deviation = group["deviation"].to_numpy()
            offset = np.median(deviation)
            away = np.abs(deviation - offset)
            spread = ROBUST * np.median(away)
            if name == ALL:  # for a class of which nothing is known: its offset is a draw from those of the others
                spread = np.hypot(spread, np.std(offsets, ddof=1))
            else:
                offsets.append(offset)
            yield {
                "method": method,
                "class": name,
                "salts": len(group),
                "offset": float(offset),
                "spread": float(spread),
                "largest": float(away.max()),
                "farthest": str(group["salt"].iloc[int(away.argmax())]),
            }


def lattice_spread() -> pd.DataFrame:
    """How far computed lattice potential energies lie from tabulated ones, by method and class of salt.

    Returns
    -------
    frame : DataFrame
        Index: method, class ("all salts" for classes of fewer than five). salts (how many); offset: median of
        computed/tabulated − 1; spread: robust standard deviation about it, 1.4826 × the median absolute deviation (for
        all salts with the scatter of the classes' offsets in quadrature), to be used as the relative standard
        uncertainty of a value divided by 1 + offset; largest and farthest: the salt farthest from the offset.

    Examples
    --------
    >>> spread = lattice_spread()
    >>> bool(spread.loc[("Kapustinskii", "1-1, hard cation, monatomic anion"), "spread"] < 0.02)
    True
    """
    return _spread().copy()
