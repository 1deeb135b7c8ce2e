"""Lattice energies from sizes: arrays, signs, bad arguments."""

import numpy as np
import pytest

from reconcile.chemistry import IONS
from reconcile.chemistry.lattice import (
    LINEAR,
    enthalpy_less_energy,
    kapustinskii_energy,
    motion_terms,
    volume_energy,
)


def test_many_salts_at_once():
    distance = np.array([0.283, 0.333, np.nan])
    energy = kapustinskii_energy([2, 3, 2], [-1, -2, 1], distance)
    assert energy.shape == (3,)
    assert energy[1] == pytest.approx(float(kapustinskii_energy(3, 2, 0.333)))
    assert np.isnan(energy[2])
    volumes = volume_energy([2, 6, 2], [0.045, 0.084, np.nan], [117.3, 133.5, 117.3], [51.9, 60.9, 51.9])
    assert (volumes[:2] > 0).all()
    assert np.isnan(volumes[2])


@pytest.mark.parametrize("distance", [0.0, -0.2, 0.0345])
def test_a_distance_that_cannot_be(distance):
    with pytest.raises(ValueError, match="distance at position 1"):
        kapustinskii_energy(2, 1, [0.283, distance])


def test_a_volume_that_cannot_be():
    with pytest.raises(ValueError, match="volume at position 0"):
        volume_energy(2, 0.0, 117.3, 51.9)


def test_above_its_range_the_volume_equation_says_nothing():
    "5000 kJ/mol: Glasser, Jenkins 2000, from memory."
    assert np.isnan(volume_energy(12, 0.04, 138.7, 27.6))


def test_motion_of_ions():
    "Three squared terms of translation, none, two or three of rotation: cp of an ideal gas is (c/2 + 1) R."
    assert {motion_terms(IONS[name]) for name in ("K+", "Cl-", "La+3")} == {3}
    assert {motion_terms(IONS[name]) for name in ("CN-", "N3-", "SCN-")} == {5}
    assert {motion_terms(IONS[name]) for name in ("NH4+", "NO3-", "NO2-", "SO4-2")} == {6}
    assert set(IONS) >= LINEAR


@pytest.mark.parametrize(
    ("counts", "terms", "in_rt"),
    # Jenkins et al. 1999: ΔH − U = [p(n_M/2 − 2) + q(n_X/2 − 2)] RT, by hand
    [([1, 1], [3, 3], -1), ([1, 2], [3, 3], -1.5), ([1, 1], [3, 5], 0), ([2, 1], [3, 6], 0), ([1, 1], [3, 6], 0.5)],
)
def test_energy_to_enthalpy(counts, terms, in_rt):
    assert enthalpy_less_energy(counts, terms) == pytest.approx(in_rt * 8.314462618e-3 * 298.15)
    assert enthalpy_less_energy(counts, terms, 350.0) == pytest.approx(in_rt * 8.314462618e-3 * 350)
