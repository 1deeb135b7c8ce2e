"""What is known of an electrolyte's parameters before its runs: a published set, else the population of sets."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from reconcile.chemistry import read_salt
from reconcile.dilution.electrolytes import Electrolytes
from reconcile.dilution.models import composition, decay, empirical_terms, limiting_law, scale_of_parameters
from reconcile.dilution.population import Population, populations

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Booleans = NDArray[np.bool_]

SCALES = np.array([1.0, 6.0, 40.0])  # of the prior covariance: a mixture with heavy tails (design, 5.3)
POPULATION_WEIGHTS = np.array([0.60, 0.25, 0.15])
PUBLISHED_WEIGHTS = np.array([0.85, 0.10, 0.05])  # a published set may be wrong: common practice, no source
U_PUBLISHED = 0.1  # kJ/mol in L_φ at 1 mol/kg per unit of ½Σνz² where a set states nothing (design, 5.3)
U_LEAST = 0.02  # and at least this where it does: the tables behind a fit are no better (our judgement)


@dataclass(frozen=True, slots=True, eq=False)
class PublishedSets:
    """Published parameters, scaled, and the populations that they make."""

    electrolyte: tuple[str, ...]
    scaled: Floats  # (n, 4), NaN where a set does not determine a parameter
    variance: Floats  # (n, 4), of the scaled parameters
    population: dict[str, Population]


@dataclass(frozen=True, slots=True, eq=False)
class Prior:
    """Prior of each electrolyte's four scaled parameters: a mixture of normals of one mean and covariances × SCALES."""

    mean: Floats  # (B, 4)
    covariance: Floats  # (B, 4, 4)
    weights: Floats  # (B, 3)
    published: Booleans  # (B,)
    group: Integers  # (B,) whose population's mean it leans on, −1 for a published set
    group_names: tuple[str, ...]
    group_root: Floats  # (G, 4, 3): root of the covariance of that mean, a source that all members share

    @property
    def precision(self) -> Floats:
        """Inverse covariance of the first component, (B, 4, 4)."""
        return np.asarray(np.linalg.inv(self.covariance))


def published_sets(frame: pd.DataFrame, slope: float, leave_out: frozenset[str] = frozenset()) -> PublishedSets:
    """Scale the published sets and find their populations.

    Parameters
    ----------
    frame : DataFrame
        As `reference.dilution_parameters()` gives it.
    slope : float
        The A_H, kJ kg^½ mol^−3/2, that this program uses at 298.15 K. A set fitted with another slope is moved by
        what best makes up for the difference between 0.02 mol/kg and the end of its range.
    leave_out : set of str
        Electrolytes kept out of the populations, for trials.
    """
    salts = [read_salt(name) for name in frame.index]
    what = composition([s.ions for s in salts], [s.charges for s in salts])
    raw = frame[["beta0", "beta1", "c_phi", "beta2"]].to_numpy(float, copy=True)
    raw[~frame["c_phi_determined"].to_numpy(bool), 2] = np.nan
    raw[np.isnan(what.alpha2) | (what.alpha2 == 0), 3] = np.nan
    scaled = raw * scale_of_parameters(what)
    for i, fitted_with in enumerate(frame["slope"].to_numpy(float)):
        if np.isfinite(fitted_with) and abs(fitted_with - slope) > 1e-6:
            top = frame["max_molality"].iloc[i]
            molality = np.geomspace(0.02, top if np.isfinite(top) else 1.0, 40)
            one = what.of(np.full(40, i))
            basis = empirical_terms(molality, np.full(40, 298.15), one)[:, :3]
            moved = limiting_law(molality, one.charge_factor, fitted_with - slope)
            scaled[i, :3] += np.linalg.lstsq(basis, moved, rcond=None)[0]
    stated = frame["u_relative_enthalpy"].to_numpy(float)
    u = np.where(np.isfinite(stated), np.maximum(stated / what.charge_factor, U_LEAST), U_PUBLISHED)
    first = decay(what.alpha1 * np.sqrt(what.charge_factor))
    variance = np.column_stack([u**2, (u / first) ** 2, (0.3 * u / what.charge_factor) ** 2, (u / 0.05) ** 2])
    kept = np.array([name not in leave_out for name in frame.index])
    types = np.array([s.charge_type for s in salts])
    return PublishedSets(tuple(frame.index), scaled, variance, populations(scaled[kept], types[kept]))


def prior_of(electrolytes: Electrolytes, sets: PublishedSets, use_published: Booleans) -> Prior:
    """Prior of every electrolyte.

    Parameters
    ----------
    electrolytes : Electrolytes of B blocks
    sets : PublishedSets
    use_published : array (B,) of bool
        Whether the electrolyte's own published set may be used.
    """
    place = {name: i for i, name in enumerate(sets.electrolyte)}
    row = np.array([place.get(name, -1) for name in electrolytes.name], dtype=np.int64)
    published = use_published & (row >= 0)
    kinds = [kind if kind in sets.population else "other" for kind in electrolytes.charge_type]
    names = tuple(dict.fromkeys(kinds))
    group = np.array([names.index(kind) for kind in kinds], dtype=np.int64)
    mean = np.array([sets.population[k].mean for k in names]).reshape(-1, 4)[group]
    covariance = np.array([sets.population[k].scatter for k in names]).reshape(-1, 4, 4)[group]
    roots = np.array([_root(sets.population[k].mean_covariance) for k in names]).reshape(-1, 4, 3)

    unknown = np.full((1, 4), np.nan)  # row −1: an electrolyte that has no set
    scaled = np.vstack([sets.scaled, unknown])[row]
    variance = np.vstack([sets.variance, unknown])[row]
    known = published[:, None] & np.isfinite(scaled)
    mean = np.where(known, scaled, mean)
    own = np.zeros((len(row), 4, 4))
    own[:, range(4), range(4)] = np.where(known, variance, covariance[:, range(4), range(4)])
    covariance = np.where(published[:, None, None], own, covariance)
    weights = np.where(published[:, None], PUBLISHED_WEIGHTS, POPULATION_WEIGHTS)
    used = np.where(published, -1, group)
    return Prior(mean, covariance, weights, published, used, names, roots)


def _root(covariance: Floats) -> Floats:
    size, direction = np.linalg.eigh(covariance[:3, :3])
    out = np.zeros((4, 3))
    out[:3] = direction * np.sqrt(np.clip(size, 0, None))
    return out
