"""A value and its uncertainty are rounded together."""

import math
import re
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from reconcile.report.rounding import interval_at, probability, rounded, significant, value_and_u

finite = st.floats(min_value=-1e9, max_value=1e9, allow_nan=False)
positive = st.floats(min_value=1e-9, max_value=1e9, allow_nan=False)


@pytest.mark.parametrize(
    ("value", "u", "text"),
    [
        (17.584, 0.017, "17.584(17)"),
        (17.22, 0.0996, "17.22(10)"),  # 0.0996 is 0.10 with two digits
        (-36.94, 1.24, "-36.9(12)"),
        (166.83, 12.3, "167(12)"),
        (1234567.0, 12345.0, "1235000(12000)"),
        (0.0, 0.5, "0.00(50)"),
        (-0.0001, 0.01, "0.000(10)"),
    ],
)
def test_concise_notation(value, u, text):
    "By hand, from the rule: two digits of u, the value to the same place."
    assert rounded(value, u) == text


@pytest.mark.parametrize("u", [math.nan, math.inf, 0.0, -1.0])
def test_without_a_usable_u_the_value_stands_alone(u):
    assert rounded(3.84, u) == "3.84"  # no zeros that nobody measured


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_a_value_that_is_none_has_no_bracket(value):
    assert "(" not in rounded(value, 0.1)


@given(value=finite, u=positive)
def test_what_is_printed_reads_back_within_half_a_unit_of_the_last_digit(value, u):
    whole, inside = re.fullmatch(r"(-?[\d.]+)\((\d+)\)", rounded(value, u)).groups()
    decimals = len(whole.partition(".")[2])
    unit = Decimal(1).scaleb(-decimals)
    read_u = Decimal(inside) * (unit if decimals else 1)
    place = max(unit, Decimal(1).scaleb(read_u.adjusted() - 1))  # of the second digit of u
    assert abs(Decimal(whole) - Decimal(repr(value))) <= place / 2
    assert abs(read_u - Decimal(repr(u))) <= Decimal("0.051") * read_u  # two digits: half of 1 in 10 at worst
    assert len(inside.rstrip("0")) <= 2


@given(value=finite, u=positive)
def test_value_and_u_end_at_the_same_place(value, u):
    texts = value_and_u(value, u)
    assert len({len(text.partition(".")[2]) for text in texts}) == 1


def test_an_interval_is_rounded_like_its_value():
    assert interval_at(17.1724, 17.2698, 0.025) == ("17.172", "17.270")


@pytest.mark.parametrize(("p", "text"), [(0.05, "0.050"), (0.0, "below 10⁻³⁰⁰"), (1.0, "1.0"), (3e-7, "3.0×10⁻⁷")])
def test_a_p_value_is_never_printed_as_nothing(p, text):
    assert probability(p) == text


@pytest.mark.parametrize(("x", "text"), [(1234567.0, "1234567"), (99.96, "100"), (-0.5, "-0.500"), (2.5e8, "2.50×10⁸")])
def test_significant_digits(x, text):
    assert significant(x, 3) == text
