"""Small pieces of HTML: formulae with their subscripts, numbers with a true minus."""

from __future__ import annotations

import re

from markupsafe import Markup, escape

from reconcile.chemistry import IONS

_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")


def formula(text: object) -> Markup:
    """A formula or ion with subscripts and its charge raised; anything else is only escaped.

    Examples
    --------
    >>> print(formula("CaCl2·6H2O"), formula("SO4-2"), formula("<b>"))
    CaCl<sub>2</sub>·6H<sub>2</sub>O SO<sub>4</sub><sup>2−</sup> &lt;b&gt;
    >>> print(formula("(NH4)2SO4"))
    (NH<sub>4</sub>)<sub>2</sub>SO<sub>4</sub>
    """
    whole = str(text)
    if not re.fullmatch(r"[A-Z(][A-Za-z0-9()·.+\-]*(\((cr|aq|l|g|s)\))?", whole):
        return escape(whole)
    found = re.fullmatch(r"(.+?)([+-])(\d*)(\((?:cr|aq|l|g|s)\))?", whole)
    body, charge, phase = (
        (found[1], found[3] + ("+" if found[2] == "+" else "−"), found[4] or "") if found else (whole, "", "")
    )
    subscripted = re.sub(r"(?<=[A-Za-z)])(\d+(?:\.\d+)?)", r"<sub>\1</sub>", str(escape(body)))
    raised = f"<sup>{escape(charge)}</sup>" if charge else ""
    return Markup(f"{subscripted}{raised}{escape(phase)}")


def lowered(text: str) -> str:
    """A formula with Unicode subscripts, for where there is no HTML.

    Examples
    --------
    >>> lowered("CaCl2·6H2O")
    'CaCl₂·6H₂O'
    """
    return re.sub(r"(?<=[A-Za-z)])\d+", lambda found: found[0].translate(_SUBSCRIPTS), text)


def minus(text: object) -> str:
    """A number's text with the minus sign in place of the hyphen.

    Examples
    --------
    >>> minus("-36.9(12)")
    '−36.9(12)'
    """
    return str(text).replace("-", "−")


def list_of_formulae(text: object) -> Markup:
    """A sentence in which every word that is a salt's formula or a known ion has its subscripts and charge."""
    parts = re.split(r"(\s+)", str(text))
    return Markup("").join(_word(part) for part in parts)


def _word(part: str) -> Markup:
    core = part.rstrip(",.;:")
    if core in IONS or (
        re.fullmatch(r"(?:[A-Z][a-z]?\d*|\((?:[A-Z][a-z]?\d*)+\)\d+|·\d*(?:\.\d+)?)+", core)
        and re.search(r"\d", core)
        and re.search(r"[A-Z][A-Za-z(]", core)
    ):
        return formula(core) + escape(part[len(core) :])
    return escape(part)
