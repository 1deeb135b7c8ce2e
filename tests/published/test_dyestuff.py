"""Variance components of a balanced one-way layout: the dyestuff yields.

O. L. Davies, P. L. Goldsmith, Statistical Methods in Research and Production, 4th ed. (1972), section 6.4: six
batches of five.
"""

import numpy as np
import pytest
from scipy import sparse

from reconcile.statistics import Ledger, Sources, least_squares
from reconcile.statistics.components import restricted_maximum

YIELD = [  # g of standard colour, batches A to F
    [1545, 1440, 1440, 1520, 1580],
    [1540, 1555, 1490, 1560, 1495],
    [1595, 1550, 1605, 1510, 1560],
    [1445, 1440, 1595, 1465, 1545],
    [1595, 1630, 1515, 1635, 1625],
    [1520, 1455, 1450, 1480, 1445],
]
BETWEEN, WITHIN = 1764.05, 2451.25  # restricted maximum likelihood: the mean squares 11271.5 and 2451.25
BETWEEN_ML = 1388.33  # what the unrestricted likelihood would say


def one_way(sizes):
    """The yields as a fit of one mean with one source a batch, for standard deviations between and within."""
    y = np.array(YIELD, float)
    batch = np.repeat(np.arange(len(y)), y.shape[1])
    loading = sparse.csr_array((np.full(y.size, sizes[0]), (np.arange(y.size), batch)))
    names = tuple(f"batch {letter}" for letter in "ABCDEF")
    sources = Sources(names, ("estimated",) * 6, ("between batches",) * 6)
    ledger = Ledger(y.ravel(), np.full((y.size, 1), sizes[1]), ("repeatability",), loading, sources)
    return least_squares(ledger, sparse.csr_array(np.ones((y.size, 1))))


def test_restricted_maximum():
    def likelihood(sizes):  # a repeatability of 0 leaves the yields without any variance
        return one_way(sizes).log_restricted_likelihood if sizes[1] > 0 else -np.inf

    found = restricted_maximum(likelihood, np.array([30.0, 30.0]))
    # the search stops at 0.01 of log L, that is 4 % of a standard deviation known from five degrees of freedom
    assert found[0] ** 2 == pytest.approx(BETWEEN, rel=0.06)
    assert found[1] ** 2 == pytest.approx(WITHIN, rel=0.03)
    assert abs(found[0] ** 2 - BETWEEN) < abs(found[0] ** 2 - BETWEEN_ML)


def test_the_published_components_are_the_maximum():
    "Sharper than a search: no slope there, to the digits printed."
    at = np.sqrt([BETWEEN, WITHIN])
    top = one_way(at).log_restricted_likelihood
    for i, half_a_digit in ((0, 0.005), (1, 0.005)):
        step = np.zeros(2)
        step[i] = 1e-3 * at[i]
        up, down = (one_way(at + s).log_restricted_likelihood for s in (step, -step))
        curvature = (up - 2 * top + down) / step[i] ** 2
        away = -(up - down) / (2 * step[i]) / curvature  # Newton's step to the maximum
        assert curvature < 0
        assert abs(away) * 2 * at[i] < 5 * half_a_digit


def test_mean_and_its_standard_error():
    "1527.5 with 19.383."
    fit = one_way(np.sqrt([BETWEEN, WITHIN]))
    assert fit.value[0] == pytest.approx(1527.5, abs=1e-9)
    assert np.sqrt(fit.variance(sparse.csr_array(np.ones((1, 1))))[0]) == pytest.approx(19.383, abs=0.0005)
    # balanced: χ² of the restricted maximum is the degrees of freedom
    assert fit.chi_square == pytest.approx(29, rel=1e-5)
