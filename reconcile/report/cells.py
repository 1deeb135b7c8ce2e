"""A table of the page, and the texts of its cells."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from markupsafe import Markup

from reconcile.report.markup import minus
from reconcile.report.rounding import NOTHING, at_place, interval_at, probability, rounded

Cell = str | Markup
Line = tuple[Cell, ...]
MOST_ROWS = 400  # of one table that the page shows; the rest stands in tables/
TONES = {
    "agrees": "good",
    "satisfactory": "good",
    "closes": "good",
    "questionable": "fair",
    "no limit": "fair",
    "too weak": "fair",
    "disagrees": "poor",
    "unsatisfactory": "poor",
    "does not close": "poor",
}


@dataclass(frozen=True, slots=True)
class View:
    """A table ready to be printed; the first cell of a row names it."""

    caption: str
    heads: Line
    numeric: frozenset[int]  # positions of columns set to the right
    lines: Sequence[Line]
    note: str = ""
    left_out: int = 0  # rows that stand in tables/ only
    marked: frozenset[int] = frozenset()  # positions of rows that deserve attention


def view(
    caption: str,
    heads: Iterable[Cell],
    numeric: Iterable[int],
    lines: Sequence[Line],
    note: str = "",
    marked: Iterable[int] = (),
) -> View:
    """A table of at most `MOST_ROWS` rows."""
    left_out = max(0, len(lines) - MOST_ROWS)
    return View(caption, tuple(heads), frozenset(numeric), lines[:MOST_ROWS], note, left_out, frozenset(marked))


def word(text: object) -> Markup:
    """A verdict with its tone, told by a sign as well as by a colour."""
    tone = TONES.get(str(text), "none")
    return Markup('<span class="word {}">{}</span>').format(tone, str(text))


def pair(value: float, u: float) -> str:
    """A value with its uncertainty in brackets and a true minus."""
    return minus(rounded(value, u))


def span(low: float, high: float, u: float) -> str:
    """An interval, rounded as its value is."""
    if not (math.isfinite(low) and math.isfinite(high)):
        return NOTHING
    return minus(" to ".join(interval_at(low, high, u)))


def freedom(value: float) -> str:
    """Degrees of freedom; beyond 9999 as good as infinite, and 1 stands for fewer as well."""
    if math.isnan(value):
        return NOTHING
    if value <= 1:
        return "at most 1"
    if value > 9999:
        return "∞"
    return f"{value:.0f}" if value >= 10 else f"{value:.1f}"


def text(value: object) -> str:
    """A text, empty where it is missing."""
    return "" if value is None or (isinstance(value, float) and math.isnan(value)) else str(value)


def percent(share: float) -> str:
    """A share in whole per cent."""
    return f"{100 * share:.0f}\N{NO-BREAK SPACE}%" if math.isfinite(share) else NOTHING


def two_places(value: float) -> str:
    """A pure number with two decimals, as scores are given."""
    return minus(at_place(value, -2))


def p_value(p: float) -> str:
    """A p-value, or a dash."""
    return probability(p) if math.isfinite(p) else NOTHING
