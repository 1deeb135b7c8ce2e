"""A value and its uncertainty, rounded together."""

from __future__ import annotations

import math
from decimal import Decimal, localcontext

NOTHING = "–"  # printed where there is no number
_PRECISION = 700  # decimal digits: more than any two finite floats lie apart
_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def place_of(u: float, digits: int = 2) -> int | None:
    """Decimal place of the last digit kept when ``u`` is given with ``digits`` digits.

    Parameters
    ----------
    u : float
        Standard uncertainty, any unit.
    digits : int
        Significant digits of u, 1 or more.

    Returns
    -------
    place : int or None
        −3 for thousandths; None where u is not a positive finite number.

    Examples
    --------
    >>> place_of(0.0174), place_of(0.0996), place_of(12000.0), place_of(float("nan"))
    (-3, -2, 3, None)
    """
    if not (math.isfinite(u) and u > 0):
        return None
    exact = Decimal(repr(float(u)))
    place = exact.adjusted() - digits + 1
    if at_place_decimal(exact, place).adjusted() - place >= digits:  # 0.0996 becomes 0.10, not 0.100
        place += 1
    return place


def at_place_decimal(x: Decimal, place: int) -> Decimal:
    """``x`` rounded half to even at the decimal ``place``."""
    with localcontext() as context:
        context.prec = _PRECISION
        return x.quantize(Decimal(1).scaleb(place))


def at_place(x: float, place: int) -> str:
    """Text of ``x`` rounded at the decimal ``place``; a dash where there is no number.

    Examples
    --------
    >>> at_place(17.5839, -3), at_place(1234567.0, 3), at_place(-0.0001, -2), at_place(float("nan"), -2)
    ('17.584', '1235000', '0.00', '–')
    """
    if not math.isfinite(x):
        return NOTHING
    shown = at_place_decimal(Decimal(repr(float(x))), place)
    return f"{abs(shown) if shown == 0 else shown:f}"


def value_and_u(value: float, u: float, digits: int = 2) -> tuple[str, str]:
    """Texts of a value and of its uncertainty, both ending at the same place.

    Where u says nothing about the place (0, infinite, missing) the value gets at most six significant digits.

    Examples
    --------
    >>> value_and_u(17.58394, 0.01712)
    ('17.584', '0.017')
    >>> value_and_u(17.58394, float("nan"))
    ('17.5839', '–')
    """
    place = place_of(u, digits)
    if place is None:
        return _alone(value), "0" if u == 0 else NOTHING
    return at_place(value, place), at_place(u, place)


def rounded(value: float, u: float, digits: int = 2) -> str:
    """A value with its standard uncertainty in brackets, in units of the last digit shown.

    Parameters
    ----------
    value, u : float
        The quantity and its standard uncertainty, same unit; neither needs to be finite.
    digits : int
        Significant digits of u.

    Returns
    -------
    text : str
        ``17.584(17)``; a u of tens and more is written out, ``1235000(12000)``; the value alone where there is no u.

    References
    ----------
    Two digits of u, and the bracket: JCGM 100:2008, 7.2.2 and 7.2.6 (from memory).

    Examples
    --------
    >>> rounded(17.58394, 0.01712), rounded(-36.9, 1.24), rounded(1234567.0, 12345.0), rounded(0.2789, 0.0)
    ('17.584(17)', '-36.9(12)', '1235000(12000)', '0.2789')
    """
    place = place_of(u, digits)
    if place is None or not math.isfinite(value):
        return _alone(value)
    width = at_place_decimal(Decimal(repr(float(u))), place)
    inside = width.scaleb(-place) if place <= 0 else width
    return f"{at_place(value, place)}({int(inside)})"


def _alone(value: float) -> str:
    """A value that has no u: six significant digits, without zeros that nobody measured."""
    shown = significant(value, 6)
    return shown.rstrip("0").rstrip(".") if "." in shown and "×" not in shown else shown


def interval_at(low: float, high: float, u: float) -> tuple[str, str]:
    """Texts of the two ends of an interval, at the place of the last digit of u."""
    place = place_of(u)
    if place is None:
        return significant(low, 4), significant(high, 4)
    return at_place(low, place), at_place(high, place)


def significant(x: float, digits: int = 3) -> str:
    """Text of ``x`` with so many significant digits; powers of ten below 10⁻⁴ and from 10⁷; a dash for no number.

    Examples
    --------
    >>> significant(0.01234, 2), significant(3.0, 3), significant(1.234e-9, 2), significant(float("inf"))
    ('0.012', '3.00', '1.2×10⁻⁹', '∞')
    """
    if math.isinf(x):
        return "∞" if x > 0 else "-∞"
    if math.isnan(x):
        return NOTHING
    if x == 0:
        return "0"
    mantissa, exponent = f"{x:.{digits - 1}e}".split("e")
    power = int(exponent)
    if -4 <= power < 7:
        return at_place(x, min(power - digits + 1, 0))
    return f"{mantissa}×10{str(power).translate(_RAISED)}"


def probability(p: float) -> str:
    """Text of a p-value: two significant digits, never 0.

    Examples
    --------
    >>> probability(0.2713), probability(3.2e-11), probability(0.0), probability(0.9996)
    ('0.27', '3.2×10⁻¹¹', 'below 10⁻³⁰⁰', '1.0')
    """
    if p < 1e-300:
        return "below 10⁻³⁰⁰"
    return significant(p, 2)
