"""Figures: one a salt, measured runs against the model, and one of all scores; SVG with the same bytes every time."""

from __future__ import annotations

import io
from typing import Any, cast

import matplotlib as mpl
import numpy as np
import pandas as pd
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from numpy.typing import NDArray

from reconcile.report.figure_style import STYLE, WIDTH, printable
from reconcile.report.kinds import kinds
from reconcile.report.names import file_names
from reconcile.report.palette import LIGHT
from reconcile.report.results import Results, rows
from reconcile.report.scores_figure import scores

SCORES = "scores"  # name of the figure of all scores
MOST_POINTS = 600  # of one salt that a figure draws; evenly picked beyond
MOST_FACTOR = 12.8  # times u: a wider interval leaves the figure (Student's t with one degree of freedom)
Floats = NDArray[np.float64]
_MARKERS = ("o", "s", "^", "D", "v", "P")
_LEGEND = (
    "model",
    "its 95 % band",
    "at infinite dilution",
    "Debye–Hückel alone",
    "straight line in m",
    "straight line in √m",
)


def draw(results: Results) -> dict[str, str]:
    """All drawings.

    Parameters
    ----------
    results : Results
        Of the chain.

    Returns
    -------
    drawings : dict
        Name of the file without ending ─► SVG text. A salt that no run dissolves has none: a heat of dilution is no
        enthalpy of solution, and has no place on its axis.
    """
    names = file_names([str(salt) for salt in results.salts["salt"]])
    runs = dict(iter(_drawable(results).groupby("salt", sort=False)))
    curves = dict(iter(results.curves.groupby("salt", sort=False)))
    none = results.curves.iloc[:0]
    order = _calorimeters(results.runs)
    drawings: dict[str, str] = {}
    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update(cast(Any, STYLE))
        for salt in rows(results.salts):
            key = salt["salt"]
            if key not in runs:
                continue
            figure = _salt(salt, runs[key], curves.get(key, none), order)
            drawings[names[key]] = _svg(figure, f"{key}: enthalpy of solution against molality")
        if len(results.comparison):
            name = SCORES
            while name in drawings:
                name += "_"
            drawings[name] = _svg(scores(results.comparison), "Scores against published values")
    return drawings


def _drawable(results: Results) -> pd.DataFrame:
    """Runs with a place in a figure: dissolutions; an addition only where the model says what water would have done."""
    kind = kinds(results.campaign)
    limited = results.salts["salt"][np.isfinite(results.salts["standard_enthalpy"].to_numpy(float))]
    return results.runs[~kind.dilution & (~kind.addition | results.runs["salt"].isin(limited).to_numpy())]


def _svg(figure: Figure, title: str) -> str:
    buffer = io.StringIO()
    figure.savefig(buffer, format="svg", metadata={"Date": None, "Creator": "reconcile", "Title": printable(title)})
    return buffer.getvalue()


def _calorimeters(runs: pd.DataFrame) -> tuple[str, ...]:
    """Names in the campaign's order, so that a calorimeter has the same marker in every figure."""
    return tuple(dict.fromkeys(runs["calorimeter"].fillna("").astype(str)))


def _salt(salt: dict[str, Any], runs: pd.DataFrame, curve: pd.DataFrame, order: tuple[str, ...]) -> Figure:
    """One salt: runs and model; below them, where there is a limit, the runs brought to infinite dilution."""
    limit = float(salt["standard_enthalpy"])
    known = bool(np.isfinite(limit))
    figure = Figure(figsize=(WIDTH, 5.6 if known else 4.0), layout="constrained")
    panels = list(
        figure.subplots(2, 1, sharex=True, gridspec_kw={"height_ratios": [2.6, 1]}) if known else [figure.subplots()]
    )
    low, high = float(salt["interval_low"]), float(salt["interval_high"])
    most = MOST_FACTOR * float(salt["u"])
    if high - low > 2 * most:
        low, high = limit - most, limit + most
    if len(runs) > MOST_POINTS:
        runs = runs.iloc[np.linspace(0, len(runs) - 1, MOST_POINTS).round().astype(int)]
    if len(curve):
        _curves(panels[0], curve, float(salt["coverage_factor"]))
    if known:
        above, below = panels
        above.plot([0, 0], [low, high], color=LIGHT["law"], lw=2.4, solid_capstyle="butt", zorder=5, clip_on=False)
        above.plot([0], [limit], "D", ms=6, color=LIGHT["law"], zorder=6, clip_on=False, label="at infinite dilution")
        below.axhspan(low - limit, high - limit, color=LIGHT["band"], lw=0)
        below.axhline(0, color=LIGHT["model"], lw=1.1)
    _points(panels, runs, curve, (limit, low, high), order)
    _frame(panels, runs, curve)
    handles = sorted(zip(*panels[0].get_legend_handles_labels(), strict=True), key=_order)
    figure.legend(
        [handle for handle, _ in handles],
        [label for _, label in handles],
        loc="outside lower center",
        ncols=3,
        handlelength=2.2,
        columnspacing=1.4,
    )
    return figure


def _order(entry: tuple[Any, str]) -> int:
    return _LEGEND.index(entry[1]) if entry[1] in _LEGEND else len(_LEGEND)


def _curves(axes: Axes, curve: pd.DataFrame, factor: float) -> None:
    x = np.sqrt(curve["molality"].to_numpy(float))
    model, u = curve["enthalpy"].to_numpy(float), curve["u"].to_numpy(float)
    half = u * (min(factor, MOST_FACTOR) if np.isfinite(factor) else 2.0)
    axes.fill_between(x, model - half, model + half, color=LIGHT["band"], lw=0, zorder=1, label="its 95 % band")
    axes.plot(x, model, color=LIGHT["model"], lw=1.6, zorder=3, label="model")
    styles = (
        ("limiting_law", LIGHT["law"], (0, (5, 2)), 1.2, "Debye–Hückel alone"),
        ("line_m", LIGHT["faint"], (0, (1, 1.6)), 1.0, "straight line in m"),
        ("line_root", LIGHT["faint"], (0, (4, 1.5, 1, 1.5)), 1.0, "straight line in √m"),
    )
    for key, colour, dashes, width, label in styles:
        y = curve[key].to_numpy(float)
        if np.isfinite(y).any():
            axes.plot(x, y, color=colour, ls=dashes, lw=width, zorder=2, label=label)


def _points(
    panels: list[Axes],
    runs: pd.DataFrame,
    curve: pd.DataFrame,
    span: tuple[float, float, float],
    order: tuple[str, ...],
) -> None:
    """Runs by calorimeter; each at its own molality, brought to the reference temperature as the model does."""
    limit = span[0]
    molality = runs["molality / (mol/kg)"].to_numpy(float)
    residual = runs["standard_enthalpy / (kJ/mol)"].to_numpy(float) - limit
    height = runs["enthalpy / (kJ/mol)"].to_numpy(float)
    if len(curve) and np.isfinite(limit):
        on_curve = np.interp(np.sqrt(molality), np.sqrt(curve["molality"]), curve["enthalpy"]) + residual
        height = np.where(np.isfinite(on_curve), on_curve, height)
    model = np.concatenate([curve["enthalpy"].to_numpy(float), span])
    u = runs["u(standard_enthalpy) / (kJ/mol)"].to_numpy(float)
    u = np.where(np.isfinite(u), u, runs["u(enthalpy) / (kJ/mol)"].to_numpy(float))
    _panel(panels[0], (molality, height, u), runs, model, order)
    for below in panels[1:]:
        _panel(below, (molality, residual, u), runs, np.array(span) - limit, order)
    if not runs["included"].all():
        panels[0].plot([], [], "o", ms=4.6, color=LIGHT["mark"], mfc=LIGHT["paper"], label="excluded")


def _panel(
    axes: Axes, points: tuple[Floats, Floats, Floats], runs: pd.DataFrame, model: Floats, order: tuple[str, ...]
) -> None:
    """One panel's runs; its limits go by model and included runs (by all where none is); others beyond are arrows."""
    molality, height, u = points
    included = runs["included"].to_numpy(bool)
    bar = np.where(np.isfinite(u), u, 0.0)
    inside = included if included.any() else ~included
    usual = np.minimum(bar, float(np.median(bar[inside])))
    reach = np.concatenate([(height - usual)[inside], (height + usual)[inside], model])
    reach = reach[np.isfinite(reach)] if np.isfinite(reach).any() else np.array([0.0, 1.0])
    room = 0.1 * float(np.ptp(reach)) or 0.05
    low, high = float(reach.min()) - room, float(reach.max()) + room
    axes.set_ylim(low, high)
    calorimeter = runs["calorimeter"].fillna("").astype(str).to_numpy()
    x = np.sqrt(molality)
    for number, name in enumerate(order):
        shape = _MARKERS[number % len(_MARKERS)]
        label = f"calorimeter {printable(name)[:24]}" if name else "runs"
        for kept in (True, False):
            here = (calorimeter == name) & (included == kept)
            if here.any():
                colour = LIGHT["ink"] if kept else LIGHT["mark"]
                filling = colour if kept and number == 0 else LIGHT["paper"]
                axes.errorbar(
                    x[here],
                    height[here],
                    yerr=bar[here] if bar.any() else None,
                    fmt=shape,
                    ms=4.6,
                    color=colour,
                    mfc=filling,
                    mew=1.0,
                    elinewidth=0.8,
                    zorder=4,
                    label=label if kept else None,
                )
    for beyond, edge, arrow in ((height > high, high, "^"), (height < low, low, "v")):
        if beyond.any():
            at_edge = np.full(int(beyond.sum()), edge)
            drawn = axes.plot(x[beyond], at_edge, arrow, ms=7, color=LIGHT["mark"], zorder=5, clip_on=False)
            drawn[0].set_in_layout(False)


def _frame(panels: list[Axes], runs: pd.DataFrame, curve: pd.DataFrame) -> None:
    measured = runs["molality / (mol/kg)"].to_numpy(float)
    most = float(np.nanmax([*measured, *curve["molality"].to_numpy(float)[-1:], 1e-6]))
    right = np.sqrt(most) * 1.04
    panels[0].set_xlim(-0.025 * right, right)
    ticks = _round_molalities(most)
    panels[-1].set_xticks(np.sqrt(ticks), [f"{m:g}" for m in ticks])
    panels[-1].set_xlabel("molality / (mol/kg), spaced by its square root")
    panels[0].set_ylabel("enthalpy of solution / (kJ/mol)")
    for below in panels[1:]:
        below.set_ylabel("run − limit\n/ (kJ/mol)")
    for axes in panels:
        axes.grid(axis="y", color=LIGHT["grid"], lw=0.6, zorder=0)
        axes.set_axisbelow(True)


def _round_molalities(most: float) -> list[float]:
    """Round molalities from 0 to ``most``, far enough apart for their labels on a square-root scale.

    Examples
    --------
    >>> _round_molalities(1.1)
    [0.0, 0.01, 0.05, 0.1, 0.2, 0.3, 0.5, 0.7, 1.0]
    """
    steps = (1, 2, 3, 5, 7)
    round_ones = [m * 10.0**power for power in range(1, -7, -1) for m in reversed(steps)]
    kept: list[float] = []
    for m in [x for x in round_ones if x <= most]:
        if np.sqrt(m) > 0.08 * np.sqrt(most) and all(
            abs(np.sqrt(m) - np.sqrt(k)) > 0.085 * np.sqrt(most) for k in kept
        ):
            kept.append(float(f"{m:.1g}"))
    return [0.0, *sorted(kept)]
