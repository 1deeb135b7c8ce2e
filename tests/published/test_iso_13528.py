"""ζ and E_n reckoned by hand, with the limits of ISO 13528:2015, 9.6 and 9.7 (from memory)."""

import numpy as np
import pandas as pd
import pytest

from reconcile.comparison import compare, e_n_score, verdict_of_zeta, zeta_score

# value, u, assigned, u of it ─► ζ by hand; kJ/mol, triangles 3-4-5 and 5-12-13 so that no root is rounded
BY_HAND = [
    (17.6, 0.03, 17.5, 0.04, 2.0),
    (17.4, 0.03, 17.5, 0.04, -2.0),
    (-80.61, 0.05, -81.0, 0.12, 3.0),
    (3.88, 0.05, 3.88, 0.12, 0.0),
    (25.30, 0.08, 25.69, 0.06, -3.9),
]


@pytest.mark.parametrize(("value", "u", "assigned", "u_assigned", "zeta"), BY_HAND)
def test_zeta(value, u, assigned, u_assigned, zeta):
    arrays = [np.array([x]) for x in (value, u, assigned, u_assigned)]
    assert zeta_score(*arrays)[0] == pytest.approx(zeta, abs=1e-9)
    # expanded with k = 2 on both sides E_n is half of ζ
    assert e_n_score(arrays[0], 2 * arrays[1], arrays[2], 2 * arrays[3])[0] == pytest.approx(zeta / 2, abs=1e-9)


def test_a_covariance_narrows_the_difference():
    "u = 0.05 both, covariance 0.0016: √(0.0025 + 0.0025 − 0.0032) = 0.0424…; difference 0.1."
    found = zeta_score(np.array([17.6]), np.array([0.05]), np.array([17.5]), np.array([0.05]), 0.0016)
    assert found[0] == pytest.approx(0.1 / 0.0018**0.5)


@pytest.mark.parametrize(
    ("zeta", "word"),
    [
        (0.0, "satisfactory"), (2.0, "satisfactory"), (-2.0, "satisfactory"), (2.001, "questionable"),
        (-2.999, "questionable"), (3.0, "unsatisfactory"), (-50.0, "unsatisfactory"),
    ],
)  # fmt: skip
def test_limits(zeta, word):
    assert verdict_of_zeta(np.array([zeta]))[0] == word


def test_salts_without_a_published_value_are_left_out():
    published = pd.DataFrame(
        {"value": [17.5, np.nan], "u": [0.04, np.nan], "source": ["a", None], "status": ["read", None]}
    )
    found = compare(
        ("KCl", "KReO4"), np.array([17.59, 1.0]), np.array([0.03, 0.1]), np.array([0.06, 0.2]), published,
        np.array([False, False]),
    )  # fmt: skip
    assert found["salt"].tolist() == ["KCl"]
    assert found["zeta"][0] == pytest.approx(1.8)
    assert found["e_n"][0] == pytest.approx(0.09 / np.hypot(0.06, 0.08))  # published with k = 2
    assert found["verdict"][0] == "satisfactory"
