"""The hypotheses: each says what it would do to the runs, per unit of its size."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.statistics import by_member

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Hypothesis:
    """A kind of systematic effect: one column of loadings for each subject that it may concern."""

    name: str  # a word of the results' list (design, 6)
    unit: str  # of its size
    within: str  # what makes it testable inside the runs themselves
    subjects: Callable[[Campaign], tuple[str, ...]]
    loadings: Callable[[Campaign, ReducedRuns], sparse.csr_array]  # (n, subjects), kJ/mol per unit of size
    size: Callable[[Floats], Floats]  # linear estimate ─► size as it is defined
    size_slope: Callable[[Floats], Floats]  # derivative of that, for u
    never_negative: bool = False  # a size below 0 is no explanation: the test is one-sided


def _same(x: Floats) -> Floats:
    return x


def _one(x: Floats) -> Floats:
    return np.ones_like(x)


def _calorimeters(campaign: Campaign) -> tuple[str, ...]:
    return campaign.calorimeters.keys["calorimeter"].labels


def _lots(campaign: Campaign) -> tuple[str, ...]:
    return campaign.samples.keys["sample"].labels


def _gain(campaign: Campaign, runs: ReducedRuns) -> sparse.csr_array:
    return by_member(runs.enthalpy.value, campaign.calorimeter, len(campaign.calorimeters))


def _lot_water(campaign: Campaign, runs: ReducedRuns) -> sparse.csr_array:
    return by_member(-runs.lot_water, campaign.sample, len(campaign.samples))


# In the order in which confounded hypotheses take the name (design, 6).
CATALOGUE: tuple[Hypothesis, ...] = (
    # measured = (1 + size) × true: the linear estimate is size/(1 + size), relative to what was measured
    Hypothesis("gain", "1", "calorimeters", _calorimeters, _gain, lambda x: x / (1 - x), lambda x: 1 / (1 - x) ** 2),
    # liquid water that was weighed as salt: the enthalpy comes out (1 − size) of the true
    Hypothesis("lot water", "1", "lots", _lots, _lot_water, lambda x: x / (1 + x), lambda x: 1 / (1 + x) ** 2, True),
)
LINEAR = (_same, _one)  # for sizes in kJ/mol: run, reference
