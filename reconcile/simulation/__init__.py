"""Campaigns with known truth: the demo, the studies, the tests and the benchmarks."""

from reconcile.simulation.demo import demo, demo_truth
from reconcile.simulation.salts import many_salts
from reconcile.simulation.truth import Truth, draw_truth, enthalpy_rows, heat_rows

__all__ = ["Truth", "demo", "demo_truth", "draw_truth", "enthalpy_rows", "heat_rows", "many_salts"]
