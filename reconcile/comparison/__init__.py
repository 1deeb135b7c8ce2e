"""Scores of the laboratory's values against published ones, and the account of all that was found."""

from reconcile.comparison.analysis import Analysis
from reconcile.comparison.scores import compare, e_n_score, verdict_of_zeta, zeta_score

__all__ = ["Analysis", "compare", "e_n_score", "verdict_of_zeta", "zeta_score"]
