"""How every figure looks, whatever the machine's own settings say."""

from __future__ import annotations

import re
from typing import Any

from reconcile.report.palette import LIGHT

WIDTH = 6.1  # inches
STYLE: dict[str, Any] = {
    "svg.hashsalt": "reconcile",
    "svg.fonttype": "none",
    "font.family": "sans-serif",
    "font.sans-serif": ["DejaVu Sans", "Verdana", "Arial"],
    "font.size": 9.5,
    "text.parse_math": False,  # a $ in a name is a dollar
    "text.color": LIGHT["ink"],
    "axes.edgecolor": LIGHT["ink"],
    "axes.labelcolor": LIGHT["ink"],
    "axes.facecolor": "none",
    "axes.linewidth": 0.7,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.unicode_minus": True,
    "axes.formatter.useoffset": False,
    "xtick.color": LIGHT["ink"],
    "ytick.color": LIGHT["ink"],
    "figure.facecolor": "none",
    "savefig.facecolor": "none",
    "legend.frameon": False,
    "legend.fontsize": 8.5,
}


def printable(text: str) -> str:
    """The text without control characters, which no XML may hold."""
    return re.sub(r"[\x00-\x1f\x7f-\x9f\ud800-\udfff\ufffe\uffff]", "�", text)
