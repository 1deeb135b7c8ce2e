"""A levelling network with redundancy: heights, redundancy, normalised residuals, smallest detectable error.

Example of one-dimensional adjustment distributed with a free geodetic adjustment program: 1a fixed at 1000 m, eight
height differences of u = 5 mm. Printed: heights, 5 degrees of freedom, Σpvv·σ² = 146.625 mm², largest normalised
residual 1.68 (the sixth). Redundancy, its sign and the smallest detectable error recomputed by hand from the same
network.
"""

import numpy as np
import pytest
from scipy import sparse

from reconcile.statistics import least_squares, stated

FIXED, U = 1000.0, 0.005  # m
OBSERVED = [  # from, to, height difference / m
    ("1a", "4", -1.225), ("4", "3", -0.848), ("3", "2", 1.342), ("2", "1a", 0.720),
    ("1a", "2", -0.724), ("2", "3", -1.335), ("3", "4", 0.842), ("4", "1a", 1.231),
]  # fmt: skip
HEIGHTS = {"4": 998.77513, "3": 997.93325, "2": 999.27487}  # m, printed
RESIDUALS = [0.125, 6.125, -0.375, 5.125, -1.125, -6.625, -0.125, -6.125]  # mm, adjusted less observed
BAARDA = 4.132  # δ₀ for level 0.001 and power 0.8


@pytest.fixture(scope="module")
def adjusted():
    places = list(HEIGHTS)
    design = np.zeros((len(OBSERVED), len(places)))
    value = np.zeros(len(OBSERVED))
    for row, (start, end, difference) in enumerate(OBSERVED):
        value[row] = difference
        for place, sign in ((start, -1.0), (end, 1.0)):
            if place == "1a":
                value[row] -= sign * FIXED
            else:
                design[row, places.index(place)] = sign
    return least_squares(stated(value, np.full(len(value), U), "levelling"), sparse.csr_array(design))


def test_heights(adjusted):
    np.testing.assert_allclose(adjusted.value, list(HEIGHTS.values()), atol=6e-6)  # last digit printed; ties of 5


def test_standard_deviations(adjusted):
    u = 1000 * np.sqrt(adjusted.variance(sparse.eye_array(3, format="csr")))
    np.testing.assert_allclose(u, [3.1, 3.5, 3.1], atol=0.05)


def test_residuals_and_chi_square(adjusted):
    np.testing.assert_allclose(-1000 * adjusted.residual, RESIDUALS, atol=0.001)
    assert adjusted.degrees_of_freedom == 5
    assert adjusted.chi_square == pytest.approx(146.625 / 25, abs=0.0005)  # 5.865
    assert 1000 * U * np.sqrt(adjusted.chi_square / 5) == pytest.approx(5.42, abs=0.005)  # posterior, mm


def test_redundancy_and_the_suspect(adjusted):
    redundancy = adjusted.redundancy()
    np.testing.assert_allclose(redundancy, 0.625, atol=1e-9)
    score, information = adjusted.single_observations()
    w = -score / np.sqrt(information)
    assert int(np.argmax(np.abs(w))) == 5
    assert w[5] == pytest.approx(-1.676, abs=0.0005)
    np.testing.assert_allclose(1000 * BAARDA / np.sqrt(information), 26.13, atol=0.005)  # mm, each
