"""Colours of the figures, told apart also by eyes that miss red or green; each with a line style or marker besides."""

from __future__ import annotations

import re

LIGHT: dict[str, str] = {  # role ─► colour on paper
    "ink": "#1f2b33",
    "faint": "#8b949b",
    "grid": "#dfe3e5",
    "paper": "#fdfcf9",
    "model": "#0b5c6b",
    "band": "#b9d8dc",
    "law": "#8f3f71",
    "mark": "#b4690e",
    "good": "#e3eee9",
    "fair": "#f6ecd6",
}


def themed(svg: str) -> str:
    """The drawing with each of our colours replaced by a variable of the page, so that it follows a dark page.

    Examples
    --------
    >>> themed('<path style="stroke: #0b5c6b"/>')
    '<path style="stroke: var(--fig-model, #0b5c6b)"/>'
    """
    role = {colour: name for name, colour in LIGHT.items()}

    def variable(match: re.Match[str]) -> str:
        colour = match.group(0).lower()
        return f"var(--fig-{role[colour]}, {colour})" if colour in role else match.group(0)

    return re.sub(r"#[0-9a-fA-F]{6}\b", variable, svg)
