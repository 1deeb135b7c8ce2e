"""The figure of all scores against published values."""

from __future__ import annotations

import numpy as np
import pandas as pd
from matplotlib.figure import Figure

from reconcile.report.figure_style import WIDTH, printable
from reconcile.report.markup import lowered
from reconcile.report.palette import LIGHT

MOST_SCORES = 80  # drawn


def scores(comparison: pd.DataFrame) -> Figure:
    """ζ of every comparison on one axis, the two limits of ISO 13528 shaded."""
    table = comparison[np.isfinite(comparison["zeta"].to_numpy(float))].head(MOST_SCORES)
    zeta = table["zeta"].to_numpy(float)
    figure = Figure(figsize=(WIDTH, 1.15 + 0.24 * max(len(table), 1)), layout="constrained")
    axes = figure.subplots()
    reach = max(4.0, min(float(np.abs(zeta).max(initial=0.0)) * 1.08, 12.0))
    axes.axvspan(-3, 3, color=LIGHT["fair"], lw=0, zorder=0)
    axes.axvspan(-2, 2, color=LIGHT["good"], lw=0, zorder=0)
    axes.axvline(0, color=LIGHT["model"], lw=1.0, zorder=1)
    place = np.arange(len(table))
    shown = np.clip(zeta, -reach, reach)
    for inside, marker in (
        (np.abs(zeta) <= 2, "o"),
        ((np.abs(zeta) > 2) & (np.abs(zeta) < 3), "s"),
        (np.abs(zeta) >= 3, "D"),
    ):
        colour = LIGHT["ink"] if marker == "o" else LIGHT["mark"]
        axes.plot(shown[inside], place[inside], marker, color=colour, ms=5, zorder=3, clip_on=False)
    for x, y, z in zip(shown.tolist(), place.tolist(), zeta.tolist(), strict=True):
        if abs(z) > reach:
            axes.text(x * 0.96, y, f"{z:.0f}", ha="right" if z > 0 else "left", va="center")
    axes.set_yticks(place, [lowered(printable(str(salt))) for salt in table["salt"]])
    axes.set_ylim(len(table) - 0.4, -0.6)
    axes.set_xlim(-reach, reach)
    axes.tick_params(axis="y", length=0)
    axes.set_xlabel("ζ = (measured − published) / its standard uncertainty")
    return figure
