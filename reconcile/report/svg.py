"""A drawing made fit to stand inside a page beside others."""

from __future__ import annotations

import re

from markupsafe import escape


def inlined(svg: str, prefix: str, label: str) -> str:
    """SVG without prologue, metadata and style, its ids prefixed, and read aloud as one picture.

    Parameters
    ----------
    svg : str
        A whole file, as matplotlib writes it.
    prefix : str
        Of all its ids, so that no two drawings of a page share one.
    label : str
        Alternative text.

    Returns
    -------
    svg : str

    Examples
    --------
    >>> print(inlined('<?xml?><svg width="3pt" height="2pt"><g id="a"/><use xlink:href="#a"/></svg>', "x", "A & B"))
    <svg role="img" aria-label="A &amp; B"><g id="x-a"/><use xlink:href="#x-a"/></svg>
    """
    svg = svg[svg.index("<svg") :].strip()
    svg = re.sub(r"\s*<(metadata|style)\b.*?</\1>", "", svg, flags=re.S)
    svg = re.sub(r"\s*<(title|defs)>\s*</\1>|\s*<title>.*?</title>", "", svg, flags=re.S)
    svg = re.sub(r'\bid="', f'id="{prefix}-', svg)
    svg = re.sub(r'(href="#|url\(#)', rf"\g<1>{prefix}-", svg)
    svg = re.sub(r'(<svg\b[^>]*?) width="[^"]*"', r"\1", svg, count=1)
    svg = re.sub(r'(<svg\b[^>]*?) height="[^"]*"', r"\1", svg, count=1)
    return svg.replace("<svg", f'<svg role="img" aria-label="{escape(label)}"', 1)
