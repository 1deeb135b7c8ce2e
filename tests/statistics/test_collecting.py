"""Sources collected from lots, calorimeters and elements."""

import numpy as np

from reconcile.statistics import Collector


def test_each_member_with_an_uncertainty_and_a_run_becomes_a_source():
    collected = Collector(4, ledgers=2)
    code = np.array([0, 1, -1, 0])
    sensitivity, other = np.array([1.0, 2.0, 3.0, 4.0]), np.array([10.0, 20.0, 30.0, 40.0])
    collected.group(code, np.array([0.1, 0.0, 0.5]), ["a", "b", "c"], "lots", sensitivity, other)
    sources, (first, second) = collected.finish()
    assert sources.name == ("a",)  # b has no uncertainty, c no run
    np.testing.assert_allclose(first.toarray()[:, 0], [0.1, 0, 0, 0.4])
    np.testing.assert_allclose(second.toarray()[:, 0], [1.0, 0, 0, 4.0])


def test_nothing_collected_has_no_column():
    sources, (only,) = Collector(3).finish()
    assert len(sources) == 0
    assert only.shape == (3, 0)
